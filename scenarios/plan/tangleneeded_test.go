package plan

import (
	"math"
	"strings"
	"testing"

	"pairspan/scenarios"
)

// TestTangleNeededPutBack plans the link at every distance with the least
// tangles in place: each meets the need, and a little less does not.
func TestTangleNeededPutBack(t *testing.T) {
	for _, row := range servedLinks {
		if strings.HasPrefix(row.name, "measured") || row.name == "fixed window" {
			continue
		}
		s := parse(t, strings.Replace(base, row.edit[0], row.edit[1], 1), row.changes...)
		a := newAsker(s)
		needed, err := a.tangleNeeded(t.Context(), 40)
		if err != nil {
			t.Fatal(err)
		}
		found := 0
		for _, n := range needed {
			for r, tangle := range map[role]*float64{judged: n.AtWorst, nominal: n.Nominal, atBest: n.AtBest} {
				if tangle == nil {
					continue
				}
				found++
				at := func(x float64) reply {
					trial := a.trialOf(tangleEntry)
					*trial.at = x
					return trial.asker.at(n.DistanceKm, r, nil)
				}
				got := at(*tangle)
				if !a.meets(got) {
					t.Errorf("%s, %v km: a tangle of %v gives %v", row.name, n.DistanceKm, *tangle, got.rate.UsableBps)
				}
				// Two settings that round differently can differ by some 1e-6.
				if less := at(*tangle - 3e-6); a.meets(less) {
					t.Errorf("%s, %v km: %v is not the least tangle: %v", row.name, n.DistanceKm, *tangle, less.rate.UsableBps)
				}
			}
			if n.AtWorst != nil && !(*n.AtBest <= *n.Nominal && *n.Nominal <= *n.AtWorst) {
				t.Errorf("%s, %v km: at best %v, nominal %v, at worst %v", row.name, n.DistanceKm, *n.AtBest, *n.Nominal, *n.AtWorst)
			}
		}
		if found == 0 || len(needed) != 61 || needed[0].DistanceKm != 0 || needed[60].DistanceKm != 40 {
			t.Errorf("%s: %d tangles at %d distances", row.name, found, len(needed))
		}
	}
}

// TestTangleNeededWhateverIsKnown: the picture does not depend on this
// source's own state, and agrees with the other answers at the installed length.
func TestTangleNeededWhateverIsKnown(t *testing.T) {
	at := func(s *scenarios.Scenario) TangleNeeded { return newAsker(s).tangleNeededAt(6.2) }
	s := read(t)
	want := at(s)
	if least := serveOf(t, s, tangleEntry).Value; math.Abs(*least-*want.AtWorst) > 1e-6 {
		t.Errorf("%v, the question gives %v", *want.AtWorst, *least)
	}
	unknown := parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1))
	if best := answeredCase(unknown).Answer.LeastTangleAtBest; math.Abs(*best-*want.AtBest) > 1e-6 {
		t.Errorf("%v at best, the answer gives %v", *want.AtBest, *best)
	}
	for _, other := range []*scenarios.Scenario{
		unknown,
		read(t, set{"source.state.tangle", "0.5"}),
		read(t, set{"source.state", "{ visibility: { hv: 0.9, da: 0.9 } }"}),
	} {
		if got := at(other); *got.AtWorst != *want.AtWorst || *got.Nominal != *want.Nominal || *got.AtBest != *want.AtBest {
			t.Errorf("%v, want %v", got, want)
		}
	}
	if far := newAsker(s).tangleNeededAt(200); far.AtWorst != nil || far.Nominal != nil || far.AtBest != nil {
		t.Errorf("at 200 km: %v", far)
	}
}
