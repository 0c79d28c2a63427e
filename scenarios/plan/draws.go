package plan

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// input is a figure that carries a standard deviation: normal, truncated to
// the range of its entry.
type input struct {
	entry     string
	value, sd float64
	scenarios.Range
	fromErf, toErf float64 // error function at the ends of the range
	settled        bool    // known after all: it stays as stated, but uses up its random number
	repetitions    int     // of a tomography, one of which is drawn; 0 for a number
}

func newInput(entry string, value, sd float64) (input, error) {
	in := input{entry: entry, value: value, sd: sd}
	var err error
	in.Range, err = scenarios.NumberRange(entry)
	in.fromErf = math.Erf((in.Lo - value) / (sd * math.Sqrt2))
	in.toErf = math.Erf((in.Hi - value) / (sd * math.Sqrt2))
	return in, err
}

// inputs are the figures of a scenario that carry a standard deviation, in
// file order. A detector that both arms name is one of them.
func inputs(s *scenarios.Scenario) (all []input) {
	for _, d := range s.Deviations {
		at, err := s.Number(d.Entry)
		if err != nil {
			continue // reading keeps deviations of numbers alone
		}
		if in, err := newInput(d.Entry, *at, d.SD); err == nil {
			all = append(all, in)
		}
	}
	return all
}

// at returns the value below which a share u of the truncated distribution
// lies; of a tomography one repetition or another.
func (in *input) at(u float64) float64 {
	if in.repetitions > 0 {
		return 1 + math.Floor(u*float64(in.repetitions))
	}
	return in.Clamp(in.value + math.Sqrt2*in.sd*math.Erfinv(in.fromErf+u*(in.toErf-in.fromErf)))
}

// draws are links drawn from the standard deviations of a scenario.
type draws struct {
	*asker
	inputs []input
	count  int
}

// newDraws prepares to draw; without anything to draw one link is enough.
func newDraws(a *asker, in []input) *draws {
	d := &draws{a, in, 1}
	if slices.ContainsFunc(in, func(in input) bool { return !in.settled }) {
		d.count = int(a.s.Draws)
	}
	return d
}

// each makes every draw. They are shared between the cores, each with random
// numbers of its own, so that the number of cores changes nothing.
func (d *draws) each(ctx context.Context, use func(w *drawer, i int)) error {
	return onCores(ctx, d.count, func() func(int) {
		w := d.drawer()
		return func(i int) {
			w.draw(i)
			use(w, i)
		}
	})
}

// drawer makes draws in a copy of the scenario that is its own.
type drawer struct {
	*draws
	own    *scenarios.Scenario
	at     []*float64 // where the inputs live in it; nil where settled
	stated keyrate.OperatingPoint
	random rand.PCG

	repetition float64 // of the tomography, which of asker.repeats; 0: as fitted
}

// drawer resolves the inputs once for many draws. What does not change from
// one draw to the next is settled: a fibre class's attenuation, which has no
// figure outside its bands, stays that of the wavelength stated, and a density
// matrix that of its two errors.
func (d *draws) drawer() *drawer {
	w := &drawer{draws: d, own: d.s.Clone(), at: make([]*float64, len(d.inputs))}
	for i := range w.own.Arms {
		w.own.Arms[i].LossDBPerKm = d.s.Attenuation(i)
	}
	for j := range d.inputs {
		switch in := &d.inputs[j]; {
		case in.settled:
		case in.repetitions > 0:
			w.at[j] = &w.repetition
		default:
			w.at[j], _ = w.own.Number(in.entry) // as inputs has found it
		}
	}
	switch {
	case d.varies(countsEntry):
		w.own.Source.State = d.repeats[0]
	case d.s.Source.State.Kind == sources.DensityMatrixKind && !d.varies("source.state.measured_car"):
		setState(w.own, d.s)
	}
	w.stated = w.own.Setting()
	return w
}

// varies reports whether an entry is drawn.
func (d *draws) varies(entry string) bool {
	return slices.ContainsFunc(d.inputs, func(in input) bool { return in.entry == entry && !in.settled })
}

