package plan

import (
	"cmp"
	"context"
	"math"
	"slices"
)

const (
	rankedPairs = 20   // of the best cases each is compared with the next
	apart       = 1e-4 // relative; rates that are closer count as equal, since settings are rounded
	overtakeKm  = 1e-6 // how closely an overtaking is found
	mostSteps   = 80   // of a narrowing bracket
)

// judgedBps is the rate of a point that is judged; 0 without a state.
func judgedBps(p *Point) float64 {
	switch {
	case p.Bounds != nil:
		return p.Bounds.AtWorst.UsableRateBps
	case p.UsableRateBps != nil:
		return *p.UsableRateBps
	}
	return 0
}

// lead returns ln(other/one): positive where the other makes more key. It is
// infinite where one of them makes none, and 0 where neither does.
func lead(one, other float64) float64 {
	if one == other {
		return 0
	}
	return math.Log(other / one)
}

// pairing is two cases to compare, by their places.
type pairing struct{ one, other int }

// pairings are each case with the filed one, and the best cases each with the
// next in rank at the installed distance: a number of pairs that grows with
// that of the cases, not with its square.
func pairings(cases []Case) (all []pairing) {
	ranked := make([]int, len(cases))
	for i := range cases {
		ranked[i] = i
		if i > 0 {
			all = append(all, pairing{0, i})
		}
	}
	slices.SortStableFunc(ranked, func(i, j int) int {
		return cmp.Compare(judgedBps(&cases[j].Installed), judgedBps(&cases[i].Installed))
	})
	for k := 0; k+1 < min(len(ranked), rankedPairs+1); k++ {
		i, j := min(ranked[k], ranked[k+1]), max(ranked[k], ranked[k+1])
		if i > 0 {
			all = append(all, pairing{i, j})
		}
	}
	return all
}

// overtakes finds the distances at which one case comes to make more usable
// key at worst than another: seen on the curves, narrowed on the whole model.
// The nearest comes first.
func overtakes(ctx context.Context, asked []named, cases []Case) ([]Overtake, error) {
	pairs := pairings(cases)
	found := make([][]Overtake, len(pairs))
	err := onCores(ctx, len(pairs), func() func(int) {
		return func(i int) { found[i] = pairs[i].overtakes(asked, cases) }
	})
	all := slices.Concat(found...)
	slices.SortStableFunc(all, func(x, y Overtake) int { return cmp.Compare(x.DistanceKm, y.DistanceKm) })
	return append([]Overtake{}, all...), err
}

// overtakes walks along the curves of a pair.
func (p pairing) overtakes(asked []named, cases []Case) (all []Overtake) {
	one, other := cases[p.one].Curve, cases[p.other].Curve
	from, ahead := 0, 0.0 // where one of them was last clearly ahead
	for i := range min(len(one), len(other)) {
		now := lead(judgedBps(&one[i]), judgedBps(&other[i]))
		if abs(now) < apart {
			continue
		}
		if now*ahead < 0 {
			all = append(all, p.between(asked, one[from].DistanceKm, one[i].DistanceKm, now > 0))
		}
		from, ahead = i, now
	}
	return all
}

// between narrows the distance at which a lead changes hands.
func (p pairing) between(asked []named, fromKm, toKm float64, otherWins bool) Overtake {
	loser, winner := asked[p.one], asked[p.other]
	if !otherWins {
		loser, winner = winner, loser
	}
	km := turning(fromKm, toKm, overtakeKm, func(km float64) float64 {
		return lead(loser.at(km, judged, nil).rate.UsableBps, winner.at(km, judged, nil).rate.UsableBps)
	})
	return Overtake{Case: winner.name, Overtakes: loser.name, DistanceKm: km}
}

// turning narrows a bracket on the place where f becomes positive, by the
// secant where both ends are finite and by halves elsewhere. An end that stays
// twice counts half (the Illinois method), and a step falls short of no end by
// less than half the tolerance, so that the bracket closes from both sides. It
// returns the end at which f is positive.
func turning(from, to, tolerance float64, f func(float64) float64) float64 {
	fFrom, fTo, stayed := f(from), f(to), 0
	for range mostSteps {
		width := to - from
		if abs(width) <= tolerance {
			break
		}
		part := 0.5
		if secant := fFrom / (fFrom - fTo); secant >= 0 && secant <= 1 && !math.IsInf(fTo, 0) { // false for NaN
			least := min(0.5, tolerance/abs(width)/2)
			part = max(least, min(1-least, secant))
		}
		mid := from + part*width
		if fMid := f(mid); fMid > 0 {
			to, fTo, stayed = mid, fMid, max(1, stayed+1)
		} else {
			from, fFrom, stayed = mid, fMid, min(-1, stayed-1)
		}
		switch {
		case stayed > 1:
			fFrom /= 2
		case stayed < -1:
			fTo /= 2
		}
	}
	return to
}
