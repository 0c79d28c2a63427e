package keyrate

import (
	"math"
	"math/rand/v2"
	"testing"
)

// turned returns the chances that n photons in one polarisation and m in the
// other, seen in a frame turned so that a lone photon changes detectors with
// probability e, are p and n+m-p; p is the index. The creation operators
// turn: x^n y^m becomes (c x + s y)^n (c y - s x)^m, c² = 1-e, s² = e, and the
// factor of x^p y^(n+m-p), times √(p! (n+m-p)!/(n! m!)), is the amplitude.
func turned(n, m int, e float64) []float64 {
	c, s := math.Sqrt(1-e), math.Sqrt(e)
	poly := make([]float64, n+m+1) // by the power of x
	poly[0] = 1
	times := func(x, y float64) {
		for p := len(poly) - 1; p > 0; p-- {
			poly[p] = poly[p]*y + poly[p-1]*x
		}
		poly[0] *= y
	}
	for range n {
		times(c, s)
	}
	for range m {
		times(-s, c)
	}
	factorial := func(k int) float64 { return math.Gamma(float64(k) + 1) }
	for p, a := range poly {
		poly[p] = a * a * factorial(p) * factorial(n+m-p) / (factorial(n) * factorial(m))
	}
	return poly
}

// oneThermalMode sums over the photon numbers n and m of the two polarisations
// of one Schmidt mode: thermal, equal at both arms, Bob's turned.
func oneThermalMode(s Slot) (all pattern) {
	const mostPairs = 30 // 1e-16 of the modes here hold more
	mean := s.Pairs / (2 * s.Modes)
	numbers := thermalNumbers(1, mean)
	missed := func(k int, eta float64) float64 { return math.Pow(1-eta, float64(k)) }
	for n := range mostPairs {
		for m := range mostPairs - n {
			for p, chance := range turned(n, m, s.Error) {
				chance *= numbers[n] * numbers[m]
				clicks := lone(1, 1-missed(n, s.Efficiency[Alice])).either(lone(2, 1-missed(m, s.Efficiency[Alice])))
				clicks = clicks.either(lone(4, 1-missed(p, s.Efficiency[Bob])))
				clicks = clicks.either(lone(8, 1-missed(n+m-p, s.Efficiency[Bob])))
				for i, x := range clicks {
					all[i] += chance * x
				}
			}
		}
	}
	return all
}

// Whole numbers of modes at an error: each Schmidt mode is independent.
func TestTurnedModesAgainstPhotonNumbers(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 1))
	rows := 12
	if testing.Short() {
		rows = 3
	}
	for i := range rows {
		s := anySlot(r)
		s.Modes = []float64{1, 2, 3}[i%3]
		s.Pairs = min(s.Pairs, 0.7*s.Modes) // so that mostPairs is enough
		mode, all := oneThermalMode(s), nothing
		for range int(s.Modes) {
			all = all.either(mode)
		}
		q, qber := all.score(s.Noise)
		agrees(t, s, q, qber)
	}
}

// One pair changes detectors with probability e; two photons of one
// polarisation do so independently; one photon of each keeps to its own
// detectors with the amplitude c² - s².
func TestTurnedPhotons(t *testing.T) {
	const e = 0.1
	for _, row := range []struct {
		n, m int
		want []float64
	}{
		{1, 0, []float64{e, 1 - e}},
		{0, 1, []float64{1 - e, e}},
		{2, 0, []float64{e * e, 2 * e * (1 - e), (1 - e) * (1 - e)}},
		{1, 1, []float64{2 * e * (1 - e), (1 - 2*e) * (1 - 2*e), 2 * e * (1 - e)}},
	} {
		for p, got := range turned(row.n, row.m, e) {
			if !near(got, row.want[p], 1e-14) {
				t.Errorf("%d and %d photons: %v in the first with probability %v, want %v", row.n, row.m, p, got, row.want[p])
			}
		}
	}
}

// Ever more modes become Poisson.
func TestManyModesArePoisson(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 1))
	for range 12 {
		s := anySlot(r)
		q, qber := s.Click()
		for _, modes := range []float64{1e3, 1e5} {
			s.Modes = modes
			tolerance := s.Pairs / modes * 2 // g² - 1 of the slot is 1/(2 M)
			many, manyQBER := s.Click()
			if !near(many, q, tolerance) || !near(manyQBER, qber, tolerance) {
				t.Errorf("%+v: gain %v, QBER %v; Poisson %v, %v", s, many, manyQBER, q, qber)
			}
		}
	}
}
