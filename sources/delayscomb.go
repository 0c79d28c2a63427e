package sources

import (
	"math"
	"slices"
)

const (
	combMost  = 100 // side peaks to each side with which the period is looked for first
	combLeast = 2   // side peaks without which no period is believed

	combShortest = 3.0 // bins that a period lasts at least
)

// delayComb is boxes at one distance from each other, the peaks of a pulsed
// source: the tallest peak of a histogram at the centre, side peaks around it.
type delayComb struct {
	search delaySearch
	centre float64 // middle of the tallest peak, in bins
	hole   int     // bins around the centre that the tallest peak fills
	period float64 // in bins
	width  int     // of each box
	most   int     // side peaks to each side that are looked at
}

// forBoxes calls use with the boxes inside the histogram whose middles lie
// first, first + 1, first + 2 ... periods to either side of the centre, and
// returns the range of bins that they were taken from.
func (c delayComb) forBoxes(first float64, use func(delayBox)) (from, to int) {
	from, to = 0, len(c.search.counts)
	for _, side := range []float64{-1, 1} {
		for k := 0; ; k++ {
			b := boxAt(c.centre+side*(first+float64(k))*c.period, c.width)
			if !c.search.inside(b) {
				break
			}
			if k < c.most {
				use(b)
				continue
			}
			if side < 0 {
				from = b.from + b.width
			} else {
				to = b.from
			}
			break
		}
	}
	return from, to
}

// combSums is what a comb holds.
type combSums struct {
	side, rest           float64 // counts in the side peaks, and in the bins beside all peaks
	sideBins, restBins   float64
	sides                int
	floorPerBox, perSide float64 // mean counts of a box beside the peaks, and of a side peak
}

// sums returns what the comb holds.
func (c delayComb) sums() (s combSums) {
	from, to := c.forBoxes(1, func(b delayBox) {
		s.side += c.search.in(b)
		s.sides++
	})
	hole := boxAt(c.centre, min(c.hole, int(c.period)))
	hole.width = min(hole.from+hole.width, to) - max(hole.from, from)
	hole.from = max(hole.from, from)
	s.sideBins = float64(s.sides * c.width)
	s.rest = c.search.below[to] - c.search.below[from] - s.side - c.search.in(hole)
	s.restBins = float64(to-from-hole.width) - s.sideBins
	s.floorPerBox = s.rest / s.restBins * float64(c.width)
	s.perSide = s.side / float64(s.sides)
	return s
}

// gain returns by how much the deviance falls when the side peaks are higher
// than the bins beside them; 0 where there are too few.
func (c delayComb) gain() float64 {
	s := c.sums()
	if s.sides < combLeast || s.restBins < s.sideBins/2 {
		return 0
	}
	return delayGain(s.side, s.sideBins, s.rest, s.restBins)
}

// comb returns the comb of side peaks around the tallest peak that stands out
// most, with the centre on its tallest peak, and whether there is one.
func (s delaySearch) comb(tallest delayBox) (best delayComb, found bool) {
	n := float64(len(s.counts))
	c := delayComb{search: s, centre: s.centroid(tallest), hole: 2 * tallest.width, width: max(1, tallest.width*2/5), most: combMost}
	trials, most := 0, 0.0
	for c.period = max(combShortest, 0.6*float64(tallest.width)); c.period < n; c.period += c.resolution() {
		trials++
		if g := c.gain(); g > most {
			best, most = c, g
		}
	}
	if trials == 0 || most < delayThreshold(trials) || !best.even() || !best.resolved() {
		return best, false
	}
	best.refine()
	best.recentre()
	return best, true
}

// resolution returns the step of the period that moves the outermost boxes by a
// quarter of their width.
func (c delayComb) resolution() float64 {
	peaks := min(float64(c.most), float64(len(c.search.counts))/c.period)
	return float64(c.width) / (4 * max(1, peaks))
}

// periodStep returns how far off the period may well be: boxes move by whole
// bins.
func (c delayComb) periodStep() float64 {
	return max(0.5, float64(c.width)/2) / max(1, float64(len(c.search.counts))/(2*c.period))
}

// refine sharpens the period with ever more side peaks.
func (c *delayComb) refine() {
	n := len(c.search.counts)
	for ; float64(c.most)*c.period < float64(n); c.most *= 2 {
		wide := c.resolution()
		next := *c
		next.most *= 2
		most, around := 0.0, c.period
		for next.period = around - 2*wide; next.period <= around+2*wide; next.period += next.resolution() {
			if g := next.gain(); g > most {
				c.period, most = next.period, g
			}
		}
	}
}

// even tells whether the side peaks may be of one height: beyond chance they
// scatter by no more than half of it. A single echo of the peak is no comb.
func (c delayComb) even() bool {
	s := c.sums()
	square, sides := 0.0, float64(s.sides)
	c.forBoxes(1, func(b delayBox) {
		off := c.search.in(b) - s.perSide
		square += off * off
	})
	height := s.perSide - s.floorPerBox
	return square/(sides-1) < s.perSide*(1+3*math.Sqrt(2/sides))+height*height/4
}

// resolved tells whether the side peaks stand above the middles between peaks
// (their median, as the tallest peak may reach into those next to it) by more
// than chance. The tail of one wide peak does not.
func (c delayComb) resolved() bool {
	s := c.sums()
	var between []float64
	c.forBoxes(0.5, func(b delayBox) { between = append(between, c.search.in(b)) })
	slices.Sort(between)
	n := len(between)
	gap := (between[(n-1)/2] + between[n/2]) / 2
	return s.perSide-gap > 3*math.Sqrt(s.perSide/float64(s.sides)+gap/float64(n))
}

// recentre moves the centre to the tallest of the peaks, counted in boxes that
// hold a peak whichever bins it falls in.
func (c *delayComb) recentre() {
	wide := *c
	wide.width = min(c.hole/2+2, int(c.period))
	tallest := boxAt(c.centre, wide.width)
	tallest.from = min(max(tallest.from, 0), len(c.search.counts)-wide.width)
	most := c.search.in(tallest)
	wide.forBoxes(1, func(b delayBox) {
		if y := c.search.in(b); y > most {
			tallest, most = b, y
		}
	})
	c.centre = tallest.middle()
}
