package sources

import (
	"cmp"
	"fmt"
	"slices"
)

// DelayFit is what a delay histogram says. An Estimate that it does not give is
// unknown (NaN).
type DelayFit struct {
	Kind       PeakKind
	BinWidthPs float64

	DelayPs      Estimate // middle of the peak that holds the pairs
	FWHMPs       Estimate // width of each peak
	Coincidences Estimate // area of that peak, in counts, above the floor and above what a side peak holds
	FloorPerBin  Estimate // counts of a bin beside all peaks

	// PeriodPs and SidePeak, the counts in one side peak, are of pulsed peaks
	// only; SidePeaks is how many of them have their middle in the histogram.
	PeriodPs  Estimate
	SidePeak  Estimate
	SidePeaks int

	// In the window of full width WindowPs around the peak: the coincidences, the
	// accidentals (floor, and for pulsed peaks a side peak) and their ratio. The
	// window counts as exact. Without accidentals the ratio is unknown.
	WindowPs             float64
	WindowShare          Estimate // share of the coincidences inside
	CoincidencesInWindow Estimate
	AccidentalsInWindow  Estimate
	CAR                  Estimate

	// CoincidencesLimit is, without a peak, how many counts one of a FWHM up to a
	// tenth of the histogram must have brought at least to be found in 97 of 100
	// cases; NaN otherwise.
	CoincidencesLimit float64

	Chi2             float64 // Pearson's, of neighbouring bins put together to 10 counts expected or more
	DegreesOfFreedom int
	Chance           float64 // of a greater Chi2 if the model holds, 0 to 1; NaN without degrees of freedom

	Fitted []float64 // counts expected in each bin

	Told   []string // sentences: what was found, and how the figures are meant
	Doubts []string // sentences: what is amiss

	fit fitted
}

// Fit finds the peak of the coincidences and fits it by the Poisson likelihood
// of the counts ([1]): a Gaussian on a flat floor, integrated over each bin.
// Where peaks at a common period stand out, as a pulsed pump makes them, they
// are fitted together with one width, one period and one height, except the
// tallest, which holds the pairs: its coincidences are what it has more than the
// others. That takes two side peaks, and a period of three bins or more. The
// start is found in the histogram itself.
//
// With a window of full width τ around the peak, w its share of a Gaussian, b
// the width of a bin, c the coincidences, s the counts of a side peak (0 with
// one peak) and f the floor
//
//	coincidences in it = w c     accidentals in it = w s + f τ/b     CAR = their ratio
//
// Standard deviations are those of the likelihood's information. A peak
// narrower than a bin has a width that is vague, and one below a tenth of a bin
// counts as that wide.
//
// It returns an error when the histogram has less than 8 or more than 100,000
// bins, unequal bins or counts that are not whole, or when the window is
// negative, or longer than the period of the pulses. A histogram without a peak
// is no error: Kind is NoPeak.
//
// [1] Baker et al. (1984). Nucl. Instrum. Methods 221, 437.
func (h DelayHistogram) Fit(o DelayOptions) (DelayFit, error) {
	if err := h.check(); err != nil {
		return DelayFit{}, err
	}
	if !(o.WindowPs >= 0 && o.WindowPs <= delayMostPs) {
		return DelayFit{}, fmt.Errorf("the window is %g ps; it must be above 0, or 0 for two FWHM of the peak", o.WindowPs)
	}
	search := newDelaySearch(h.Counts)
	box, found := search.tallest()
	if !found {
		return h.reportNone(search), nil
	}
	if comb, found := search.comb(box); found {
		if m, f := h.fitPulsed(comb); f.theta[delaySide] > 3*f.estimate(delaySide).SD {
			return h.report(m, f, o)
		}
	}
	m, f := h.fitOne(search, box)
	return h.report(m, f, o)
}

// widthsOfBox are the FWHM from which a fit may start, as shares of the width
// of the box that stands out most: that is 1.2 FWHM on a high floor and holds the
// whole peak on a low one.
var widthsOfBox = [...]float64{0.3, 0.5, 0.8, 1.2, 1.8}

// startsTried is how many of the likeliest starts are followed.
const startsTried = 2

// fitOne fits one peak.
func (h DelayHistogram) fitOne(s delaySearch, box delayBox) (*delayModel, fitted) {
	m := newDelayModel(h.Counts, false, 0)
	n, width := float64(len(h.Counts)), float64(box.width)
	inside := s.in(box)
	floor := (s.below[len(h.Counts)] - inside) / (n - width)
	start := []float64{max(inside-floor*width, 1), 0, max(floor, 0.5/n), box.middle(), 0, 0}
	return m, m.best(delayStarts(start, width, 0))
}

// fitPulsed fits peaks at a common period.
func (h DelayHistogram) fitPulsed(c delayComb) (*delayModel, fitted) {
	m := newDelayModel(h.Counts, true, c.period)
	s := c.sums()
	side := max(s.perSide-s.floorPerBox, 0.5)
	pairs := max(c.search.in(boxAt(c.centre, c.width))-s.perSide, 1)
	floor := max(s.floorPerBox/float64(c.width), 0.5/float64(len(h.Counts)))
	return m, m.best(delayStarts([]float64{pairs, side, floor, c.centre, c.period, 0}, float64(c.hole)/2, c.periodStep()))
}

// delayStarts returns the start with several widths of the peaks, and delays and
// periods about the given ones.
func delayStarts(start []float64, box, periodStep float64) (all [][]float64) {
	periods := []float64{0, -periodStep, periodStep, -2 * periodStep, 2 * periodStep}
	if periodStep == 0 {
		periods = periods[:1]
	}
	for _, share := range widthsOfBox {
		for _, shift := range []float64{0, -0.25, 0.25} {
			for _, longer := range periods {
				x := slices.Clone(start)
				x[delayFWHM] = max(share*box, 0.7)
				x[delayCentre] += shift * x[delayFWHM]
				x[delayPeriod] += longer
				all = append(all, x)
			}
		}
	}
	return all
}

// best returns the best of the fits that begin at the likeliest of the starts.
func (m *delayModel) best(starts [][]float64) fitted {
	type ranked struct {
		start    []float64
		deviance float64
	}
	w := m.fit.workspace()
	all := make([]ranked, len(starts))
	for i, x := range starts {
		m.fit.clip(x)
		all[i] = ranked{x, w.trialDeviance(x)}
	}
	slices.SortStableFunc(all, func(a, b ranked) int { return cmp.Compare(a.deviance, b.deviance) })
	best := m.fit.run(all[0].start)
	for _, x := range all[1:startsTried] {
		if f := m.fit.run(x.start); f.deviance < best.deviance {
			best = f
		}
	}
	return best
}
