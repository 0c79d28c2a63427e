package sources

import (
	"math"
	"slices"
	"testing"
)

// Share of a Gaussian in a window, as printed by Neumann et al., PRA 104, 022406
// (2021): from memory, and recomputed.
func TestPublishedDelayWindowShare(t *testing.T) {
	for _, x := range []struct{ ratio, want float64 }{{0.5, 0.443941}, {1, 0.760968}, {2, 0.981468}} {
		got, slope := delayWindowShare(x.ratio*180, 180)
		near(t, "window share", got, x.want, 5e-7)
		up, _ := delayWindowShare(x.ratio*180, 180.01)
		down, _ := delayWindowShare(x.ratio*180, 179.99)
		near(t, "its slope", slope, (up-down)/0.02, 1e-8)
	}
}

// All bins together hold the whole of each peak, and no bin loses digits in the
// tail: the share of a bin far out is the density times the width.
func TestDelayModelIsAnIntegral(t *testing.T) {
	for _, fwhm := range []float64{0.1, 0.7, 3, 12} {
		m := newDelayModel(make([]float64, 200), false, 0)
		mean := make([]float64, 200)
		m.expect([]float64{1, 0, 0, 99.3, 0, fwhm}, mean, nil)
		sum := 0.0
		for _, x := range mean {
			sum += x
		}
		near(t, "sum over the bins", sum, 1, 1e-13)
	}
	// Of the middle times the width h the integral differs by z²h²/24.
	a, b := newPeakEdge(6), newPeakEdge(6.001)
	middle := math.Exp(-6.0005*6.0005/2) / rootTwoPi * 0.001
	near(t, "share in the tail", b.shareAbove(a)/middle, 1, 2e-6)
	near(t, "share in the other tail", newPeakEdge(-6).shareAbove(newPeakEdge(-6.001))/middle, 1, 2e-6)
}

// Coincidences and accidentals in the window and their ratio follow from area,
// floor and width; without a floor the ratio of pulsed peaks is the excess of the
// tallest over a side peak, whatever the window.
func TestDelayFiguresInTheWindow(t *testing.T) {
	for _, name := range []string{"usual", "many pulses"} {
		d := delayTruths[name]
		h := d.histogram(poissonFrom(60))
		side := 0.0
		for _, window := range []float64{0, 90, 200, 500} {
			r := mustDelay(t, h, DelayOptions{WindowPs: window})
			if window == 0 {
				near(t, "default window", r.WindowPs, 2*r.FWHMPs.Value, 1e-9)
			}
			w := math.Erf(math.Sqrt(math.Ln2) * r.WindowPs / r.FWHMPs.Value)
			if d.period > 0 {
				side = r.SidePeak.Value
			}
			chance := w*side + r.FloorPerBin.Value*r.WindowPs/r.BinWidthPs
			near(t, "share", r.WindowShare.Value, w, 1e-12)
			near(t, "coincidences", r.CoincidencesInWindow.Value, w*r.Coincidences.Value, 1e-6)
			near(t, "accidentals", r.AccidentalsInWindow.Value, chance, 1e-6)
			near(t, "CAR", r.CAR.Value, w*r.Coincidences.Value/chance, 1e-9)
		}
	}
	d := delayTruths["many pulses"]
	d.floor = 0
	for _, window := range []float64{0, 90, 500} {
		r := mustDelay(t, d.histogram(poissonFrom(61)), DelayOptions{WindowPs: window})
		near(t, "CAR without a floor", r.CAR.Value, r.Coincidences.Value/r.SidePeak.Value, 1e-3*r.CAR.Value)
	}
}

