package plan

import (
	"context"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"pairspan/scenarios"
)

// The end of the curve, where the scenario does not say it.
const (
	beyondReach = 1.25  // of the greatest reach or installed distance
	mostCurveKm = 500.0 // also the greatest length that a scenario may state
	leastKm     = 1.0   // where every length and reach is zero
)

// endOfCurve returns to_km: as stated, or a little more than the greatest
// reach or installed distance of all cases and members, two digits up.
func endOfCurve(s *scenarios.Scenario, cases []Case) float64 {
	if scenarios.Stated(s.ToKm) {
		return s.ToKm
	}
	greatest := 0.0
	for i := range cases {
		ans := &cases[i].Answer
		greatest = max(greatest, cases[i].Installed.DistanceKm, reached(ans.ReachKm, ans.ReachReason))
		for _, m := range []*MemberAnswer{ans.Nominal, ans.AtBest} {
			if m != nil {
				greatest = max(greatest, reached(m.ReachKm, m.ReachReason))
			}
		}
	}
	if greatest == 0 {
		return leastKm
	}
	return min(twoDigitsUp(beyondReach*greatest), mostCurveKm)
}

// reached returns a reach as a length for the axis.
func reached(km *float64, reason *string) float64 {
	if km != nil {
		return *km
	}
	if reason != nil && *reason == beyondSearch {
		return mostCurveKm
	}
	return 0
}

// twoDigitsUp rounds up to two significant digits.
func twoDigitsUp(x float64) float64 {
	exponent := math.Floor(math.Log10(x)) - 1
	const slack = 1e-9 // what is two digits already stays
	digits := math.Ceil(x/math.Pow(10, exponent) - slack)
	if exponent < 0 {
		return digits / math.Pow(10, -exponent)
	}
	return digits * math.Pow(10, exponent)
}

// curve computes a case at evenly spaced distances from 0 to toKm. The
// distances are shared between the cores; each is computed on its own, so
// that their number changes nothing.
func (a *asker) curve(ctx context.Context, toKm float64, points int, done func()) ([]Point, error) {
	curve := make([]Point, points)
	var next atomic.Int64
	var wait sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), points) {
		wait.Go(func() {
			for i := int(next.Add(1)) - 1; i < points && ctx.Err() == nil; i = int(next.Add(1)) - 1 {
				curve[i] = a.point(toKm * float64(i) / float64(points-1))
				done()
			}
		})
	}
	wait.Wait()
	return curve, ctx.Err()
}
