package sources

import (
	"fmt"
	"math"
	"slices"
)

// delayWindowFWHM is the full width of the window, in FWHM, where none is asked
// for; it is at least as many bins.
const delayWindowFWHM = 2

// blank returns a result in which nothing is known.
func (h DelayHistogram) blank() DelayFit {
	u := unknownEstimate
	return DelayFit{
		BinWidthPs: h.binPs(), DelayPs: u, FWHMPs: u, Coincidences: u, FloorPerBin: u, PeriodPs: u, SidePeak: u,
		WindowPs: math.NaN(), WindowShare: u, CoincidencesInWindow: u, AccidentalsInWindow: u, CAR: u, CoincidencesLimit: math.NaN(),
	}
}

// report writes the result of a fit down.
func (h DelayHistogram) report(m *delayModel, f fitted, o DelayOptions) (DelayFit, error) {
	r := h.blank()
	m.settle(&f)
	r.fit, r.Fitted, r.Kind = f, f.mean, OnePeak
	r.DelayPs = f.estimate(delayCentre).scaled(r.BinWidthPs)
	r.DelayPs.Value += h.DelayPs[0]
	r.FWHMPs = f.estimate(delayFWHM).scaled(r.BinWidthPs)
	r.Coincidences, r.FloorPerBin = f.estimate(delayPairs), f.estimate(delayFloor)
	if m.pulsed {
		r.Kind = PulsedPeaks
		r.PeriodPs = f.estimate(delayPeriod).scaled(r.BinWidthPs)
		r.SidePeak = f.estimate(delaySide)
		r.SidePeaks = m.sidePeaks(f.theta)
	}
	r.WindowPs = o.WindowPs
	if o.WindowPs == 0 {
		r.WindowPs = delayWindowFWHM * max(r.FWHMPs.Value, r.BinWidthPs)
	} else if m.pulsed && o.WindowPs > r.PeriodPs.Value {
		return DelayFit{}, fmt.Errorf("the window of %.4g ps is longer than the period of the pulses, %.4g ps; choose one that holds one peak", o.WindowPs, r.PeriodPs.Value)
	}
	r.compare()
	r.judge(h.Counts, m.fit.freeParameters(f))
	r.say(m)
	return r, nil
}

// sidePeaks returns how many side peaks have their middle in the histogram.
func (m *delayModel) sidePeaks(theta []float64) int {
	last := float64(len(m.fit.counts)) - 0.5
	return int(math.Floor((theta[delayCentre]+0.5)/theta[delayPeriod])) + int(math.Floor((last-theta[delayCentre])/theta[delayPeriod]))
}

// settle sets the standard deviations where the information fails: a floor
// below it has that of one count in all bins beside the peaks, and when the
// counts do not tell how wide a narrow peak is, its delay is that of its bin,
// and its width anything up to one.
func (m *delayModel) settle(f *fitted) {
	if least := 1 / m.binsBeside(*f); f.theta[delayFloor] < least {
		theta := slices.Clone(f.theta)
		theta[delayFloor] = least
		w := m.fit.workspace()
		w.derive(theta)
		f.covariance, f.told = w.covariance()
	}
	width := f.estimate(delayFWHM)
	told := f.told[delayCentre] && f.told[delayPeriod] && width.SD < width.Value/2
	if width.Value < delayUnresolved && !told {
		f.set(delayCentre, 1/math.Sqrt(12))
		f.set(delayFWHM, 1)
		if first, last := m.peaks(f.theta, len(f.mean)); m.pulsed {
			f.set(delayPeriod, 1/math.Sqrt(6)/float64(max(1, last, -first)))
		}
	}
}

// delayUnresolved is the width of a peak, in bins, below which it may all lie in
// one bin.
const delayUnresolved = 0.6

// set sets the standard deviation of a parameter, which then goes with no
// other's.
func (f *fitted) set(p int, sd float64) {
	for q := range f.covariance {
		f.covariance[p][q], f.covariance[q][p] = 0, 0
	}
	f.covariance[p][p] = sd * sd
}

// binsBeside returns in how many bins the peaks bring less than one count, 1 at
// least.
func (m *delayModel) binsBeside(f fitted) float64 {
	bins := 0.0
	for _, x := range f.mean {
		if x-f.theta[delayFloor] < 1 {
			bins++
		}
	}
	return max(1, bins)
}

// compare fills in coincidences and accidentals in the window, and their ratio.
func (r *DelayFit) compare() {
	f, window := r.fit, r.WindowPs/r.BinWidthPs
	w, slope := delayWindowShare(window, f.theta[delayFWHM])
	share, inside, chance, ratio := make([]float64, delayParameters), make([]float64, delayParameters), make([]float64, delayParameters), make([]float64, delayParameters)
	share[delayFWHM] = slope
	inside[delayPairs], inside[delayFWHM] = w, slope*f.theta[delayPairs]
	chance[delaySide], chance[delayFloor], chance[delayFWHM] = w, window, slope*f.theta[delaySide]
	pairs := w * f.theta[delayPairs]
	accidentals := w*f.theta[delaySide] + window*f.theta[delayFloor]
	r.WindowShare = f.derived(w, share)
	r.CoincidencesInWindow = f.derived(pairs, inside)
	r.AccidentalsInWindow = f.derived(accidentals, chance)
	if accidentals > 0 {
		for p := range ratio {
			ratio[p] = (inside[p] - pairs/accidentals*chance[p]) / accidentals
		}
		r.CAR = f.derived(pairs/accidentals, ratio)
	}
}

// judge fills in how well the histogram is fitted.
func (r *DelayFit) judge(counts []float64, parameters int) {
	chi2, groups := groupedChi2(counts, r.Fitted)
	r.Chi2, r.DegreesOfFreedom = chi2, max(0, groups-parameters)
	r.Chance = chanceOf(chi2, r.DegreesOfFreedom)
}

// reportNone writes down that there is no peak.
func (h DelayHistogram) reportNone(s delaySearch) DelayFit {
	r := h.blank()
	bins := float64(len(h.Counts))
	floor := h.total() / bins
	r.FloorPerBin = Estimate{floor, math.Sqrt(max(floor, 1/bins) / bins)}
	r.CoincidencesLimit = s.leastPeak(max(1, len(h.Counts)/5))
	r.Fitted = make([]float64, len(h.Counts))
	for i := range r.Fitted {
		r.Fitted[i] = floor
	}
	r.judge(h.Counts, 1)
	r.sayNone()
	return r
}
