package sources

import "math"

// Parameters of a histogram, in the order in which the fit holds them. Delays
// and widths are in bins; the middle of the first bin is at 0.
const (
	delayPairs  = iota // counts in the peak at delayCentre above those of a side peak
	delaySide          // counts in each side peak
	delayFloor         // counts in a bin beside all peaks
	delayCentre        // delay of the peak that holds the pairs
	delayPeriod        // distance between peaks
	delayFWHM          // width of each peak
	delayParameters
)

var (
	fwhmOverSigma = 2 * math.Sqrt(2*math.Ln2) // of a Gaussian
	rootTwoPi     = math.Sqrt(2 * math.Pi)
	rootLn2       = math.Sqrt(math.Ln2)
)

// delayTail is how many standard deviations from its middle a peak ends: what
// lies beyond is less than 1e-15 of it.
const delayTail = 8

// delayModel is a histogram ready to be fitted,
//
//	counts of bin i = f + Σ_j (s + [j = 0] c) ∫_i G(x − t₀ − jT) dx
//
// with c pairs, s counts of a side peak, f the floor, t₀ the delay, T the period
// and G a Gaussian of area 1. Without pulses there is only j = 0, and no s.
type delayModel struct {
	pulsed bool
	fit    countFit
}

// newDelayModel prepares the fit of counts to one peak, or to peaks with about
// the given period (in bins).
func newDelayModel(counts []float64, pulsed bool, period float64) *delayModel {
	n, inf := float64(len(counts)), math.Inf(1)
	m := &delayModel{pulsed: pulsed, fit: countFit{counts: counts}}
	off := max(0.1*period, 1.5)
	m.fit.lower = []float64{0, 0, 0, -0.5, period - off, delayLeastFWHM}
	m.fit.upper = []float64{inf, inf, inf, n - 0.5, period + off, 2 * n}
	if pulsed {
		m.fit.upper[delayFWHM] = period
	} else {
		m.fit.upper[delaySide], m.fit.lower[delayPeriod], m.fit.upper[delayPeriod] = 0, 0, 0
	}
	m.fit.model = m.expect
	return m
}

// delayLeastFWHM is the least width of a peak in bins: below it the counts in
// the bins do not depend on it.
const delayLeastFWHM = 0.1

// peaks returns the first and the last j of the peaks that reach into n bins.
func (m *delayModel) peaks(theta []float64, n int) (first, last int) {
	if !m.pulsed {
		return 0, 0
	}
	reach := delayTail * theta[delayFWHM] / fwhmOverSigma
	first = int(math.Ceil((-0.5 - reach - theta[delayCentre]) / theta[delayPeriod]))
	last = int(math.Floor((float64(n) - 0.5 + reach - theta[delayCentre]) / theta[delayPeriod]))
	return min(first, 0), max(last, 0)
}

// expect is the model of the fit.
func (m *delayModel) expect(theta, mean []float64, slopes [][]float64) {
	for i := range mean {
		mean[i] = theta[delayFloor]
	}
	for p := range slopes {
		clear(slopes[p])
	}
	if slopes != nil {
		for i := range mean {
			slopes[delayFloor][i] = 1
		}
	}
	first, last := m.peaks(theta, len(mean))
	for j := first; j <= last; j++ {
		addPeak(theta, j, mean, slopes)
	}
}

// addPeak adds the peak j to what is expected, bin by bin as far as it reaches.
func addPeak(theta []float64, j int, mean []float64, slopes [][]float64) {
	area := theta[delaySide]
	if j == 0 {
		area += theta[delayPairs]
	}
	sigma := theta[delayFWHM] / fwhmOverSigma
	centre := theta[delayCentre] + float64(j)*theta[delayPeriod]
	from := max(0, int(math.Floor(centre-delayTail*sigma)))
	to := min(len(mean)-1, int(math.Ceil(centre+delayTail*sigma)))
	left := newPeakEdge((float64(from) - 0.5 - centre) / sigma)
	for i := from; i <= to; i++ {
		right := newPeakEdge((float64(i) + 0.5 - centre) / sigma)
		share := right.shareAbove(left)
		mean[i] += area * share
		if slopes != nil {
			shift := area * (left.density - right.density) / sigma // with the delay
			slopes[delayCentre][i] += shift
			slopes[delayPeriod][i] += shift * float64(j)
			slopes[delayFWHM][i] += area * (left.z*left.density - right.z*right.density) / theta[delayFWHM]
			slopes[delaySide][i] += share
			if j == 0 {
				slopes[delayPairs][i] += share
			}
		}
		left = right
	}
}

// peakEdge is an edge of a bin, z standard deviations from the middle of a peak:
// the normal density there, and the share of the peak beyond |z|.
type peakEdge struct{ z, density, tail float64 }

func newPeakEdge(z float64) peakEdge {
	return peakEdge{z, math.Exp(-z*z/2) / rootTwoPi, math.Erfc(math.Abs(z)/math.Sqrt2) / 2}
}

// shareAbove returns the share of the peak between two edges; no digits are lost
// in the tails.
func (e peakEdge) shareAbove(below peakEdge) float64 {
	switch {
	case below.z >= 0:
		return max(0, below.tail-e.tail)
	case e.z <= 0:
		return max(0, e.tail-below.tail)
	}
	return 1 - below.tail - e.tail
}

// delayWindowShare returns the share of a Gaussian peak in a window of the given
// full width centred on it, and its derivative with respect to the FWHM.
//
//	w = erf(√(ln 2) τ/FWHM)
func delayWindowShare(window, fwhm float64) (share, slope float64) {
	x := rootLn2 * window / fwhm
	return math.Erf(x), -2 / math.Sqrt(math.Pi) * math.Exp(-x*x) * x / fwhm
}
