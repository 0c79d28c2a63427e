package plan

import "pairspan/keyrate"

// left says which settings the scenario leaves to the planner.
func (a *asker) left() keyrate.Free {
	free := keyrate.Free{Window: a.s.WindowAuto, KeyShare: a.s.KeyShareAuto}
	if a.s.Source.PumpAuto {
		free.MaxPairRateHz, _ = a.s.Ceiling()
	}
	return free
}

// freed says what an operator can turn, whether the file fixes it or not: the
// pair rate up to its ceiling where one is stated, the window, and of finite
// blocks the share of the key basis. (Without blocks the share of an active
// choice would run to the end of its range; it is searched only where the file
// asks for that.)
func (a *asker) freed() keyrate.Free {
	free := keyrate.Free{Window: true, KeyShare: a.s.Finite() || a.s.KeyShareAuto}
	if ceiling, ok := a.s.Ceiling(); ok {
		free.MaxPairRateHz = ceiling
	}
	return free
}

// atBestSetting asks a link at its best setting. others are settings that it
// must not fall behind: rounding to three digits may cost a hair.
func (a *asker) atBestSetting(l keyrate.Link, others ...keyrate.OperatingPoint) reply {
	p := l.Best(a.setting, a.freed())
	best := reply{l, p, l.Key(p)}
	for _, p := range others {
		if r := (reply{l, p, l.Key(p)}); better(r.rate, best.rate) {
			best = r
		}
	}
	return best
}

// best is the best operating point at the installed length, at worst.
func (a *asker) best() *Best {
	if a.unknown {
		return nil
	}
	now := a.at(a.s.DistanceKm(), judged, nil)
	r := a.atBestSetting(now.link, now.setting)
	b := &Best{
		Free:          []string{},
		PairRateHz:    r.setting.PairRateHz,
		PairsPerSlot:  r.rate.PairsPerSlot,
		WindowPs:      windowPs(r.setting),
		KeyBasisShare: r.setting.KeyShare,
		UsableRateBps: r.rate.UsableBps,
		Factor:        factor(r.rate.UsableBps, now.rate.UsableBps),
		Keeps95:       a.keeps95(r),
	}
	knobs := a.knobs(r.setting)
	for _, k := range knobs {
		b.Free = append(b.Free, k.entry)
	}
	b.Sentence = a.bestSentence(b, knobs)
	return b
}

// Steps of the search for what keeps most of the key.
const (
	keptShare = 0.95
	pumpStep  = 1.2
)

// keeps95 returns the pair rates around the best one that keep 95 % of its
// rate, at most the ceiling; nil where the pump is not free or there is no
// key. Window and share stay at the best setting: an operator asks how far the
// pump may drift, and does not set all else anew when it does. (Set anew, the
// range would be wider.)
func (a *asker) keeps95(r reply) *Span {
	ceiling := a.freed().MaxPairRateHz
	if ceiling == 0 || r.rate.UsableBps == 0 {
		return nil
	}
	keeps := func(pairRateHz float64) bool {
		p := r.setting
		p.PairRateHz = pairRateHz
		return r.link.Key(p).UsableBps >= keptShare*r.rate.UsableBps
	}
	from, to := r.setting.PairRateHz, r.setting.PairRateHz
	for keeps(from / pumpStep) { // the rate goes to zero with the pairs
		from /= pumpStep
	}
	for to*pumpStep < ceiling && keeps(to*pumpStep) {
		to *= pumpStep
	}
	span := &Span{crossing(from, from/pumpStep, keeps), max(to, ceiling)}
	if next := min(ceiling, to*pumpStep); next > to && !keeps(next) {
		span.To = crossing(to, next, keeps)
	}
	return span
}
