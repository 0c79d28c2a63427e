package sources

import (
	"fmt"
	"math"
	"slices"
)

// DelayHistogram is a histogram of the delay between Alice's and Bob's counts,
// in bins of equal width, from the least delay to the greatest.
type DelayHistogram struct {
	DelayPs []float64 // middle of each bin, rising by one width from bin to bin
	Counts  []float64 // whole numbers, 0 or more, as they were counted
}

// DelayOptions is what may be asked of a histogram.
type DelayOptions struct {
	// WindowPs is the full width, centred on the peak, of the coincidence window
	// in which coincidences and accidentals are compared; 0 for two FWHM of the
	// peak (one to each side), which hold 98.1 % of a Gaussian.
	WindowPs float64
}

// PeakKind says what stands above the floor of a histogram.
type PeakKind int

// The kinds of histogram.
const (
	NoPeak      PeakKind = iota // nothing
	OnePeak                     // one peak, as a continuous pump makes
	PulsedPeaks                 // peaks at a common period, all of one height but the one that holds the pairs
)

// Bounds of a histogram.
const (
	delayLeastBins = 8
	delayMostBins  = 100_000
	delayMostPs    = 1e15
	// delayOffGrid is how far off, in bins, the middle of a bin may be: delays
	// are often printed with few digits.
	delayOffGrid = 0.25
)

// binPs returns the width of a bin.
func (h DelayHistogram) binPs() float64 {
	n := len(h.DelayPs)
	return (h.DelayPs[n-1] - h.DelayPs[0]) / float64(n-1)
}

// total returns the number of counts.
func (h DelayHistogram) total() float64 {
	sum := 0.0
	for _, x := range h.Counts {
		sum += x
	}
	return sum
}

// check returns an error for a histogram that cannot be fitted.
func (h DelayHistogram) check() error {
	n := len(h.DelayPs)
	if n != len(h.Counts) {
		return fmt.Errorf("the histogram has %d delays and %d counts; give one count for each delay", n, len(h.Counts))
	}
	if n < delayLeastBins || n > delayMostBins {
		return fmt.Errorf("the histogram has %d bins; it takes %d to %d to tell a peak from its floor: record a wider range of delays, or put bins together", n, delayLeastBins, delayMostBins)
	}
	for i, y := range h.Counts {
		if x := h.DelayPs[i]; !(math.Abs(x) <= delayMostPs) {
			return fmt.Errorf("bin %d of the histogram has the delay %g ps, which no measurement gives; check the table", i+1, x)
		}
		if !(y >= 0 && y <= maxCount) || y != math.Trunc(y) {
			return fmt.Errorf("bin %d of the histogram, at %.6g ps, has %g counts; give whole numbers, 0 or more, as they were counted", i+1, h.DelayPs[i], y)
		}
	}
	return h.checkBins()
}

// checkBins returns an error unless the delays rise by equal steps.
func (h DelayHistogram) checkBins() error {
	steps := make([]float64, len(h.DelayPs)-1)
	for i := range steps {
		if steps[i] = h.DelayPs[i+1] - h.DelayPs[i]; !(steps[i] > 0) {
			return fmt.Errorf("the delays of the histogram do not rise at %.8g ps; give each bin once, from the least delay to the greatest", h.DelayPs[i+1])
		}
	}
	sorted := slices.Clone(steps)
	slices.Sort(sorted)
	usual := sorted[len(sorted)/2]
	for i, step := range steps {
		if math.Abs(step-usual) > 2*delayOffGrid*usual {
			return unequalBins(usual, h.DelayPs[i+1])
		}
	}
	width := h.binPs()
	for i, x := range h.DelayPs {
		if off := (x-h.DelayPs[0])/width - float64(i); math.Abs(off) > delayOffGrid {
			return unequalBins(usual, x)
		}
	}
	return nil
}

// unequalBins returns the error that the bin at x is not as wide as most.
func unequalBins(usual, x float64) error {
	return fmt.Errorf("the bins of the histogram are not of equal width: most are %.6g ps, but not the one at %.8g ps; give every bin, also those with 0 counts, or put bins together to equal widths", usual, x)
}
