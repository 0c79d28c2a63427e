package sources

import (
	"math"
	"testing"
)

// delayTruth is what a histogram is made of; lengths in ps, counts as in
// DelayFit.
type delayTruth struct {
	bins               int
	first, bin         float64
	delay, fwhm        float64
	pairs, side, floor float64
	period             float64 // 0: one peak
}

// histogram returns the counts as poisson draws them; nil draws the mean,
// rounded. The share of a peak in a bin is Simpson's rule on a fine grid, not
// the model's own integral.
func (d delayTruth) histogram(poisson func(mean float64) float64) DelayHistogram {
	if poisson == nil {
		poisson = math.Round
	}
	var h DelayHistogram
	for i := range d.bins {
		x := d.first + float64(i)*d.bin
		h.DelayPs = append(h.DelayPs, x)
		h.Counts = append(h.Counts, poisson(d.mean(x)))
	}
	return h
}

func (d delayTruth) mean(x float64) float64 {
	sum := d.floor + d.pairs*d.simpson(x-d.delay)
	if d.period > 0 {
		for j := math.Floor((x - d.delay - 10*d.fwhm) / d.period); j <= (x-d.delay+10*d.fwhm)/d.period; j++ {
			sum += d.side * d.simpson(x-d.delay-j*d.period)
		}
	}
	return sum
}

// simpson returns the integral of the peak over the bin with its middle at x.
func (d delayTruth) simpson(x float64) float64 {
	steps := 2 * int(math.Ceil(20*d.bin/d.fwhm))
	if math.Abs(x) > 5*d.fwhm+d.bin {
		return 0
	}
	g := func(x float64) float64 {
		return math.Exp(-4*math.Ln2*x*x/(d.fwhm*d.fwhm)) * 2 * math.Sqrt(math.Ln2/math.Pi) / d.fwhm
	}
	sum := 0.0
	for k := range steps + 1 {
		weight := 2.0 + 2*float64(k%2)
		if k == 0 || k == steps {
			weight = 1
		}
		sum += weight * g(x-d.bin/2+d.bin*float64(k)/float64(steps))
	}
	return sum * d.bin / float64(steps) / 3
}

func (d delayTruth) figures(r DelayFit) (found []Estimate, want []float64) {
	w, _ := delayWindowShare(r.WindowPs, d.fwhm)
	chance := w*d.side + d.floor*r.WindowPs/d.bin
	found = []Estimate{r.DelayPs, r.FWHMPs, r.Coincidences, r.FloorPerBin, r.CoincidencesInWindow, r.AccidentalsInWindow, r.CAR}
	want = []float64{d.delay, d.fwhm, d.pairs, d.floor, w * d.pairs, chance, w * d.pairs / chance}
	if d.period > 0 {
		found, want = append(found, r.PeriodPs, r.SidePeak), append(want, d.period, d.side)
	}
	return found, want
}

