package plan

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

const axisPoints = 121 // values of the entry

// The two ways in which the values of an axis are spaced.
const (
	logScale    = "log"
	linearScale = "linear"
)

// Axis is an entry of a scenario in place of distance, with the values that
// it is to take in the scenario and in its compared cases.
type Axis struct {
	quantity scenarios.Quantity
	inUse    float64 // as described, or as the planner set it; NaN where there is none
	cases    []axisCase
	values   []float64
	scale    string
}

// axisCase is the scenario or a compared case.
type axisCase struct {
	name string
	*asker
	uses bool // the entry moves it; else it stays as it is
}

// NewAxis puts a numeric entry of a scenario in place of distance. from and to
// are written as in the file; an empty one is chosen about the figure in use,
// as far as the scenario can take it. Values are read as those of the file
// are: what reading would refuse is an error here, as are an unknown entry and
// one on which neither the scenario nor any compared case depends.
func NewAxis(s *scenarios.Scenario, entry, from, to string) (*Axis, error) {
	q, err := s.Quantity(entry)
	if err != nil {
		return nil, refused(entry, err)
	}
	if s.ToldByMap(entry) {
		return nil, refusal{entry, "the spectral map tells it", "compare takes cases with other pass bands"}
	}
	a := newAsker(s)
	x := &Axis{quantity: q, inUse: q.InUse, cases: []axisCase{{scenarios.FiledName, a, false}}}
	if !scenarios.Stated(x.inUse) {
		x.inUse = a.found(entry)
	}
	for i := range s.Compare {
		x.cases = append(x.cases, axisCase{s.Compare[i].Name, newAsker(s.Compare[i].Scenario), false})
	}
	if !x.findUses() {
		return nil, refusal{entry, "no rate depends on it here", a.instead(entry)}
	}
	return x, x.findValues(from, to)
}

// found returns a setting that the planner searches; NaN for other entries.
func (a *asker) found(entry string) float64 {
	if a.unknown {
		if entry == "window_ps" {
			return a.s.Spread(a.s.DistanceKm())
		}
		return nan
	}
	now := a.at(a.s.DistanceKm(), judged, nil).setting
	switch {
	case entry == "window_ps":
		return windowPs(now)
	case entry == "key_basis_share":
		return now.KeyShare
	case entry == pumpEntry(a.s) && a.s.Pulsed():
		return now.PairRateHz / a.s.Source.PulseRateHz
	case entry == pumpEntry(a.s):
		return now.PairRateHz
	}
	return nan
}

// findUses finds the cases that the entry moves, and whether there are any.
func (x *Axis) findUses() (any bool) {
	for i := range x.cases {
		x.cases[i].uses = x.cases[i].dependsOn(&x.quantity)
		any = any || x.cases[i].uses
	}
	return any
}

// dependsOn reports whether some values of an entry give different links or
// settings.
func (a *asker) dependsOn(q *scenarios.Quantity) bool {
	if strings.HasPrefix(q.Entry, "source.state.") && a.unknown {
		return q.Entry != "source.state.measured_car" && !strings.Contains(q.Entry, "visibility")
	}
	if strings.HasSuffix(q.Entry, ".measured_loss_db") && !scenarios.Stated(q.InUse) {
		return false // the run is itemised
	}
	s := a.s.Clone()
	at, err := s.Fix(q.Entry)
	if err != nil { // the state is not known by it, or the case lacks the detector
		return false
	}
	const nearby = 1e-3
	values := []float64{q.Lo, q.Lo + (q.Hi-q.Lo)/2, q.Hi}
	if scenarios.Stated(*at) {
		values = append(values, *at, *at*(1-nearby), *at*(1+nearby))
	}
	type outcome struct {
		link    keyrate.Link
		setting keyrate.OperatingPoint
	}
	var before outcome
	for i, x := range values {
		*at = x
		now := outcome{s.Link(s.DistanceKm(), a.members(judged)[0]), s.Setting()}
		if a.unknown {
			now.link.StateError = [2]float64{} // not numbers, which never compare
		}
		if i > 0 && now != before {
			return true
		}
		before = now
	}
	return false
}

