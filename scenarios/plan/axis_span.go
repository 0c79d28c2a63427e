package plan

import (
	"math"

	"pairspan/scenarios"
)

// How far a range goes about the figure in use, where none is given.
const (
	spanFactor   = 10.0 // down and up, of what is compared by factors
	spanTimes    = 2.0  // up, of lengths and losses
	smallPart    = 0.1  // a fraction below is looked at up to ten times itself
	leastSpanKm  = 20.0
	leastSpanDB  = 10.0
	leastSpan    = 5.0   // of what counts things
	spanOfLambda = 0.005 // down and up: beyond, a fibre has other figures
)

// span returns the range about the figure in use; NaN where there is none to
// choose it by.
func (x *Axis) span() (lo, hi float64) {
	q, v := &x.quantity, x.inUse
	switch {
	case q.Fraction:
		return fractions(q, v)
	case !scenarios.Stated(v) || v == 0 && (q.Decades || q.Lo < 0):
		return nan, nan
	case q.Decades:
		lo, hi = v/spanFactor, v*spanFactor
	case q.Lo < 0:
		lo, hi = -spanTimes*abs(v), spanTimes*abs(v)
	case q.Unit == "nm":
		lo, hi = v*(1-spanOfLambda), v*(1+spanOfLambda)
	default:
		lo, hi = q.Lo, max(spanTimes*v, leastSpanOf(q))
	}
	s := x.cases[0].s
	switch {
	case q.Entry == pumpEntry(s):
		hi = min(hi, ceilingOf(s))
	case q.Entry == "arms."+string(s.Lengthen)+"."+lengthLeaf && scenarios.Stated(s.ToKm):
		hi = s.ToKm // as the curve goes
	}
	return max(lo, q.Lo), min(hi, q.Hi)
}

// fractions returns the whole range in hundredths, or ten times a small one.
func fractions(q *scenarios.Quantity, v float64) (lo, hi float64) {
	const hundredths = 100
	lo, hi = math.Ceil(q.Lo*hundredths)/hundredths, math.Floor(q.Hi*hundredths)/hundredths
	switch {
	case v == 0:
		hi = smallPart
	case v < smallPart:
		lo, hi = q.Lo, spanFactor*v
		if q.Lo > 0 { // 0 itself is outside
			lo = v / spanFactor
		}
	}
	return lo, hi
}

func leastSpanOf(q *scenarios.Quantity) float64 {
	switch q.Unit {
	case "km":
		return leastSpanKm
	case "dB":
		return leastSpanDB
	}
	if q.Whole {
		return leastSpan
	}
	return 0
}
