package plan

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"pairspan/scenarios"
	"pairspan/sources"
)

// Measurements that may remove doubt.
const (
	twoBases    = "two_visibilities"
	tomography  = "tomography"
	lossThere   = "loss_at_wavelength"
	calibration = "detector_calibration"
	atSource    = "counts_at_source"
)

// countsPerBasis are the coincidences that a measurement of visibilities is
// taken to count in each basis; its error follows from them.
const countsPerBasis = 10_000

// measureNext ranks the measurements by the spread of the usable rate that
// each would leave: from 5 % at worst to 95 % at best, by the same random
// numbers as now. One that would narrow nothing is left out. Only doubt that
// the scenario states counts; a default is taken as it is.
func (d *draws) measureNext(ctx context.Context) ([]Measurement, error) {
	found := []Measurement{}
	now, err := d.spread(ctx)
	if err != nil {
		return nil, err
	}
	consider := func(name, what string, entries []string, then *draws) error {
		if len(entries) == 0 {
			return nil
		}
		left, err := then.spread(ctx)
		if left < now {
			found = append(found, Measurement{
				Name: name, Entries: entries, SpreadNow: now, SpreadThen: left,
				Sentence: fmt.Sprintf("%s would narrow the range of the usable rate from %s to %s.", what, bare(now), bps(left)),
			})
		}
		return err
	}
	state := d.stateEntries()
	for _, m := range []struct{ name, what string }{
		{twoBases, fmt.Sprintf("Visibilities in two bases (%d coincidences each)", countsPerBasis)},
		{tomography, fmt.Sprintf("A tomography (%d coincidences a pair of bases), which also tells how to turn the analysers,", countsPerBasis)},
	} {
		if err := consider(m.name, m.what, state, d.withState(state)); err != nil {
			return nil, err
		}
	}
	losses := d.entries(isLoss)
	if err := consider(lossThere, "The arms' losses measured at the wavelength", losses, d.without(losses)); err != nil {
		return nil, err
	}
	for _, name := range d.detectorsInUse() {
		entries := d.entries(func(entry string) bool { return strings.HasPrefix(entry, "detectors."+name+".") })
		if err := consider(calibration, "A calibration of the detector "+name, entries, d.without(entries)); err != nil {
			return nil, err
		}
	}
	emission := d.entries(isEmission)
	if err := consider(atSource, "Singles and coincidences counted at the source", emission, d.without(emission)); err != nil {
		return nil, err
	}
	slices.SortStableFunc(found, func(x, y Measurement) int {
		switch {
		case x.SpreadThen < y.SpreadThen:
			return -1
		case x.SpreadThen > y.SpreadThen:
			return 1
		}
		return 0
	})
	return found, nil
}

// spread returns the range of the usable rate at the installed distance, from
// 5 % of the draws at worst to 95 % at best.
func (d *draws) spread(ctx context.Context) (bps float64, err error) {
	worst, best := make([]float64, d.count), make([]float64, d.count)
	km := d.s.DistanceKm()
	atWorst, atBest := d.hold(km, judged), d.hold(km, atBest)
	err = d.each(ctx, func(w *drawer, i int) {
		worst[i], best[i] = w.most(atWorst), w.most(atBest)
	})
	return quantiles(best).P95 - quantiles(worst).P05, err
}

// entries are the inputs of which a measurement would tell.
func (d *draws) entries(of func(entry string) bool) []string {
	names := []string{}
	for _, in := range d.inputs {
		if of(in.entry) {
			names = append(names, in.entry)
		}
	}
	return names
}

// without returns the draws with some of the inputs settled: as stated.
func (d *draws) without(entries []string) *draws {
	in := slices.Clone(d.inputs)
	for j := range in {
		in[j].settled = in[j].settled || slices.Contains(entries, in[j].entry)
	}
	return newDraws(d.asker, in)
}

// isLoss reports whether an entry is a loss of an arm.
func isLoss(entry string) bool {
	return strings.HasPrefix(entry, "arms.") && (strings.HasSuffix(entry, "_loss_db") || strings.HasSuffix(entry, ".loss_db_per_km"))
}

// isEmission reports whether an entry says how much the source emits.
func isEmission(entry string) bool {
	return entry == "source.pair_rate_hz" || entry == "source.pairs_per_pulse" || strings.HasPrefix(entry, "source.counted.")
}

// detectorsInUse are the names of the detectors that the figures depend on, in
// file order.
func (d *draws) detectorsInUse() (names []string) {
	used := []string{d.s.Arms[scenarios.Alice].Detector, d.s.Arms[scenarios.Bob].Detector}
	if c := &d.s.Source.Counted; c.Used {
		used = append(used, c.Detector[:]...)
	}
	for _, det := range d.s.Detectors {
		if slices.Contains(used, det.Name) {
			names = append(names, det.Name)
		}
	}
	return names
}

// stateEntries are the entries of the state that leave something open.
func (d *draws) stateEntries() []string {
	entries := d.entries(func(entry string) bool { return strings.HasPrefix(entry, "source.state.") })
	name := map[sources.Kind]string{
		sources.TangleKind: "source.state.tangle", sources.ConcurrenceKind: "source.state.concurrence", sources.FidelityKind: "source.state.fidelity",
	}[d.s.Source.State.Kind]
	if name != "" && !slices.Contains(entries, name) {
		entries = append([]string{name}, entries...)
	}
	return entries
}

// withState returns the draws with the state known by visibilities in two
// bases, in place of the entries given. What they will show nobody knows; they
// are taken to show the nominal state, with the error of counting.
func (d *draws) withState(entries []string) *draws {
	s := d.s.Clone()
	setState(s, d.s)
	next := d.without(entries).inputs
	for _, v := range []struct {
		entry string
		value float64
	}{
		{"source.state.visibility.hv", s.Source.State.VisibilityHV},
		{"source.state.visibility.da", s.Source.State.VisibilityDA},
	} {
		if in, err := newInput(v.entry, v.value, visibilitySD(v.value)); err == nil {
			next = append(next, in)
		}
	}
	return newDraws(newAsker(s), next)
}

// visibilitySD returns the standard deviation of a visibility v that was
// counted: of N coincidences a share (1+v)/2 falls on one side, binomially,
// so that it is √((1-v²)/N); where v = 1 one coincidence more would show.
func visibilitySD(v float64) float64 {
	return max(math.Sqrt(max(0, 1-v*v)/countsPerBasis), 1.0/countsPerBasis)
}
