package plan

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"slices"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// Format is the plan_format that this program writes.
const Format = 1

// New plans a scenario and its compared cases. progress, if not nil, is told
// how many of how many distances and draws are done; it may be called from
// several goroutines. The error is the context's, where it ended first.
func New(ctx context.Context, s *scenarios.Scenario, version string, progress func(done, total int)) (*Plan, error) {
	asked := []named{{scenarios.FiledName, nil, newAsker(s)}}
	for i := range s.Compare {
		c := &s.Compare[i]
		asked = append(asked, named{c.Name, c.Changes, newAsker(c.Scenario)})
	}
	p := describe(s, version)
	for _, n := range asked {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		p.Cases = append(p.Cases, n.answered())
	}
	toKm, points := endOfCurve(s, p.Cases), int(s.Points)
	t := &ticker{total: points*len(asked) + asked[0].drawsToMake(), told: progress}
	if !asked[0].unknown {
		t.total += points // of the limits
	}
	if err := addCurves(ctx, p, asked, toKm, points, t.tick); err != nil {
		return nil, err
	}
	var err error
	if p.Cases[0].Uncertainty, err = asked[0].uncertainty(ctx, &p.Cases[0], toKm, t.tick); err != nil {
		return nil, err
	}
	if p.Buying, err = buying(ctx, asked, p.Cases); err != nil {
		return nil, err
	}
	if p.Cases[0].Limits, err = asked[0].limits(ctx, p.Cases[0].Curve, t.tick); err != nil {
		return nil, err
	}
	p.Needs = needs(s)
	p.Cases[0].Acceptance = asked[0].acceptance()
	if err = asked[0].addServes(ctx, &p.Cases[0], toKm); err != nil {
		return nil, err
	}
	p.Warnings = warnings(asked)
	return p, nil
}

// named is a case to ask.
type named struct {
	name    string
	changes []scenarios.Change
	*asker
}

// answered is the case without its curve.
func (n named) answered() Case {
	c := Case{
		Name:             n.name,
		Changes:          []Change{},
		Serves:           []Serve{},
		Elasticities:     []Elasticity{},
		TangleNeeded:     []TangleNeeded{},
		Lengthen:         string(n.s.Lengthen),
		ErrorCorrectionF: n.s.ErrorCorrectionF,
		QBERThreshold:    keyrate.Threshold(n.s.ErrorCorrectionF),
		DutyCycle:        n.s.DutyCycle,
		LossBudget:       lossBudget(n.s),
		Installed:        n.point(n.s.DistanceKm()),
		QBERParts:        n.qberParts(),
		Best:             n.best(),
		Block:            n.block(),
	}
	c.PassBands = passBands(n.s, c.Installed.PairRateHz)
	for _, ch := range n.changes {
		c.Changes = append(c.Changes, Change{ch.Entry, ch.Value})
	}
	c.Answer = n.answer(&c.Installed)
	return c
}

// addCurves computes every case at the same distances.
func addCurves(ctx context.Context, p *Plan, asked []named, toKm float64, points int, tick func()) error {
	for i, n := range asked {
		curve, err := n.curve(ctx, toKm, points, tick)
		if err != nil {
			return err
		}
		p.Cases[i].Curve = curve
	}
	return nil
}

// filesRead lists every file that was read, the scenario's own first, then those
// that compared cases alone name.
func filesRead(s *scenarios.Scenario) []scenarios.Input {
	all := slices.Clone(s.Inputs)
	for i := range s.Compare {
		for _, in := range s.Compare[i].Scenario.Inputs {
			if !slices.ContainsFunc(all, func(have scenarios.Input) bool { return have.Name == in.Name }) {
				all = append(all, in)
			}
		}
	}
	return all
}

// describe fills in what the plan says of its own making.
func describe(s *scenarios.Scenario, version string) *Plan {
	p := &Plan{
		PlanFormat: Format,
		Title:      s.Title,
		Program:    Program{"pairspan", version},
		Inputs:     []Input{}, DefaultsUsed: []Default{}, Deviations: []Deviation{}, Origins: []Origin{},
		Entries: entries(s), Withheld: []string{},
		Cautions: cautions, References: references,
	}
	for _, in := range filesRead(s) {
		sum := sha256.Sum256([]byte(in.Text))
		p.Inputs = append(p.Inputs, Input{in.Name, hex.EncodeToString(sum[:]), in.Text})
	}
	for _, d := range s.DefaultsUsed {
		p.DefaultsUsed = append(p.DefaultsUsed, Default(d))
	}
	for _, d := range s.Deviations {
		p.Deviations = append(p.Deviations, deviation(s, d))
	}
	for _, o := range s.Origins {
		p.Origins = append(p.Origins, Origin(o))
	}
	return p
}

func deviation(s *scenarios.Scenario, d scenarios.Deviation) Deviation {
	out := Deviation{Entry: d.Entry, SD: d.SD}
	if at, err := s.Number(d.Entry); err == nil {
		out.Value = *at
	}
	return out
}
