package sources

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// shaped returns a histogram of n bins of 10 ps with the counts that poisson
// draws for a shape.
func shaped(n int, poisson func(float64) float64, shape func(i float64) float64) DelayHistogram {
	var h DelayHistogram
	for i := range n {
		h.DelayPs = append(h.DelayPs, 10*float64(i))
		h.Counts = append(h.Counts, poisson(shape(float64(i))))
	}
	return h
}

func delayBell(x float64) float64 { return math.Exp(-x * x / 2) }

// A flat floor holds no peak, but for a share of histograms of at most
// falseAlarm: of 400, four or more would be a chance of 1 in 1300.
func TestDelayOfAFloorFindsNoPeak(t *testing.T) {
	poisson := poissonFrom(53)
	alarms := 0
	for i := range 400 {
		n, floor := []int{10, 40, 200, 600}[i%4], []float64{0, 0.05, 2, 300}[i/4%4]
		h := shaped(n, poisson, func(float64) float64 { return floor })
		r := mustDelay(t, h, DelayOptions{})
		if r.Kind != NoPeak {
			alarms++
			continue
		}
		mean := h.total() / float64(n)
		near(t, "floor", r.FloorPerBin.Value, mean, 1e-9*mean)
		near(t, "its deviation", r.FloorPerBin.SD, math.Sqrt(max(mean, 1/float64(n))/float64(n)), 1e-9)
		if r.DelayPs.Known() || r.CAR.Known() || r.Coincidences.Known() || !(r.CoincidencesLimit > 0) || !says(r.Told, "No peak stands above the floor") {
			t.Fatalf("%+v", r)
		}
	}
	if alarms > 3 {
		t.Errorf("%d peaks in 400 flat floors", alarms)
	}
}

// A peak of as many coincidences as the limit is found in 97 of 100 cases or
// more: of 100 at least 92, which with 97 % fails once in 150 times. The limit is
// no more than it need be: with a quarter of it half go unnoticed.
func TestDelayLimitIsFound(t *testing.T) {
	poisson := poissonFrom(54)
	for _, n := range []int{20, 200} {
		for _, floor := range []float64{0, 1, 50} {
			limit := mustDelay(t, shaped(n, poisson, func(float64) float64 { return floor }), DelayOptions{}).CoincidencesLimit
			d := delayTruth{bins: n, bin: 10, delay: 4.5 * float64(n), fwhm: float64(n), pairs: limit, floor: floor}
			found := func(pairs float64) (times int) {
				d.pairs = pairs
				for range 100 {
					if mustDelay(t, d.histogram(poisson), DelayOptions{}).Kind != NoPeak {
						times++
					}
				}
				return times
			}
			if all, few := found(limit), found(limit/4); all < 92 || few > 50 {
				t.Errorf("%d bins, floor %g: found in %d of 100 cases with %g coincidences, in %d with a quarter of them", n, floor, all, limit, few)
			}
		}
	}
}

// What is not a Gaussian on a flat floor is said to be none, and what is not a
// comb of peaks is not taken for one.
func TestDelayOddShapesAreDoubted(t *testing.T) {
	const n, c, w = 600, 240.0, 9.0
	for name, x := range map[string]struct {
		shape func(i float64) float64
		want  string
	}{
		"exponential":       {func(i float64) float64 { return 10 + 2000*math.Exp(-math.Abs(i-c)/w) }, "scatter more about the fit"},
		"one-sided":         {func(i float64) float64 { return 10 + 2000*math.Exp(-(i-c)/w)*math.Min(1, math.Max(0, 1e9*(i-c))) }, "scatter more about the fit"},
		"Lorentzian":        {func(i float64) float64 { return 10 + 2000/(1+(i-c)*(i-c)/w/w) }, "scatter more about the fit"},
		"echo":              {func(i float64) float64 { return 10 + 2000*delayBell((i-c)/w) + 200*delayBell((i-c-80)/w) }, "scatter more about the fit"},
		"slope":             {func(i float64) float64 { return 10 + i/10 + 2000*delayBell((i-c)/w) }, "scatter more about the fit"},
		"slope and no peak": {func(i float64) float64 { return 100 + i/2 }, "hard to tell apart"},
		"at the edge":       {func(i float64) float64 { return 10 + 2000*delayBell((i-n+3)/w) }, "at the edge"},
		"wide":              {func(i float64) float64 { return 10 + 2000*delayBell((i-c)/100) }, "as wide as a third"},
		"one bin":           {func(i float64) float64 { return 10 + 2000*(1-math.Min(1, math.Abs(i-c))) }, "narrower than a bin"},
		"no floor":          {func(i float64) float64 { return 2000 * delayBell((i-c)/w) }, "Hardly anything was counted beside the peak"},
		"smoothed":          {func(i float64) float64 { return 1000 + 20000*delayBell((i-c)/w) }, "scatter less"},
	} {
		poisson := poissonFrom(55)
		if name == "smoothed" {
			poisson = math.Round
		}
		r := mustDelay(t, shaped(n, poisson, x.shape), DelayOptions{})
		if r.Kind != OnePeak || !says(r.Doubts, x.want) {
			t.Errorf("%s: kind %d, %q", name, r.Kind, r.Doubts)
		}
	}
}

