package plan

import (
	"context"
	"math"
	"slices"
	"strings"

	"pairspan/scenarios"
	"pairspan/sources"
)

// Reasons for a least or a most that is null.
const (
	noValueDoes    = "no_value_does"
	everyValueDoes = "every_value_does"
)

// The two bounds that can be asked for.
const (
	least = "least"
	most  = "most"
)

// question asks for the least or the most of one entry.
type question struct {
	entry, bound string
}

// addServes fills in what would still serve, what moves the rate, and the
// tangle needed from 0 to toKm.
func (a *asker) addServes(ctx context.Context, c *Case, toKm float64) (err error) {
	if c.Serves, err = a.serves(ctx); err != nil {
		return err
	}
	c.Elasticities = a.elasticities()
	c.TangleNeeded, err = a.tangleNeeded(ctx, toKm)
	return err
}

// serves answers every question that this scenario can be asked.
func (a *asker) serves(ctx context.Context) ([]Serve, error) {
	asked := a.questions()
	answers := make([]Serve, len(asked))
	err := onCores(ctx, len(asked), func() func(int) {
		return func(i int) { answers[i] = a.serve(asked[i]) }
	})
	return answers, err
}

// questions lists what can be asked: without a state, for a tangle alone.
func (a *asker) questions() []question {
	if a.unknown {
		return []question{{tangleEntry, least}}
	}
	asked := a.stateQuestions()
	detectors := a.detectorsInUse()
	ofDetectors := func(leaf, bound string) {
		for _, name := range detectors {
			asked = append(asked, question{"detectors." + name + "." + leaf, bound})
		}
	}
	ofArms := func(leaf string) {
		for _, arm := range armEntry {
			asked = append(asked, question{arm + leaf, most})
		}
	}
	ofDetectors("efficiency", least)
	asked = append(asked, question{pumpEntry(a.s), least})
	ofDetectors("dark_counts_hz", most)
	ofDetectors("jitter_fwhm_ps", most)
	ofDetectors("dead_time_ns", most)
	ofArms("misalignment_error")
	ofArms("fixed_loss_db")
	for i, share := range a.s.Shares() {
		if share > 0 {
			asked = append(asked, question{armEntry[i] + lengthLeaf, most})
		}
	}
	ofArms("background_counts_hz")
	return asked
}

const (
	tangleEntry = "source.state.tangle"
	lengthLeaf  = "length_km"
)

var armName = [2]string{"alice", "bob"}

// stateQuestions ask for the figures by which the state is known; a density
// matrix has none of its own.
func (a *asker) stateQuestions() []question {
	switch a.s.Source.State.Kind {
	case sources.TangleKind:
		return []question{{tangleEntry, least}}
	case sources.ConcurrenceKind:
		return []question{{"source.state.concurrence", least}}
	case sources.FidelityKind:
		return []question{{"source.state.fidelity", least}}
	case sources.VisibilityKind:
		return []question{{"source.state.visibility.hv", least}, {"source.state.visibility.da", least}}
	}
	return nil
}

// detectorsInUse names the detectors of both arms, each once.
func (a *asker) detectorsInUse() []string {
	names := []string{a.s.Arms[scenarios.Alice].Detector, a.s.Arms[scenarios.Bob].Detector}
	return slices.Compact(names)
}

// pumpEntry names the entry of the source's pairs.
func pumpEntry(s *scenarios.Scenario) string {
	if s.Pulsed() {
		return "source.pairs_per_pulse"
	}
	return "source.pair_rate_hz"
}

// serve answers one question.
func (a *asker) serve(q question) Serve {
	entry, err := a.s.Quantity(q.entry)
	if err != nil { // the tangle of a state that is not known by one
		entry = scenarios.Quantity{Entry: q.entry, Range: scenarios.Range{Hi: 1}, InUse: nan}
	}
	out := Serve{Entry: q.entry, Unit: entry.Unit, Bound: q.bound, Stated: number(entry.InUse)}
	for i, arm := range armEntry {
		if q.entry == arm+lengthLeaf {
			out.Value, out.Reason = orReason(a.mostLength(scenarios.Lengthen(armName[i]), entry.Hi))
			return out
		}
	}
	out.Value, out.Reason = orReason(a.seeker(q, &entry).seek())
	return out
}

// seeker looks through an entry's range, of the pump up to its ceiling.
func (a *asker) seeker(q question, entry *scenarios.Quantity) *seeker {
	t := a.trialOf(q.entry)
	k := seeker{
		excess: func(x float64) float64 { return t.excess(t.with(x, judged)) },
		far:    entry.Lo, near: entry.Hi, known: entry.InUse,
		scale:     scale{log: entry.Decades || strings.HasSuffix(q.entry, ".efficiency")},
		tolerance: closeEnough,
	}
	if q.entry == pumpEntry(a.s) {
		k.near = min(k.near, ceilingOf(a.s))
	}
	if q.bound == most {
		k.far, k.near = k.near, k.far
	}
	return &k
}

// ceilingOf returns what the pump can reach, in the unit of its entry; infinite
// where that is not stated.
func ceilingOf(s *scenarios.Scenario) float64 {
	ceiling := s.Source.MaxPairRateHz
	if s.Pulsed() {
		ceiling = s.Source.MaxPairsPerPulse
	}
	if !scenarios.Stated(ceiling) {
		return math.Inf(1)
	}
	return ceiling
}

// mostLength returns the greatest length of one arm: its reach.
func (a *asker) mostLength(arm scenarios.Lengthen, most float64) (float64, string) {
	s := a.s.Clone()
	s.Lengthen = arm
	alone := newAsker(s)
	km, reason := alone.reach(judged, alone.meets(alone.at(s.DistanceKm(), judged, nil)))
	switch {
	case reason == notAtZeroKm:
		return 0, noValueDoes
	case reason != "" || km > most:
		return 0, everyValueDoes
	}
	return km, ""
}
