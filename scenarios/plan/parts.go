package plan

import (
	"math"
	"slices"

	"pairspan/keyrate"
)

// part is something of the link that could be ideal.
type part struct {
	name  string
	ideal func(*asker, *keyrate.Link) // both arms
}

// parts are the parts that may stand in the way, in the order in which they
// win a tie. The pump and the fibre have rules of their own.
var parts = []part{
	{"state", func(_ *asker, l *keyrate.Link) { l.StateError = [2]float64{} }},
	{"alignment", eachArm(func(arm *keyrate.Arm) { arm.Misalignment, arm.PMDError = 0, 0 })},
	{"coupling", (*asker).regain},
	{"detectors", eachArm(func(arm *keyrate.Arm) { arm.Detector.Efficiency, arm.Detector.DeadTimeNs = 1, 0 })},
	{"dark_counts", eachArm(func(arm *keyrate.Arm) { arm.Detector.DarkCountsHz, arm.Detector.Afterpulsing = 0, 0 })},
	{"outside_light", eachArm(func(arm *keyrate.Arm) { arm.BackgroundHz, arm.UnpairedHz = 0, 0 })},
	{"timing", func(_ *asker, l *keyrate.Link) {
		l.SpreadFWHMPs = 0
		l.Arms[keyrate.Alice].SpreadFWHMPs, l.Arms[keyrate.Bob].SpreadFWHMPs = 0, 0
	}},
}

func eachArm(ideal func(*keyrate.Arm)) func(*asker, *keyrate.Link) {
	return func(_ *asker, l *keyrate.Link) {
		for i := range l.Arms {
			ideal(&l.Arms[i])
		}
	}
}

// regain takes out the fixed loss of both arms.
func (a *asker) regain(l *keyrate.Link) {
	for i := range l.Arms {
		fixed := a.s.FixedLoss(i)
		l.Arms[i].Transmittance = min(1, l.Arms[i].Transmittance*(-fixed).Transmittance())
	}
}

// withoutFibre asks a link whose runs have no length, no connectors and no splices.
func (a *asker) withoutFibre() reply {
	s := a.s.Clone()
	for i := range s.Arms {
		arm := &s.Arms[i]
		arm.LengthKm, arm.ConnectorPairs, arm.Splices, arm.MeasuredLossDB = 0, 0, 0, math.NaN()
	}
	return newAsker(s).at(0, judged, nil)
}

// inTheWay ranks the parts by what their ideal version makes of the judged
// rate at the installed point, the greatest first. A part that changes nothing
// for the better is left out.
func (a *asker) inTheWay(now reply) []PartFactor {
	var found []PartFactor
	rates := map[string]float64{}
	helped := false
	consider := func(name string, r reply) {
		helped = helped || a.meets(r)
		if r.rate.UsableBps > now.rate.UsableBps {
			rates[name] = r.rate.UsableBps
			found = append(found, PartFactor{Part: name, Factor: factor(r.rate.UsableBps, now.rate.UsableBps)})
		}
	}
	km := a.s.DistanceKm()
	for _, p := range parts {
		consider(p.name, a.at(km, judged, func(l *keyrate.Link) { p.ideal(a, l) }))
	}
	if r, ok := a.bestPump(now); ok {
		consider("pump", r)
	}
	if !a.meets(now) && !helped {
		if r := a.withoutFibre(); a.meets(r) {
			rates["fibre"] = math.Inf(1) // it alone meets the need, so it stands first
			found = append(found, PartFactor{Part: "fibre", Factor: factor(r.rate.UsableBps, now.rate.UsableBps)})
		}
	}
	slices.SortStableFunc(found, func(x, y PartFactor) int {
		switch d := rates[y.Part] - rates[x.Part]; {
		case d > 0:
			return 1
		case d < 0:
			return -1
		}
		return 0
	})
	return found
}

// bestPump asks at the best pair rate up to the source's ceiling; false where
// none is stated, or the pump is searched anyway.
func (a *asker) bestPump(now reply) (reply, bool) {
	free := a.left()
	ceiling, ok := a.s.Ceiling()
	if !ok || free.MaxPairRateHz > 0 {
		return reply{}, false
	}
	free.MaxPairRateHz = ceiling
	p := now.link.Best(now.setting, free)
	return reply{now.link, p, now.link.Key(p)}, true
}

// factor returns what a rate became of another, nil from zero.
func factor(became, was float64) *float64 {
	if was == 0 {
		return nil
	}
	return number(became / was)
}

// number returns a pointer to x, nil where x is NaN or infinite: JSON knows neither.
func number(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}
