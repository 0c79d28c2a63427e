package plan

import (
	"context"
	"math"
	"slices"
	"strings"

	"pairspan/scenarios"
)

// turnFigures are the figures of a detector of which it is asked where the
// order of two cases turns, with the factor that a search for it steps by.
var turnFigures = []struct {
	leaf   string
	factor float64
}{
	{"dark_counts_hz", 4},
	{"dead_time_ns", 4},
	{"efficiency", 2},
}

const (
	stepsDown    = 12   // by the factor, before the end of the range itself is asked
	firstStep    = 1    // from a figure of zero, in its unit
	turnAccuracy = 1e-9 // of the figure
)

// turns finds the figures of the detectors at which the order of two cases
// turns at the installed length: that of the scenario as filed and that of the
// compared case which makes most usable key at worst.
func turns(ctx context.Context, asked []named, cases []Case) ([]Turn, error) {
	all := []Turn{}
	best := none
	for i := 1; i < len(cases) && !asked[0].unknown; i++ {
		if asked[i].unknown {
			continue
		}
		if best == none || judgedBps(&cases[i].Installed) > judgedBps(&cases[best].Installed) {
			best = i
		}
	}
	if best == none {
		return all, ctx.Err()
	}
	o := order{asked[0], asked[best]}
	now := lead(judgedBps(&cases[0].Installed), judgedBps(&cases[best].Installed))
	if abs(now) < apart {
		return all, ctx.Err()
	}
	if now > 0 {
		o.ahead, o.behind = o.behind, o.ahead
	}
	entries := o.entries()
	found := make([]*Turn, len(entries))
	err := onCores(ctx, len(entries), func() func(int) {
		return func(i int) { found[i] = o.turn(entries[i].name, entries[i].factor) }
	})
	for _, t := range found {
		if t != nil {
			all = append(all, *t)
		}
	}
	return all, err
}

// order is two cases, one of which makes more key than the other.
type order struct{ ahead, behind named }

// figureOf is an entry and the factor of its steps.
type figureOf struct {
	name   string
	factor float64
}

// entries are the figures of every detector that one of the cases uses.
func (o order) entries() (all []figureOf) {
	var seen []string
	for _, n := range []named{o.ahead, o.behind} {
		for arm := range n.s.Arms {
			name := n.s.Arms[arm].Detector
			if slices.Contains(seen, name) {
				continue
			}
			seen = append(seen, name)
			for _, f := range turnFigures {
				all = append(all, figureOf{"detectors." + name + "." + f.leaf, f.factor})
			}
		}
	}
	return all
}

// turn finds the value of a figure nearest to the stated one, in proportion, at
// which the order turns; nil where none does.
func (o order) turn(entry string, factor float64) *Turn {
	r, err := scenarios.NumberRange(entry)
	if err != nil {
		return nil
	}
	v := o.vary(entry)
	var nearest *Turn
	for _, values := range [][]float64{upwards(v.stated, factor, r), downwards(v.stated, factor, r)} {
		value, ok := v.first(values)
		if ok && (nearest == nil || farther(nearest.Value, v.stated) > farther(value, v.stated)) {
			nearest = &Turn{Entry: entry, Case: o.ahead.name, Other: o.behind.name, Stated: v.stated, Value: value}
		}
	}
	return nearest
}

// farther measures how far a value is from the stated one, in proportion.
func farther(value, stated float64) float64 { return abs(math.Log(value / stated)) }

// upwards lists the values of a search from the stated one up.
func upwards(stated, factor float64, r scenarios.Range) []float64 {
	values, x := []float64{stated}, stated*factor
	if stated == 0 {
		x = firstStep
	}
	for ; x < r.Hi; x *= factor {
		values = append(values, x)
	}
	return append(values, r.Hi)
}

// downwards lists those from the stated one down, to zero where that is allowed.
func downwards(stated, factor float64, r scenarios.Range) []float64 {
	values := []float64{stated}
	for range stepsDown {
		values = append(values, values[len(values)-1]/factor)
	}
	if r.Lo == 0 {
		values = append(values, 0)
	}
	return values
}

// varied is an order whose rates depend on one figure.
type varied struct {
	stated float64
	sides  [2]side // ahead and behind
}

// side is one of the two cases.
type side struct {
	s    *scenarios.Scenario
	at   *float64 // where the figure lives in s; nil where it stays
	rate float64  // as stated
}

// vary prepares to ask with other values of a figure: in both cases where it is
// the same in both, and else in the one that is ahead.
func (o order) vary(entry string) *varied {
	v := &varied{stated: math.NaN()}
	for i, n := range []named{o.ahead, o.behind} {
		s := n.s.Clone()
		v.sides[i] = side{s: s, rate: installedBps(s)}
		at, err := s.Number(entry)
		if err != nil || !n.uses(entry) || i > 0 && scenarios.Stated(v.stated) && *at != v.stated {
			continue
		}
		v.sides[i].at, v.stated = at, *at
	}
	return v
}

// uses reports whether a figure is of a detector of one of the arms.
func (a *asker) uses(entry string) bool {
	for i := range a.s.Arms {
		if strings.HasPrefix(entry, "detectors."+a.s.Arms[i].Detector+".") {
			return true
		}
	}
	return false
}

// installedBps is the judged rate at the installed length.
func installedBps(s *scenarios.Scenario) float64 {
	return newAsker(s).at(s.DistanceKm(), judged, nil).rate.UsableBps
}

// lead asks with a value in place: how far the case behind has come ahead.
func (v *varied) lead(value float64) float64 {
	for i := range v.sides {
		if side := &v.sides[i]; side.at != nil {
			*side.at = value
			side.rate = installedBps(side.s)
		}
	}
	return lead(v.sides[0].rate, v.sides[1].rate)
}

// first returns the first value along a list at which the order turns.
func (v *varied) first(values []float64) (value float64, ok bool) {
	for i := 1; i < len(values); i++ {
		if v.lead(values[i]) > apart {
			tolerance := turnAccuracy * max(values[i-1], values[i])
			return turning(values[i-1], values[i], tolerance, v.lead), true
		}
		if v.sides[0].rate == 0 && v.sides[1].rate == 0 {
			break
		}
	}
	return 0, false
}
