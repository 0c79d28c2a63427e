package plan

import (
	"context"
	"fmt"

	"pairspan/keyrate"
)

// uncertainty propagates every standard deviation stated; without any it says
// what the interval of the state leaves open. It is nil where nothing is open.
// c is the case answered, toKm the end of its curve; done is told of every draw.
func (a *asker) uncertainty(ctx context.Context, c *Case, toKm float64, done func()) (*Uncertainty, error) {
	if err := a.repeat(ctx); err != nil {
		return nil, err
	}
	d := newDraws(a, a.inputs())
	if a.unknown || a.given && len(d.inputs) == 0 {
		return nil, ctx.Err()
	}
	u := &Uncertainty{Draws: d.toMake(), Seed: int(a.s.Seed), Shares: []Share{}, Bands: []Band{}}
	if u.Draws == 0 {
		u.asStated(c)
	} else if err := d.fill(ctx, u, c.Answer.ReachKm, toKm, done); err != nil {
		return nil, err
	}
	var err error
	if u.MeasureNext, err = d.measureNext(ctx); err != nil {
		return nil, err
	}
	u.Sentence = a.uncertaintySentence(u, c)
	return u, nil
}

// drawsToMake is how many draws the uncertainty takes, as far as can be told
// before a tomography is repeated.
func (a *asker) drawsToMake() int {
	if a.unknown || len(a.s.Deviations) == 0 && !a.repeatsTomography() {
		return 0
	}
	return int(a.s.Draws)
}

// toMake is how many draws there are: 0 where nothing varies.
func (d *draws) toMake() int {
	if len(d.inputs) == 0 {
		return 0
	}
	return d.count
}

// asStated is the uncertainty of a link without standard deviations.
func (u *Uncertainty) asStated(c *Case) {
	rate, qber, km := *c.Answer.UsableRateBps, c.Installed.QBER.Key, c.Answer.ReachKm
	u.UsableRate, u.QBERKey = Quantiles{rate, rate, rate}, Quantiles{qber, qber, qber}
	if km != nil {
		u.ReachKm = &QuantilesOrNot{km, km, km}
	}
}

// fill makes the draws.
func (d *draws) fill(ctx context.Context, u *Uncertainty, reachKm *float64, toKm float64, done func()) error {
	way, err := d.newAlong(ctx, toKm, reachKm)
	if err != nil {
		return err
	}
	s, err := d.sample(ctx, way, done)
	if err != nil {
		return err
	}
	u.ChanceMet = d.chanceMet(s.worst)
	u.Shares = d.shares(s)
	for k, rates := range s.bands {
		u.Bands = append(u.Bands, Band{bandKm(toKm, k), quantiles(rates)})
	}
	u.UsableRate, u.QBERKey, u.ReachKm = quantiles(s.worst), quantiles(s.qber), reaches(s.reach)
	return nil
}

// sample is what the draws gave, each slice in the order of the draws.
type sample struct {
	worst, qber, reach []float64
	inputs             [][]float64 // of each input, the values drawn
	bands              [][]float64 // at each distance, the usable rate at worst
}

func newSample(draws, inputs int) *sample {
	column := func() []float64 { return make([]float64, draws) }
	s := &sample{worst: column(), qber: column(), reach: column()}
	for range inputs {
		s.inputs = append(s.inputs, column())
	}
	for range bandPoints {
		s.bands = append(s.bands, column())
	}
	return s
}

// sample draws links and asks each at its installed distance and along the fibre.
func (d *draws) sample(ctx context.Context, way *along, done func()) (*sample, error) {
	s := newSample(d.count, len(d.inputs))
	usual := d.hold(d.s.DistanceKm(), nominal)[0]
	err := d.each(ctx, func(w *drawer, i int) {
		s.worst[i] = w.most([]held{way.installed})
		s.qber[i] = w.rate(w.own.DistanceKm(), usual).QBER[keyrate.KeyBasis]
		for j, at := range w.at {
			s.inputs[j][i] = *at
		}
		for k, rates := range s.bands {
			r := w.rate(way.held[k].km, way.held[k])
			rates[i] = r.UsableBps
		}
		s.reach[i] = way.reach(w, s.worst[i], func(k int) float64 { return s.bands[k][i] })
		done()
	})
	return s, err
}

// chanceMet is the share of rates that meet the need, nil without one.
func (a *asker) chanceMet(rates []float64) *float64 {
	if a.need == 0 {
		return nil
	}
	met := 0
	for _, r := range rates {
		if a.enough(r) {
			met++
		}
	}
	return number(float64(met) / float64(len(rates)))
}

// enough is meets, of a usable rate.
func (a *asker) enough(usableBps float64) bool {
	if a.need == 0 {
		return usableBps > 0
	}
	return usableBps >= a.need
}

// reaches are the quantiles of the reach: infinite ones are null.
func reaches(km []float64) *QuantilesOrNot {
	q := quantiles(km)
	out := &QuantilesOrNot{number(q.P05), number(q.P50), number(q.P95)}
	if *out == (QuantilesOrNot{}) {
		return nil
	}
	return out
}

// uncertaintySentence says what the deviations make of the answer, and where
// most of the doubt comes from.
func (a *asker) uncertaintySentence(u *Uncertainty, c *Case) string {
	if u.Draws == 0 {
		return fmt.Sprintf("No standard deviation is stated; what a %s leaves open is %s to %s.",
			a.figure("of "), bare(u.UsableRate.P50), bps(c.Answer.AtBest.UsableRateBps))
	}
	judged := ""
	if !a.given {
		judged = ", each judged at worst"
	}
	s := "With the deviations stated "
	switch counts := len(a.repeats) > 1; {
	case counts && len(a.s.Deviations) == 0:
		s = "With the counting errors of the tomography "
	case counts:
		s = "With the deviations stated and the counting errors of the tomography "
	}
	if u.ChanceMet != nil {
		s += fmt.Sprintf("the need is met in %s (seed %d)%s", ofDraws(*u.ChanceMet, u.Draws), u.Seed, judged)
	} else {
		if judged != "" {
			judged += ","
		}
		s += fmt.Sprintf("90 %% of %d draws (seed %d)%s lie between %s and %s", u.Draws, u.Seed, judged, bare(u.UsableRate.P05), bps(u.UsableRate.P95))
	}
	const most = 0.5
	switch first := u.Shares[0]; {
	case first.FirstOrder >= most:
		s += fmt.Sprintf("; most of the doubt comes from %s (%.0f %%)", first.Entry, 100*first.FirstOrder)
	case first.FirstOrder > 0:
		s += fmt.Sprintf("; the greatest part of the doubt comes from %s (%.0f %%)", first.Entry, 100*first.FirstOrder)
	}
	return s + "."
}

// ofDraws puts a share of the draws in words that never round to all or none.
func ofDraws(share float64, draws int) string {
	const least = 0.001
	switch {
	case share == 0:
		return fmt.Sprintf("none of %d draws", draws)
	case share == 1:
		return fmt.Sprintf("all %d draws", draws)
	case share < least:
		return fmt.Sprintf("less than 0.1 %% of %d draws", draws)
	case share > 1-least:
		return fmt.Sprintf("more than 99.9 %% of %d draws", draws)
	}
	return perCent(share) + fmt.Sprintf(" of %d draws", draws)
}