func mustDelay(t *testing.T, h DelayHistogram, o DelayOptions) DelayFit {
	t.Helper()
	r, err := h.Fit(o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// delayTruths are histograms of a dozen bins to 20,000, with little floor and
// much, with pulses and without.
var delayTruths = map[string]delayTruth{
	"usual":         {bins: 400, first: -2000, bin: 10, delay: 123, fwhm: 180, pairs: 4000, floor: 12},
	"dozen":         {bins: 12, first: -60, bin: 10, delay: 3, fwhm: 25, pairs: 900, floor: 12},
	"high floor":    {bins: 1000, first: 0, bin: 4, delay: 2900, fwhm: 60, pairs: 6000, floor: 900},
	"little floor":  {bins: 4000, first: -20_000, bin: 10, delay: 130, fwhm: 180, pairs: 400, floor: 0.1},
	"long":          {bins: 20_000, first: -1e5, bin: 10, delay: -61_234, fwhm: 90, pairs: 3000, floor: 3},
	"pulses":        {bins: 20_000, first: -1e5, bin: 10, delay: 130, fwhm: 180, pairs: 4e5, side: 1000, period: 12_500, floor: 0.1},
	"few counts":    {bins: 12_000, first: -6e4, bin: 10, delay: 130, fwhm: 180, pairs: 4000, side: 40, period: 12_500, floor: 0.02},
	"many pulses":   {bins: 2000, first: -1e4, bin: 10, delay: 130, fwhm: 180, pairs: 700, side: 1000, period: 1000, floor: 3},
	"dense pulses":  {bins: 5000, first: -25_000, bin: 10, delay: 130, fwhm: 30, pairs: 5000, side: 100, period: 100, floor: 3},
	"coarse pulses": {bins: 2000, first: -1e5, bin: 100, delay: 130, fwhm: 180, pairs: 4000, side: 100, period: 12_500, floor: 1},
	"off-centre":    {bins: 3000, first: 0, bin: 25, delay: 4000, fwhm: 300, pairs: 9000, side: 300, period: 10_000, floor: 0.4},
}

// One histogram of each, fixed seed: the right kind, every figure within four
// standard deviations, and a fit that is not doubted.
func TestDelayFindsThePeakInNoise(t *testing.T) {
	for name, d := range delayTruths {
		r := mustDelay(t, d.histogram(poissonFrom(51)), DelayOptions{})
		want := OnePeak
		if d.period > 0 {
			want = PulsedPeaks
		}
		if r.Kind != want || len(r.Doubts) > 0 {
			t.Errorf("%s: kind %d, want %d; %q", name, r.Kind, want, r.Doubts)
			continue
		}
		found, truth := d.figures(r)
		for i, e := range found {
			if z := (e.Value - truth[i]) / e.SD; !(math.Abs(z) < 4) {
				t.Errorf("%s: figure %d is %.6g +- %.2g, want %.6g", name, i, e.Value, e.SD, truth[i])
			}
		}
		if !(r.Coincidences.SD < 0.2*d.pairs) || !(r.FWHMPs.SD < 0.2*d.fwhm) {
			t.Errorf("%s: deviations %.2g of the coincidences and %.2g of the width say nothing", name, r.Coincidences.SD, r.FWHMPs.SD)
		}
	}
}

// So many counts that noise and rounding to whole numbers vanish give back the
// peak that made them; the integral over the bins is done twice (see simpson).
func TestDelayOfExactCountsFindsThePeak(t *testing.T) {
	for name, d := range delayTruths {
		d.pairs, d.side, d.floor = d.pairs*1e7, d.side*1e7, d.floor*1e7
		r := mustDelay(t, d.histogram(nil), DelayOptions{WindowPs: 2.5 * d.fwhm})
		found, truth := d.figures(r)
		for i, e := range found {
			if off := math.Abs(e.Value - truth[i]); !(off < 1e-5*math.Abs(truth[i])+0.3*e.SD) {
				t.Errorf("%s: figure %d is %.9g +- %.2g, want %.9g", name, i, e.Value, e.SD, truth[i])
			}
		}
		if !(r.Chi2 < 0.05*float64(r.DegreesOfFreedom)) {
			t.Errorf("%s: chi-squared %g of exact counts", name, r.Chi2)
		}
	}
}

// Over many histograms the bars of one and two standard deviations hold the
// truth in 68 % and 95 %, and the scatter is as wide as the bars; tolerance as
// for the power scan.
func TestDelayErrorBarsHold(t *testing.T) {
	repetitions := 200
	if slowTests() {
		repetitions = 2000
	}
	for _, d := range []delayTruth{
		{bins: 80, first: -400, bin: 10, delay: 23, fwhm: 60, pairs: 3000, floor: 40},
		{bins: 120, first: -600, bin: 10, delay: 23, fwhm: 40, pairs: 3000, side: 400, period: 175, floor: 10},
	} {
		poisson := poissonFrom(52)
		var zs [9][]float64
		for range repetitions {
			r := mustDelay(t, d.histogram(poisson), DelayOptions{})
			found, truth := d.figures(r)
			for i, e := range found {
				zs[i] = append(zs[i], (e.Value-truth[i])/e.SD)
			}
		}
		for i, z := range zs {
			if len(z) > 0 {
				checkCoverage(t, i, z)
			}
		}
	}
}
