package source

import (
	"errors"
	"fmt"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
)

// scenario says what a scenario's source is, and what it carries: on its own
// link, or on another's.
func (t *task) scenario() error {
	if t.Options != (Options{}) {
		return errors.New("options of laboratory files do not go with a scenario, which says all of its source itself")
	}
	s, err := scenarios.Load(t.File)
	if err != nil {
		return err
	}
	t.Title = s.Title
	t.add(s.Inputs...)
	if err := t.ownState(s); err != nil {
		return err
	}
	t.Sentence = t.ownSentence(s)
	if t.On == "" {
		return t.carry(s, nil)
	}
	if t.link, err = scenarios.Load(t.On); err != nil {
		return err
	}
	t.add(t.link.Inputs...)
	c, replaced, err := withSource(t.link, s)
	if err != nil {
		return err
	}
	for _, r := range s.Repairs {
		t.Warnings = append(t.Warnings, Warning(r))
	}
	return t.carry(c, replaced)
}

// ownState describes the state that a scenario gives: that of one pair, its
// accidentals taken out.
func (t *task) ownState(s *scenarios.Scenario) error {
	src := &s.Source
	if src.Counts != nil && !scenarios.Stated(src.MeasuredCAR) {
		fit, err := src.Counts.MaximumLikelihood()
		if err != nil {
			return err
		}
		return t.fitted(*src.Counts, fit)
	}
	state := src.State
	if scenarios.Stated(src.MeasuredCAR) {
		state, _ = state.WithoutAccidentals(src.MeasuredCAR)
	}
	t.State = describe(state)
	return nil
}

// ownSentence says what a scenario's source is.
func (t *task) ownSentence(s *scenarios.Scenario) string {
	emission, _ := s.Emission() // reading has refused what cannot be counted
	rate := emission.PairRateHz
	kind, ceiling := "A continuous source", ""
	if s.Pulsed() {
		kind = "A pulsed source"
	}
	if most, ok := s.Ceiling(); ok && s.Source.PumpAuto {
		rate, ceiling = most, "up to "
	}
	text := fmt.Sprintf("%s of %s%s pairs per second", kind, ceiling, three(rate))
	if m := &s.Source.SpectralMap; m.Used && m.Band.Share < 1-leastParted {
		text += fmt.Sprintf(", of which %s pass both pass bands", perCent(m.Band.Share))
	}
	switch {
	case t.State == nil:
		return text + ", of whose state nothing is known: a pair rate says nothing of entanglement."
	case t.State.Known == Whole:
		return text + ". " + t.State.sentence()
	case t.State.Known == Visibilities:
		return text + fmt.Sprintf(". With the visibilities given a QBER of %s and %s, at most %s secret bits per sifted bit.",
			t.State.QBERAligned.Key.PerCent(), t.State.QBERAligned.Check.PerCent(), t.State.SecretFraction.Aligned.Text())
	}
	m := t.State.Members
	return text + fmt.Sprintf(". What is known leaves the state open: with the analysers aligned a sifted bit gives from %s (at worst) to %s secret bits, and %s if it is Werner's.",
		three(m.AtWorst.SecretFraction), three(m.AtBest.SecretFraction), three(m.Nominal.SecretFraction))
}

// leastParted is the share of the pairs that pass bands keep out, from which it
// is told.
const leastParted = 1e-9

// withSource returns a link with the source of another scenario. What was
// counted at either source is written out, since the detectors that counted are
// not the link's.
func withSource(link, of *scenarios.Scenario) (*scenarios.Scenario, []plan.Change, error) {
	c := writtenOut(link)
	c.Source = writtenOut(of).Source
	without(c, "source")
	if c.Pulsed() && c.WindowPs > psPerSecond/c.Source.PulseRateHz {
		return nil, nil, fmt.Errorf("the link's window_ps of %s is longer than the %s ps from pulse to pulse of this source: a window holds one pulse at most", three(c.WindowPs), three(psPerSecond/c.Source.PulseRateHz))
	}
	if c.WindowAuto && !(c.Spread(c.DistanceKm()) > 0) {
		return nil, nil, errors.New("the link's window_ps is auto, though nothing spreads the arrivals of this source: state a width in ps, or the detectors' jitter_fwhm_ps")
	}
	return c, []plan.Change{{Entry: "source", Value: "that of " + of.Title}}, nil
}

// writtenOut returns a scenario in which what was counted at the source stands
// as numbers: it does not change with the source's power or its detectors.
func writtenOut(s *scenarios.Scenario) *scenarios.Scenario {
	c := s.Clone()
	if s.Source.EmissionMeasured() {
		pairRate(c)
	}
	return c
}

// pairRate returns the place of a source's own pair rate, per second or pulse,
// with nothing left to the planner or to counts.
func pairRate(c *scenarios.Scenario) *float64 {
	at, _ := c.Fix(emissionEntry(c.Pulsed())) // a number of every such scenario
	return at
}

func emissionEntry(pulsed bool) string {
	if pulsed {
		return "source.pairs_per_pulse"
	}
	return "source.pair_rate_hz"
}
