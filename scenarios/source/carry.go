package source

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// carryState says what the link carries with a state in place of its own; a
// pair of pass bands or the like may have replaced more.
func (t *task) carryState(rho sources.DensityMatrix, replaced []plan.Change) error {
	if t.link == nil {
		return nil
	}
	c := withState(t.link, sources.FromDensityMatrix(rho))
	return t.carry(c, append(replaced, plan.Change{Entry: "source.state", Value: "the state of " + t.Title}))
}

// withState returns the scenario with another state, whose accidentals are out.
func withState(s *scenarios.Scenario, state sources.State) *scenarios.Scenario {
	c := s.Clone()
	c.Source.State, c.Source.Counts, c.Source.MeasuredCAR = state, nil, math.NaN()
	without(c, "source.state")
	return c
}

// without drops what the scenario says of an entry or of what stands under it,
// beside its value.
func without(c *scenarios.Scenario, entry string) {
	about := func(name string) bool { return name == entry || strings.HasPrefix(name, entry+".") }
	c.Deviations = slices.DeleteFunc(c.Deviations, func(d scenarios.Deviation) bool { return about(d.Entry) })
	c.Repairs = slices.DeleteFunc(slices.Clone(c.Repairs), func(r scenarios.Repair) bool { return about(r.Entry) })
}

// carry plans a link and fills in its answer.
func (t *task) carry(s *scenarios.Scenario, replaced []plan.Change) error {
	c := s.Clone()
	c.Compare, c.Points, c.ToKm = nil, fewestPoints, max(1, c.DistanceKm()) // the answer needs no curve
	c.Deviations = nil                                                      // nor draws
	p, err := plan.New(t.ctx, c, t.Version, nil)
	if err != nil {
		return err
	}
	answered := &p.Cases[0]
	a := &answered.Answer
	t.Link = &Link{
		Title: s.Title, Replaced: append([]plan.Change{}, replaced...), Outcome: a.Outcome, State: a.State,
		UsableRateBps: a.UsableRateBps, NeedBps: a.NeedBps, MarginDB: a.MarginDB, MarginReason: a.MarginReason,
		ReachKm: a.ReachKm, ReachReason: a.ReachReason,
		PairRateHz: &answered.Installed.PairRateHz, WindowPs: answered.Installed.WindowPs, QBER: answered.Installed.QBER,
		Sentence: a.Sentence, RestsOn: a.RestsOn, InTheWay: a.InTheWay,
	}
	for _, w := range p.Warnings {
		t.Warnings = append(t.Warnings, Warning{w.Rule, w.Entry, w.Sentence})
	}
	return nil
}

const fewestPoints = 2

// notTold is the answer where the file leaves open what the link would need.
func (t *task) notTold(why string) {
	if t.link == nil {
		return
	}
	t.Link = &Link{Title: t.link.Title, Replaced: []plan.Change{}, Outcome: NotTold, Sentence: "No answer on this link: " + why}
	if need := t.link.Need(); scenarios.Stated(need) {
		t.Link.NeedBps = &need
	}
}

// hz is a rate as a person would state it.
func hz(x float64) string { return fmt.Sprintf("%.4g", x) }
