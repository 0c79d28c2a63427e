package report

import (
	"math"

	"pairspan/scenarios/plan"
)

// tick is one mark of a scale.
type tick struct {
	At    float64 // where on the axis
	Label string
}

// niceStep returns the step of 1, 2 or 5 times a power of ten that makes at
// most so many steps of a span.
func niceStep(span float64, most int) float64 {
	if !(span > 0) || math.IsInf(span, 1) {
		return 1
	}
	rough := span / float64(max(1, most))
	power := math.Pow(10, math.Floor(math.Log10(rough)))
	for _, m := range []float64{1, 2, 5} {
		if m*power >= rough*(1-1e-9) {
			return m * power
		}
	}
	return 10 * power
}

// multiples lists the multiples of the step from lo to hi.
func multiples(lo, hi, step float64) []float64 {
	var out []float64
	const slack = 1e-9
	for i := math.Ceil(lo/step - slack); i*step <= hi*(1+slack) && len(out) < 200; i++ {
		out = append(out, i*step)
	}
	return out
}

// kmTicks marks distances from 0 to end.
func kmTicks(end float64, most int) []tick {
	var out []tick
	for _, v := range multiples(0, end, niceStep(end, most)) {
		out = append(out, tick{v, digits(v, 4)})
	}
	return out
}

// lossTicks marks the distances up to end at which the optical loss of both
// arms together comes to round figures, read between the points of the curve.
// It is empty where the loss does not grow.
func lossTicks(curve []plan.Point, end float64, most int) []tick {
	for len(curve) > 2 && curve[len(curve)-2].DistanceKm >= end {
		curve = curve[:len(curve)-1]
	}
	if len(curve) < 2 {
		return nil
	}
	total := func(i int) float64 { return curve[i].LossDB.Alice + curve[i].LossDB.Bob }
	lo, hi := total(0), total(len(curve)-1)
	if !(hi > lo) {
		return nil
	}
	var out []tick
	i := 1
	for _, db := range multiples(lo, hi, niceStep(hi-lo, most)) {
		for i < len(curve)-1 && total(i) < db {
			i++
		}
		from, to := total(i-1), total(i)
		if !(to > from) || db < from || db > to*(1+1e-9) {
			continue
		}
		x0, x1 := curve[i-1].DistanceKm, curve[i].DistanceKm
		if at := x0 + (x1-x0)*math.Min(1, (db-from)/(to-from)); at <= end*(1+1e-9) {
			out = append(out, tick{at, digits(db, 4)})
		}
	}
	return out
}
