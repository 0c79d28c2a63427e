package sources

import (
	"math"
	"slices"
)

// Parameters of the linear fit of a power scan, in which the singles of an arm
// are a Pᵏ + b P + n and the coincidences c Pᵏ; those of Alice's arm, Bob's one
// place on.
const (
	linearPumped     = 0 // a
	linearPower      = 2 // b
	linearConstant   = 4 // n
	linearBoth       = 6 // c
	linearParameters = 7
)

// linear returns the parameters of the linear fit. Its deviance is convex, so
// that it may start anywhere. With order 1 there is no b.
func (m *scanModel) linear() []float64 {
	f := countFit{
		counts: m.fit.counts, model: m.expectLinear,
		lower: make([]float64, linearParameters), upper: slices.Repeat([]float64{math.Inf(1)}, linearParameters),
	}
	start := make([]float64, linearParameters)
	time, power, pumped := sumOfProducts(m.seconds, nil), sumOfProducts(m.seconds, m.power), sumOfProducts(m.seconds, m.pumped)
	for arm := range 2 {
		third := m.total(arm) / 3
		start[linearPumped+arm], start[linearPower+arm], start[linearConstant+arm] = third/pumped, third/power, third/time
		if m.options.Order == 1 {
			f.upper[linearPower+arm] = 0
		}
	}
	start[linearBoth] = m.total(2) / pumped
	return f.run(start).theta
}

// total returns all counts of a kind (see scanAt).
func (m *scanModel) total(kind int) float64 {
	sum := 0.0
	for i := range m.seconds {
		sum += m.fit.counts[scanAt(i, kind)]
	}
	return sum
}

// sumOfProducts returns Σ a b, with b nil Σ a.
func sumOfProducts(a, b []float64) float64 {
	sum := 0.0
	for i, x := range a {
		if b != nil {
			x *= b[i]
		}
		sum += x
	}
	return sum
}

// expectLinear is the model of the linear fit.
func (m *scanModel) expectLinear(theta, mean []float64, slopes [][]float64) {
	add := func(at, parameter int, factor float64) {
		mean[at] += factor * theta[parameter]
		if slopes != nil {
			slopes[parameter][at] = factor
		}
	}
	for i, t := range m.seconds {
		for arm := range 2 {
			at := scanAt(i, arm)
			mean[at] = 0
			add(at, linearPumped+arm, t*m.pumped[i])
			add(at, linearPower+arm, t*m.power[i])
			add(at, linearConstant+arm, t)
		}
		at := scanAt(i, 2)
		mean[at] = 2 * m.chance[i]
		add(at, linearBoth, t*m.pumped[i])
	}
}
