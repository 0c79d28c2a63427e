package plan

import (
	"context"
	"math"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/scenarios"
)

// limiter asks for the limits of one scenario.
type limiter struct {
	*asker
	ideal *asker // the same link with perfect detectors
}

func newLimiter(a *asker) limiter { return limiter{a, newAsker(withPerfectDetectors(a.s))} }

// withPerfectDetectors returns the scenario with detectors that miss nothing,
// never click in the dark, are never blind and know the time: its spread is
// worked out anew without their jitter. What was counted at the source was
// counted with the real ones, so that emission and losses stay.
func withPerfectDetectors(s *scenarios.Scenario) *scenarios.Scenario {
	c := s.Clone()
	if !c.Source.PumpAuto {
		_, _ = c.Fix(pumpEntry(c)) // every source has it
	}
	for i := range c.Detectors {
		c.Detectors[i].Detector = link.Detector{Efficiency: 1}
	}
	return c
}

// limited is a link and its ideal versions at one distance, at worst.
type limited struct{ described, best, state, detectors reply }

// at asks at one distance. No limit is left below the one that it improves on,
// whatever the searches find.
func (l limiter) at(km float64) (d limited) {
	d.described = l.asker.at(km, judged, nil)
	d.best = l.atBestSetting(d.described.link, d.described.setting)
	perfect := d.described.link
	perfect.StateError = [2]float64{}
	d.state = l.atBestSetting(perfect, d.best.setting)
	d.detectors = l.ideal.atBestSetting(l.ideal.s.Link(km, l.ideal.members(judged)[0]), d.best.setting)
	return d
}

// point is one distance of the chart.
func (l limiter) point(km float64) LimitPoint {
	d := l.at(km)
	return LimitPoint{
		DistanceKm:          km,
		AsDescribedBps:      d.described.rate.UsableBps,
		AtBestBps:           d.best.rate.UsableBps,
		PerfectStateBps:     d.state.rate.UsableBps,
		PerfectDetectorsBps: d.detectors.rate.UsableBps,
		RepeaterlessBps:     number(repeaterless(&d.best)),
		SlotsHz:             d.best.rate.SlotsHz,
	}
}

// repeaterless returns the most secret bits per second that a direct line
// could carry which loses as much as both arms together and is used once a slot:
//
//	K = slots/s × -log₂(1 - t)
//
// It is +Inf where nothing is lost.
//
// Source: Pirandola et al., Nat. Commun. 8, 15043 (2017); per use of one mode.
func repeaterless(r *reply) float64 {
	t := r.link.Arms[keyrate.Alice].Transmittance * r.link.Arms[keyrate.Bob].Transmittance
	return -r.rate.SlotsHz * math.Log1p(-t) / math.Ln2
}

// limits computes the chart at the distances of a curve, and says what holds
// the link back at the installed length; nil without a state. It ticks once a
// distance.
func (a *asker) limits(ctx context.Context, curve []Point, tick func()) (*Limits, error) {
	if a.unknown {
		return nil, nil
	}
	l := newLimiter(a)
	found := &Limits{Points: make([]LimitPoint, len(curve))}
	err := onCores(ctx, len(curve), func() func(int) {
		return func(i int) {
			found.Points[i] = l.point(curve[i].DistanceKm)
			tick()
		}
	})
	l.heldBack(found)
	return found, err
}

// heldBack compares what each limit gains at the installed length: the setting
// over the link as described, a perfect state and perfect detectors over the
// best setting, which they are given too.
func (l limiter) heldBack(found *Limits) {
	km := l.s.DistanceKm()
	d := l.at(km)
	was, best := d.described.rate.UsableBps, d.best.rate.UsableBps
	gains := []struct {
		part       string
		rate, over float64
	}{{"detectors", d.detectors.rate.UsableBps, best}, {"state", d.state.rate.UsableBps, best}, {"setting", best, was}}
	most, by := "", 1.0
	for _, g := range gains {
		if ratio := g.rate / g.over; g.rate > 0 && ratio > by { // +Inf from zero
			most, by = g.part, ratio
		}
	}
	if most != "" {
		found.HeldBack = &PartFactor{Part: most, Factor: number(by)}
	}
	found.Sentence = limitsSentence(d, most, distance(km))
}
