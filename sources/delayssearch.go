package sources

import "math"

// falseAlarm is the chance, at most, that a histogram of a flat floor is said to
// hold a peak, or one peak to have others beside it.
const falseAlarm = 1e-3

// delaySearch looks for peaks in a histogram.
type delaySearch struct {
	counts []float64
	below  []float64 // counts in the bins before bin i, i from 0 to the number of bins
}

func newDelaySearch(counts []float64) delaySearch {
	s := delaySearch{counts, make([]float64, len(counts)+1)}
	for i, x := range counts {
		s.below[i+1] = s.below[i] + x
	}
	return s
}

// delayBox is a run of bins.
type delayBox struct{ from, width int }

// middle returns the middle of the box; the middle of the first bin is at 0.
func (b delayBox) middle() float64 { return float64(b.from) + float64(b.width-1)/2 }

// boxAt returns the box of a width with its middle as near as possible to x.
func boxAt(x float64, width int) delayBox {
	return delayBox{int(math.Round(x - float64(width-1)/2)), width}
}

// inside tells whether the whole box lies in the histogram.
func (s delaySearch) inside(b delayBox) bool {
	return b.from >= 0 && b.from+b.width <= len(s.counts)
}

// in returns the counts in a box, which lies inside.
func (s delaySearch) in(b delayBox) float64 { return s.below[b.from+b.width] - s.below[b.from] }

// delayGain returns by how much the deviance falls when inside bins with y counts
// and outside bins with z counts are given a floor of their own each instead of
// one for all; 0 unless the floor is higher inside.
func delayGain(y, inside, z, outside float64) float64 {
	floor := (y + z) / (inside + outside)
	if !(y > inside*floor) || outside <= 0 {
		return 0
	}
	sum := y * math.Log(y/(inside*floor))
	if z > 0 {
		sum += z * math.Log(z/(outside*floor))
	}
	return 2 * sum
}

// delayThreshold returns the gain that one of so many trials in a flat floor exceeds
// with a chance below falseAlarm: a gain has a chi-squared distribution of one
// degree of freedom, above x with a chance below exp(−x/2).
func delayThreshold(trials int) float64 { return 2 * math.Log(float64(trials)/falseAlarm) }

// widthsTo returns the widths of the boxes to try, each a quarter wider than the
// one before.
func widthsTo(most int) (widths []int) {
	for w := 1; w <= most; w = max(w+1, w*5/4) {
		widths = append(widths, w)
	}
	return widths
}

// tallest returns the box that stands out most from all other bins, up to half
// of the histogram wide, and whether it does so by more than chance.
func (s delaySearch) tallest() (best delayBox, found bool) {
	n := len(s.counts)
	total, most, trials := s.below[n], 0.0, 0
	for _, width := range widthsTo(n / 2) {
		for from := 0; from+width <= n; from++ {
			trials++
			y := s.in(delayBox{from, width})
			if g := delayGain(y, float64(width), total-y, float64(n-width)); g > most {
				best, most = delayBox{from, width}, g
			}
		}
	}
	return best, most > delayThreshold(trials)
}

// centroid returns the mean position of what the bins of a box, and one more to
// each side, hold above the mean of all bins.
func (s delaySearch) centroid(b delayBox) float64 {
	n := len(s.counts)
	floor := s.below[n] / float64(n)
	sum, moment := 0.0, 0.0
	for i := max(0, b.from-1); i < min(n, b.from+b.width+1); i++ {
		above := max(0, s.counts[i]-floor)
		sum += above
		moment += above * float64(i)
	}
	return moment / sum
}

// leastPeak returns how many counts a peak within width bins, on the mean floor
// of the histogram, must bring to be found in 97 of 100 cases: enough to pass the
// threshold even two standard deviations short.
func (s delaySearch) leastPeak(width int) float64 {
	n := len(s.counts)
	trials := 0
	for _, w := range widthsTo(n / 2) {
		trials += n - w + 1
	}
	inside, outside := float64(width), float64(n-width)
	floor := s.below[n] / float64(n)
	lo, hi := floor*inside, floor*inside+1
	for delayGain(hi, inside, floor*outside, outside) < delayThreshold(trials) {
		hi *= 2
	}
	for range 60 {
		if y := (lo + hi) / 2; delayGain(y, inside, floor*outside, outside) < delayThreshold(trials) {
			lo = y
		} else {
			hi = y
		}
	}
	return hi - floor*inside + 2*math.Sqrt(hi) + 2
}