// instead names what could be asked for in place of an entry.
func (a *asker) instead(entry string) string {
	switch {
	case strings.HasPrefix(entry, "detectors."):
		return "the arms use " + strings.Join(a.detectorsInUse(), " and ")
	case strings.HasPrefix(entry, "source.state.") && len(a.stateQuestions()) > 0:
		return "the state is known by " + a.stateQuestions()[0].entry
	case strings.HasPrefix(entry, "source.pair"):
		return "the source is described by " + pumpEntry(a.s)
	case strings.HasPrefix(entry, "source.spectral_map.") || strings.HasPrefix(entry, "source.power_scan."):
		return "it is used where the file is read: compare takes cases with other values"
	case strings.HasSuffix(entry, "measured_loss_db"):
		return "the run is itemised: try fixed_loss_db"
	}
	return "try one of the link's figures, such as " + armEntry[scenarios.Bob] + lengthLeaf
}

// findValues finds the ends and the values between them.
func (x *Axis) findValues(from, to string) error {
	lo, hi := x.span()
	lo, err := x.end(from, lo)
	if err != nil {
		return err
	}
	if hi, err = x.end(to, hi); err != nil {
		return err
	}
	if !(lo < hi) {
		return x.refuse(fmt.Sprintf("from %s to %s is no range", plain(lo), plain(hi)), "the first value is the smaller one")
	}
	x.space(lo, hi)
	return nil
}

// end reads one end of the range; where none is given it goes from the one
// chosen towards the figure in use until the scenario can take it.
func (x *Axis) end(text string, chosen float64) (float64, error) {
	const halvings = 50
	filed := x.cases[0].asker
	if text != "" {
		s, err := filed.changed(x.quantity.Entry, text)
		if err != nil {
			return 0, err
		}
		at, err := s.Number(x.quantity.Entry)
		if err != nil || !scenarios.Stated(*at) {
			return 0, x.refuse(text+" is not a number", "the first and the last value are numbers")
		}
		return *at, nil
	}
	if !scenarios.Stated(chosen) {
		return 0, x.refuse("it has no figure here to choose a range by", "give both the first and the last value")
	}
	for range halvings {
		_, err := filed.changed(x.quantity.Entry, plain(chosen))
		if err == nil {
			return chosen, nil
		}
		if !scenarios.Stated(x.inUse) {
			return 0, err
		}
		s := scale{x.quantity.Decades && x.inUse > 0}
		chosen = s.from((s.to(chosen) + s.to(x.inUse)) / 2)
	}
	return x.inUse, nil
}

func (x *Axis) refuse(problem, hint string) error { return refusal{x.quantity.Entry, problem, hint} }

// space sets the values from lo to hi: whole ones of what counts things.
func (x *Axis) space(lo, hi float64) {
	x.scale = linearScale
	if x.quantity.Decades && lo > 0 {
		x.scale = logScale
	}
	s := scale{x.scale == logScale}
	for i := range axisPoints {
		v := s.from(s.to(lo) + (s.to(hi)-s.to(lo))*float64(i)/(axisPoints-1))
		switch {
		case i == 0:
			v = lo
		case i == axisPoints-1:
			v = hi
		case x.quantity.Whole:
			v = math.Round(v)
		}
		x.values = append(x.values, v)
	}
	x.values = slices.Compact(x.values)
}

// refusal says why an entry or its values cannot stand in place of distance,
// and what to do next.
type refusal struct{ entry, problem, hint string }

func (r refusal) Error() string {
	return r.entry + ": " + r.problem + "\n        hint: " + r.hint
}

// refused turns what reading says of a value into a refusal, since the value
// does not stand in the file.
func refused(entry string, err error) error {
	var errs scenarios.Errors
	if !errors.As(err, &errs) {
		return err
	}
	first := errs[0]
	if first.Entry != entry && first.Entry != "" {
		first.Problem = first.Entry + ": " + first.Problem
	}
	return refusal{entry, first.Problem, first.Hint}
}
