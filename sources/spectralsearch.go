package sources

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"
	"sync"
	"sync/atomic"
)

// BandSearch says what pass bands are searched for.
type BandSearch struct {
	// Worth returns what a pair of pass bands is worth, more for better. It must
	// depend on the band alone; a NaN is worth less than anything.
	Worth func(b Band) float64

	// Bound, unless nil, returns a figure that Worth cannot exceed, or any
	// figure from enough up where Worth may reach that. It saves time only, and
	// may be as rough as it likes.
	Bound func(b Band, enough float64) float64

	// Progress, unless nil, is told how much is done, by one at a time and rising.
	Progress func(done, total int)
}

// RatedBand is a pair of pass bands and what it is worth.
type RatedBand struct {
	Band
	Worth float64
}

// BandChoice is the outcome of a search for pass bands.
type BandChoice struct {
	Best     RatedBand
	ByWidth  []RatedBand // the best of each width, from the whole map to single bins; widths that no pairs pass are left out
	Compared int         // pairs of pass bands with any pairs
}

// BestBands returns the pair of pass bands, each of contiguous bins, that is
// worth most, and the best of each width, which is the number of bins of both
// bands together: exactly what a comparison of all would return, on any number
// of cores. Of equal ones the narrower counts, then the one of lower wavelengths.
// Bands without pairs are left out.
//
// Worth and Bound are called by several at once. When the context ends first its
// error is returned.
//
// Why Bound changes nothing: a band is passed over only if its bound lies below
// the worth of one of the same width that was found before. Then its own worth
// lies below that too, so that it is not the best of its width, nor equal to it,
// however far the search had come. All others are rated, and of these the best is
// taken by worth and order alone.
func (m *SpectralMap) BestBands(ctx context.Context, search BandSearch) (BandChoice, error) {
	c := bandContest{m: m, search: search, ctx: ctx}
	widest := len(m.CentreNm[0]) + len(m.CentreNm[1])
	c.best, c.level = make([]RatedBand, widest+1), make([]atomic.Uint64, widest+1)
	for n := range c.best {
		c.level[n].Store(math.Float64bits(math.Inf(-1)))
	}
	bands := m.promising()
	var progress func(int)
	if search.Progress != nil {
		progress = func(done int) { search.Progress(done, len(bands)) }
	}
	if err := shareOut(ctx, len(bands), func(k int) error { return c.compare(bands[k]) }, progress); err != nil {
		return BandChoice{}, err
	}
	return c.choice()
}

// promising returns Alice's bands, first and last bin, those first that most
// pairs pass of all as wide: the sooner good bands are found, the more of the
// others can be passed over.
func (m *SpectralMap) promising() [][2]int {
	type candidate struct {
		bins  [2]int
		share float64
		place int
	}
	var all []candidate
	for n := 1; n <= len(m.aliceShare); n++ {
		var wide []candidate
		for first := 0; first+n <= len(m.aliceShare); first++ {
			c := candidate{bins: [2]int{first, first + n - 1}}
			for _, share := range m.aliceShare[first : first+n] {
				c.share += share
			}
			wide = append(wide, c)
		}
		slices.SortStableFunc(wide, func(a, b candidate) int { return cmp.Compare(b.share, a.share) })
		for place := range wide {
			wide[place].place = place
		}
		all = append(all, wide...)
	}
	slices.SortStableFunc(all, func(a, b candidate) int { return cmp.Compare(a.place, b.place) })
	bands := make([][2]int, len(all))
	for k, c := range all {
		bands[k] = c.bins
	}
	return bands
}

// bandContest is a search under way. Bands are compared with those as wide; the
// places of the widths 0 and 1 stay empty.
type bandContest struct {
	m      *SpectralMap
	search BandSearch
	ctx    context.Context

	level    []atomic.Uint64 // worth of the best, to look at without the lock
	mutex    sync.Mutex
	best     []RatedBand // Share is 0 where none was found
	compared int
}

// compare lets one of Alice's bands with each of Bob's enter, first the one of
// each width that most pairs pass.
func (c *bandContest) compare(alice [2]int) error {
	n := len(c.m.CentreNm[1])
	sums := c.m.sumsOver(alice[0], alice[1])
	type candidate struct {
		band Band
		sum  bandSum
	}
	all := make([]candidate, 0, n*(n+1)/2)
	widest := slices.Repeat([]int{-1}, n+1)
	for first := range n {
		sums.each(first, first, n-1, func(b Band, sum *bandSum) {
			if b.Share == 0 {
				return
			}
			if top := &widest[b.Bins(1)]; *top < 0 || b.Share > all[*top].band.Share {
				*top = len(all)
			}
			all = append(all, candidate{b, *sum})
		})
	}
	for _, k := range widest {
		if k >= 0 {
			c.enter(all[k].band, &all[k].sum)
		}
	}
	for k := range all {
		if widest[all[k].band.Bins(1)] != k {
			c.enter(all[k].band, &all[k].sum)
		}
	}
	c.mutex.Lock()
	defer c.mutex.Unlock()
	c.compared += len(all)
	return c.ctx.Err()
}

// enter rates a band unless it cannot be the best of its width.
func (c *bandContest) enter(b Band, sum *bandSum) {
	b.StateError = sum.errors()
	n := b.AllBins()
	enough := math.Float64frombits(c.level[n].Load())
	if c.search.Bound != nil && c.search.Bound(b, enough) < enough || c.ctx.Err() != nil {
		return
	}
	rated := RatedBand{b, c.search.Worth(b)}
	if !(rated.Worth >= enough) {
		return
	}
	c.mutex.Lock()
	defer c.mutex.Unlock()
	if best := &c.best[n]; best.Share == 0 || rated.better(best) {
		*best = rated
		c.level[n].Store(math.Float64bits(rated.Worth))
	}
}

// better tells whether a band goes before another, which is of a worth.
func (b *RatedBand) better(than *RatedBand) bool {
	if b.Worth != than.Worth {
		return b.Worth > than.Worth
	}
	return cmp.Or(
		cmp.Compare(b.AllBins(), than.AllBins()),
		slices.Compare(b.First[:], than.First[:]),
		slices.Compare(b.Last[:], than.Last[:])) < 0
}

// choice returns the best of all and of each width.
func (c *bandContest) choice() (BandChoice, error) {
	choice := BandChoice{Compared: c.compared}
	for _, b := range slices.Backward(c.best) {
		if b.Share == 0 {
			continue
		}
		choice.ByWidth = append(choice.ByWidth, b)
		if choice.Best.Share == 0 || b.better(&choice.Best) {
			choice.Best = b
		}
	}
	if len(choice.ByWidth) == 0 {
		return BandChoice{}, errors.New("no pair of pass bands could be rated")
	}
	return choice, nil
}
