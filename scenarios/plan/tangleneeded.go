package plan

import (
	"context"

	"pairspan/keyrate"
	"pairspan/sources"
)

const (
	tangleTolerance = 1e-10 // relative; what changes by less is found
	mostRounds      = 30
)

// tangleNeeded returns the least tangle that meets the need, or makes any key,
// at the distances of the bands: it says whether a source is good enough for a campus. The
// tangle is one as it would be stated in this scenario, in place of whatever
// its state is known by and beside the same measured_car.
func (a *asker) tangleNeeded(ctx context.Context, toKm float64) ([]TangleNeeded, error) {
	needed := make([]TangleNeeded, bandPoints)
	err := onCores(ctx, len(needed), func() func(int) {
		return func(i int) { needed[i] = a.tangleNeededAt(bandKm(toKm, i)) }
	})
	return needed, err
}

func (a *asker) tangleNeededAt(km float64) TangleNeeded {
	needed := TangleNeeded{DistanceKm: km}
	t := a.trialOf(tangleEntry)
	*t.at = 1
	perfect := t.settle(t.s.Link(km, sources.AtWorst)) // of tangle 1 there is one state only
	if !t.meets(perfect) {
		return needed
	}
	leastOf := func(r role) *float64 {
		least := 1.0
		for _, m := range t.members(r) {
			least = min(least, t.leastFrom(perfect, km, m))
		}
		return &least
	}
	needed.AtWorst, needed.Nominal, needed.AtBest = leastOf(judged), leastOf(nominal), leastOf(atBest)
	return needed
}

// leastFrom returns the least tangle of one member that serves. It goes down
// from a perfect state: to where the settings found last serve no more, then
// searches settings again. Since they are the best there, how far they are
// off the best for the least tangle counts only in its square. Where the
// settings found at the end are rounded to slightly worse ones than were held,
// they are searched on the way as well.
func (t *trial) leastFrom(perfect reply, km float64, m sources.Member) float64 {
	tangle, now := 1.0, perfect
	at := func(tangle float64) keyrate.Link {
		*t.at = tangle
		return t.s.Link(km, m)
	}
	held := seeker{tolerance: tangleTolerance, excess: func(tangle float64) float64 {
		l := at(tangle)
		return t.excess(reply{l, now.setting, l.Key(now.setting)})
	}}
	searched := seeker{tolerance: tangleTolerance, excess: func(tangle float64) float64 {
		return t.excess(t.settle(at(tangle)))
	}}
	for range mostRounds {
		next := held.crossing(tangle, 0, t.excess(now), -1) // without entanglement there is no key
		settled := t.settle(at(next))
		switch {
		case !t.meets(settled):
			return searched.crossing(tangle, next, t.excess(now), t.excess(settled))
		case settled.setting == now.setting || tangle-next <= tangleTolerance:
			return next
		}
		tangle, now = next, settled
	}
	return tangle
}