// setState gives a scenario the nominal state of another by its two errors.
func setState(to, from *scenarios.Scenario) {
	l := from.Link(from.DistanceKm(), sources.Nominal)
	to.Source.State = sources.FromVisibilities(1-2*l.StateError[keyrate.KeyBasis], 1-2*l.StateError[keyrate.CheckBasis])
	to.Source.MeasuredCAR = math.NaN()
}

// mostTries bounds how often a draw is repeated that counts at the source
// speak against; after that it is the scenario as stated.
const mostTries = 1000

// draw draws link i.
func (w *drawer) draw(i int) {
	w.random.Seed(uint64(w.s.Seed), uint64(i))
	for range mostTries {
		for j := range w.inputs {
			if u := w.uniform(); w.at[j] != nil {
				*w.at[j] = w.inputs[j].at(u)
			}
		}
		if w.settle() {
			return
		}
	}
	w.restore()
}

// restore sets the inputs as stated.
func (w *drawer) restore() {
	for j := range w.inputs {
		if w.at[j] != nil {
			*w.at[j] = w.inputs[j].value
		}
	}
	w.settle()
}

// settle takes over what the scenario states of its settings, and the state
// that a tomography would show; it is false where the counts at its source
// cannot be.
func (w *drawer) settle() bool {
	if w.varies(countsEntry) {
		w.own.Source.State = w.repeats[int(w.repetition)]
	}
	if w.own.Source.Counted.Used {
		if _, err := w.own.Emission(); err != nil {
			return false
		}
	}
	w.stated = w.own.Setting()
	return true
}

// uniform returns a random number above 0 and below 1.
func (w *drawer) uniform() float64 {
	const bits = 53
	return (float64(w.random.Uint64()>>(64-bits)) + 0.5) / (1 << bits)
}

// held is a setting that the plan chose for one member of the state at one
// distance of the link as stated.
type held struct {
	km      float64
	member  sources.Member
	setting keyrate.OperatingPoint
}

// hold chooses the settings of a role's members.
func (a *asker) hold(km float64, r role) (all []held) {
	for _, m := range a.members(r) {
		l := a.s.Link(km, m)
		all = append(all, held{km, m, a.s.Settle(&l, a.setting)})
	}
	return all
}

// rate asks the drawn link. What the plan has searched is held, a pulsed
// pump in pairs per pulse; what the scenario states is what the draw makes of it.
func (w *drawer) rate(km float64, h held) keyrate.Rate {
	p := h.setting
	switch {
	case !w.own.Source.PumpAuto:
		p.PairRateHz = w.stated.PairRateHz
	case w.own.Pulsed():
		p.PairRateHz *= w.own.Source.PulseRateHz / w.s.Source.PulseRateHz
	}
	if !w.own.KeyShareAuto {
		p.KeyShare = w.stated.KeyShare
	}
	l := w.own.Link(km, h.member)
	return l.Key(p)
}

// most returns the usable rate of whichever member makes most at the drawn
// link's own installed distance.
func (w *drawer) most(members []held) (usableBps float64) {
	for _, h := range members {
		r := w.rate(w.own.DistanceKm(), h)
		usableBps = max(usableBps, r.UsableBps)
	}
	return usableBps
}

// quantile returns the point below which a share p of sorted values lies: they
// stand at 0, 1/(n-1), ..., 1, and between two of them it is interpolated.
func quantile(sorted []float64, p float64) float64 {
	at := p * float64(len(sorted)-1)
	below := int(at)
	if part := at - float64(below); part > 0 {
		return sorted[below] + part*(sorted[below+1]-sorted[below])
	}
	return sorted[below]
}

// The points that a band is drawn between.
const lowShare, midShare, highShare = 0.05, 0.5, 0.95

// quantiles sorts the values.
func quantiles(values []float64) Quantiles {
	slices.Sort(values)
	return Quantiles{quantile(values, lowShare), quantile(values, midShare), quantile(values, highShare)}
}
