package source

import (
	"math"
	"sync/atomic"

	"pairspan/keyrate"
	"pairspan/sources"
)

// bandHints remembers settings that were good for a band, for the bands after it.
// They save time only. The bands with one of Alice's follow each other; those with
// several of hers are asked about at once.
type bandHints struct {
	alice  [][]hint // [first bin][last bin - first bin]
	latest hint
}

// hint is a setting whose window of a continuous link is in spreads, and whose
// pair rate is by the photons that pass the bands: as such they change little.
type hint struct {
	atomic.Pointer[keyrate.OperatingPoint]
}

func newBandHints(bands [][]armBand) *bandHints {
	h := &bandHints{alice: make([][]hint, len(bands))}
	for first := range bands {
		h.alice[first] = make([]hint, len(bands[first]))
	}
	return h
}

// find returns a setting for a band, within the range of its settings. It is not
// ok before there is any.
func (h *bandHints) find(b *sources.Band, l *keyrate.Link, all *settingRange) (p keyrate.OperatingPoint, ok bool) {
	known := h.alice[b.First[0]][b.Last[0]-b.First[0]].Load()
	if known == nil {
		known = h.latest.Load()
	}
	if known == nil {
		return p, false
	}
	pump, window := hintUnits(b, l)
	keep := func(at, lo, hi float64) float64 { return min(hi, max(lo, at)) }
	return keyrate.OperatingPoint{
		PairRateHz: keep(known.PairRateHz*pump, all.lo.PairRateHz, all.hi.PairRateHz),
		WindowS:    keep(known.WindowS*window, all.lo.WindowS, all.hi.WindowS),
		KeyShare:   keep(known.KeyShare, all.lo.KeyShare, all.hi.KeyShare),
	}, true
}

// keep remembers a setting that is good for a band.
func (h *bandHints) keep(b *sources.Band, l *keyrate.Link, p keyrate.OperatingPoint) {
	pump, window := hintUnits(b, l)
	p.PairRateHz /= pump
	p.WindowS /= window
	h.alice[b.First[0]][b.Last[0]-b.First[0]].Store(&p)
	h.latest.Store(&p)
}

// hintUnits returns the units of a hint's pair rate and window.
func hintUnits(b *sources.Band, l *keyrate.Link) (pump, window float64) {
	window = 1
	if l.PulseRateHz == 0 && l.SpreadFWHMPs > 0 {
		window = l.SpreadFWHMPs
	}
	alice, bob := b.Share+b.UnpairedShare[0], b.Share+b.UnpairedShare[1]
	return 1 / math.Sqrt(alice*bob), window
}