// A histogram shifted, stretched or turned about has its figures shifted,
// stretched and turned about.
func TestDelayDoesNotDependOnTheAxis(t *testing.T) {
	for _, name := range []string{"usual", "dozen", "off-centre"} {
		h := delayTruths[name].histogram(poissonFrom(62))
		r := mustDelay(t, h, DelayOptions{})
		moved := DelayHistogram{slices.Clone(h.DelayPs), h.Counts}
		turned := DelayHistogram{slices.Clone(h.DelayPs), slices.Clone(h.Counts)}
		for i, x := range h.DelayPs {
			moved.DelayPs[i] = 1000 + 3*x
			turned.DelayPs[i] = -x
		}
		slices.Reverse(turned.DelayPs)
		slices.Reverse(turned.Counts)
		m, b := mustDelay(t, moved, DelayOptions{}), mustDelay(t, turned, DelayOptions{})
		tolerance := 1e-3 * r.DelayPs.SD
		near(t, "moved delay", m.DelayPs.Value, 1000+3*r.DelayPs.Value, 3*tolerance)
		near(t, "its deviation", m.DelayPs.SD, 3*r.DelayPs.SD, tolerance)
		near(t, "stretched width", m.FWHMPs.Value, 3*r.FWHMPs.Value, 3*tolerance)
		near(t, "coincidences", m.Coincidences.Value, r.Coincidences.Value, 1e-3*r.Coincidences.SD)
		near(t, "ratio", m.CAR.Value, r.CAR.Value, 1e-3*r.CAR.SD)
		near(t, "turned delay", b.DelayPs.Value, -r.DelayPs.Value, tolerance)
		near(t, "turned width", b.FWHMPs.Value, r.FWHMPs.Value, tolerance)
		near(t, "turned coincidences", b.Coincidences.Value, r.Coincidences.Value, 1e-3*r.Coincidences.SD)
	}
}

// The model integrates over the bins, so bins put together by fours, two thirds
// of a FWHM wide, tell the same peak.
func TestDelayDoesNotDependOnTheBins(t *testing.T) {
	d := delayTruth{bins: 400, first: -2000, bin: 10, delay: 123, fwhm: 60, pairs: 40_000, floor: 12}
	h := d.histogram(poissonFrom(63))
	var coarse DelayHistogram
	for i := 0; i < len(h.Counts); i += 4 {
		coarse.DelayPs = append(coarse.DelayPs, h.DelayPs[i]+15)
		coarse.Counts = append(coarse.Counts, h.Counts[i]+h.Counts[i+1]+h.Counts[i+2]+h.Counts[i+3])
	}
	a, b := mustDelay(t, h, DelayOptions{}), mustDelay(t, coarse, DelayOptions{})
	near(t, "delay", b.DelayPs.Value, a.DelayPs.Value, a.DelayPs.SD)
	near(t, "width", b.FWHMPs.Value, a.FWHMPs.Value, 1.5*a.FWHMPs.SD)
	near(t, "coincidences", b.Coincidences.Value, a.Coincidences.Value, a.Coincidences.SD)
	near(t, "floor", b.FloorPerBin.Value, 4*a.FloorPerBin.Value, a.FloorPerBin.SD)
	if !(b.FWHMPs.SD > a.FWHMPs.SD) {
		t.Errorf("coarse bins tell the width better: %g, %g", b.FWHMPs.SD, a.FWHMPs.SD)
	}
}

// Without a floor the standard deviations of a peak are the textbook ones of N
// counts: √N of the area, σ/√N of the delay, σ/√(2N) of the width, bins being
// narrow.
func TestDelayErrorsOfABarePeak(t *testing.T) {
	d := delayTruth{bins: 1000, first: 0, bin: 1, delay: 500, fwhm: 100, pairs: 1e6, floor: 0}
	r := mustDelay(t, d.histogram(nil), DelayOptions{})
	sigma := 100 / (2 * math.Sqrt(2*math.Ln2))
	near(t, "of the area", r.Coincidences.SD/1e3, 1, 1e-3)
	near(t, "of the delay", r.DelayPs.SD/(sigma/1e3), 1, 2e-3)
	near(t, "of the width", r.FWHMPs.SD/(100/math.Sqrt(2e6)), 1, 2e-3)
}
