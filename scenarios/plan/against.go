package plan

import (
	"context"
	"fmt"
	"slices"

	"pairspan/scenarios"
)

// AddAgainst computes the link over an entry in place of distance: at the
// installed length, in every case of the scenario that the plan and the axis
// were made from. The value replaces the search of a setting that the scenario
// leaves to the planner; the others are searched again at each. A compared
// case takes the same values as the others even if it is the entry that the
// case changes; one that does not depend on the entry stays as it is.
// progress, if not nil, is told how many of how many points are done; it may
// be called from several goroutines. The error is the context's, where it
// ended first, or says which value a case cannot take.
func (p *Plan) AddAgainst(ctx context.Context, x *Axis, progress func(done, total int)) error {
	out := &Against{
		Entry: x.quantity.Entry, Unit: x.quantity.Unit, Scale: x.scale,
		InUse: number(x.inUse), Cases: make([]AgainstCase, len(x.cases)),
	}
	for i, c := range x.cases {
		out.Cases[i] = AgainstCase{c.name, make([]AgainstPoint, len(x.values))}
	}
	t := ticker{total: len(x.cases) * len(x.values), told: progress}
	failed := make([]error, t.total)
	err := onCores(ctx, t.total, func() func(int) {
		return func(i int) {
			c, n := i/len(x.values), i%len(x.values)
			out.Cases[c].Points[n], failed[i] = x.point(&x.cases[c], x.values[n])
			t.tick()
		}
	})
	if err != nil {
		return err
	}
	if i := slices.IndexFunc(failed, func(err error) bool { return err != nil }); i >= 0 {
		return failed[i]
	}
	p.Against = out
	return nil
}

// point asks one case at one value.
func (x *Axis) point(c *axisCase, value float64) (AgainstPoint, error) {
	a := c.asker
	if c.uses {
		s, err := a.changed(x.quantity.Entry, plain(value))
		if err != nil {
			return AgainstPoint{}, fmt.Errorf("%s, at %s: %w", c.name, plain(value), err)
		}
		a = newAsker(s)
	}
	return AgainstPoint{value, a.point(a.s.DistanceKm())}, nil
}

// changed reads the scenario again with an entry set to the text of a value.
// The measured loss of a run goes with its length, as it does along the curve.
func (a *asker) changed(entry, text string) (*scenarios.Scenario, error) {
	changes := []scenarios.Change{{Entry: entry, Value: text}}
	for i, arm := range armEntry {
		if entry != arm+lengthLeaf || !scenarios.Stated(a.s.Arms[i].MeasuredLossDB) {
			continue
		}
		km, err := a.s.Alone(append(changes, scenarios.Change{Entry: arm + "measured_loss_db", Value: "0"})...)
		if err != nil {
			return nil, refused(entry, err)
		}
		run := a.s.LossItems(i, km.Arms[i].LengthKm)[1].Loss // after the fixed loss
		changes = append(changes,
			scenarios.Change{Entry: arm + "measured_loss_db", Value: plain(float64(run))},
			scenarios.Change{Entry: arm + "loss_db_per_km", Value: plain(a.s.Attenuation(i))})
	}
	s, err := a.s.Alone(changes...)
	if err != nil {
		return nil, refused(entry, err)
	}
	return s, nil
}