// Peaks of one height all: none is said to hold pairs.
func TestDelayOfEqualPeaks(t *testing.T) {
	poisson := poissonFrom(56)
	for range 20 {
		d := delayTruth{bins: 2000, first: -10_000, bin: 10, delay: 130, fwhm: 180, side: 1000, period: 1000, floor: 3}
		r := mustDelay(t, d.histogram(poisson), DelayOptions{})
		if r.Kind != PulsedPeaks || !says(r.Doubts, "No peak stands above the others") {
			t.Errorf("kind %d, %q, coincidences %v", r.Kind, r.Doubts, r.Coincidences)
		}
		near(t, "period", r.PeriodPs.Value, 1000, 5*r.PeriodPs.SD)
		near(t, "counts in a side peak", r.SidePeak.Value, 1000, 5*r.SidePeak.SD)
	}
}

// The peak in one bin is known to within that bin, and its area all the same.
func TestDelayOfAPeakInOneBin(t *testing.T) {
	h := shaped(100, poissonFrom(57), func(i float64) float64 { return 20 + 5000*(1-math.Min(1, math.Abs(i-40))) })
	r := mustDelay(t, h, DelayOptions{})
	near(t, "delay", r.DelayPs.Value, 400, 5)
	near(t, "its deviation", r.DelayPs.SD, 10/math.Sqrt(12), 1e-9)
	near(t, "coincidences", r.Coincidences.Value, 5000, 4*r.Coincidences.SD)
	near(t, "window", r.WindowPs, 20, 1e-9)
	if !(r.FWHMPs.Value < 6) || !(r.Coincidences.SD < 100) {
		t.Errorf("%+v", r)
	}
}

func TestDelayRefusesWhatCannotBe(t *testing.T) {
	good := shaped(40, poissonFrom(58), func(i float64) float64 { return 10 + 500*delayBell((i-20)/3) })
	comb := delayTruths["many pulses"].histogram(poissonFrom(58))
	change := func(f func(h *DelayHistogram)) DelayHistogram {
		h := DelayHistogram{slices.Clone(good.DelayPs), slices.Clone(good.Counts)}
		f(&h)
		return h
	}
	for _, x := range []struct {
		name   string
		h      DelayHistogram
		window float64
		want   string
	}{
		{"none", DelayHistogram{}, 0, "the histogram has 0 bins; it takes 8 to 100000"},
		{"few", DelayHistogram{good.DelayPs[:7], good.Counts[:7]}, 0, "the histogram has 7 bins"},
		{"lengths", DelayHistogram{good.DelayPs, good.Counts[:7]}, 0, "the histogram has 40 delays and 7 counts"},
		{"window", good, -1, "the window is -1 ps"},
		{"window NaN", good, math.NaN(), "the window is NaN ps"},
		{"long window", comb, 1200, "the window of 1200 ps is longer than the period of the pulses, "},
		{"NaN", change(func(h *DelayHistogram) { h.DelayPs[3] = math.NaN() }), 0, "bin 4 of the histogram has the delay NaN ps"},
		{"negative", change(func(h *DelayHistogram) { h.Counts[3] = -1 }), 0, "bin 4 of the histogram, at 30 ps, has -1 counts"},
		{"fraction", change(func(h *DelayHistogram) { h.Counts[3] = 1.5 }), 0, "has 1.5 counts; give whole numbers"},
		{"infinite", change(func(h *DelayHistogram) { h.Counts[3] = math.Inf(1) }), 0, "has +Inf counts"},
		{"twice", change(func(h *DelayHistogram) { h.DelayPs[3] = 20 }), 0, "do not rise at 20 ps"},
		{"falling", change(func(h *DelayHistogram) { slices.Reverse(h.DelayPs) }), 0, "do not rise at 380 ps"},
		{"one missing", change(func(h *DelayHistogram) {
			h.DelayPs, h.Counts = slices.Delete(h.DelayPs, 3, 4), slices.Delete(h.Counts, 3, 4)
		}), 0, "not of equal width: most are 10 ps, but not the one at 40 ps; give every bin, also those with 0 counts"},
		{"wider later", change(func(h *DelayHistogram) {
			for i := 30; i < 40; i++ {
				h.DelayPs[i] = 290 + 20*float64(i-29)
			}
		}), 0, "not of equal width"},
	} {
		if _, err := x.h.Fit(DelayOptions{WindowPs: x.window}); err == nil || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%s: got %v, want ... %s ...", x.name, err, x.want)
		}
	}
	rounded := change(func(h *DelayHistogram) {
		for i := range h.DelayPs {
			h.DelayPs[i] = math.Round(h.DelayPs[i] * 0.4137)
		}
	})
	if _, err := rounded.Fit(DelayOptions{}); err != nil {
		t.Errorf("delays rounded to a quarter of a bin: %v", err)
	}
}
