package source

import (
	"math"

	"pairspan/keyrate"
)

// Where tangents are put, and when they are given up. These ratios cost or save
// time only.
const (
	mostTangents = 3
	nearPump     = 4.0 // of a tangent's own: where it has to serve
	nearWindow   = 2.0
	weaken       = 4.0  // of a pump that leaves too little key for a tangent
	finestSlice  = 1.02 // of shares
	farShare     = 1.05
	nearly       = 0.5 // of what is enough: rating the band costs less than looking on
)

// near bounds the usable rate by tangents, the first one at a setting that was
// good for a band much like it. It returns a good setting of this one, and whether
// it came to an end: its bound then is as that of within.
func (x *bandBound) near(all settingRange, at keyrate.OperatingPoint) (most float64, good keyrate.OperatingPoint, ok bool) {
	good, best := at, 0.0
	var room [mostTangents]tangent
	x.tangents = room[:0]
	defer func() { x.tangents = nil }()
	for range mostTangents {
		t, ok := x.tangentAt(at, &all)
		if !ok && all.lo.PairRateHz < at.PairRateHz/weaken {
			at.PairRateHz /= weaken
			continue
		} else if !ok {
			break
		}
		x.tangents = append(x.tangents, t)
		at = t.onward(&all)
		if t.sum() > best {
			best, good = t.sum(), at
		}
		if best >= x.enough {
			return best, good, true
		}
		most, share := x.around(all, &t.at)
		if most < x.enough {
			return max(most, best), good, true
		}
		at = otherShare(at, t.at.KeyShare, share, &all)
	}
	return math.Inf(1), good, best > nearly*x.enough
}

// otherShare moves the next tangent to a share that the last does not tell of,
// with as many pairs in the key basis.
func otherShare(next keyrate.OperatingPoint, last, share float64, all *settingRange) keyrate.OperatingPoint {
	if share*farShare < last {
		if all.lo.PairRateHz < all.hi.PairRateHz {
			next.PairRateHz = min(all.hi.PairRateHz, next.PairRateHz*next.KeyShare/share)
		}
		next.KeyShare = share
	}
	return next
}

// around bounds a range by the tangents found so far, and where they do not reach
// by within. Where neither serves it names a share of the key basis there.
func (x *bandBound) around(all settingRange, at *keyrate.OperatingPoint) (most, share float64) {
	if most, share = x.slices(all); most < x.enough {
		return most, share
	}
	core, rest := all.part(at)
	most, share = x.slices(core)
	for k := 0; k < len(rest) && most < x.enough; k++ {
		far, _ := x.slices(rest[k])
		if far >= x.enough {
			far = x.within(rest[k])
		}
		most = max(most, far)
	}
	return most, share
}

// slices bounds a range by the tangents, in ever finer slices of the shares.
func (x *bandBound) slices(s settingRange) (most, share float64) {
	most = x.told(&s)
	if most < x.enough || s.hi.KeyShare <= s.lo.KeyShare*finestSlice {
		return most, s.hi.KeyShare
	}
	lower, upper := s, s
	lower.hi.KeyShare = math.Sqrt(s.lo.KeyShare * s.hi.KeyShare)
	upper.lo.KeyShare = lower.hi.KeyShare
	most, share = x.slices(upper)
	if most < x.enough {
		under, at := x.slices(lower)
		return max(most, under), at
	}
	return most, share
}

// tangentMargin is what a tangent is trusted less than the tests find it to hold.
const tangentMargin = 5e-3

// told is under with a margin for what no test has met.
func (x *bandBound) told(s *settingRange) float64 { return x.under(s) * (1 + tangentMargin) }

// under returns the least that the tangents tell of a range.
func (x *bandBound) under(s *settingRange) float64 {
	sum := 0.0
	for basis := range 2 {
		most := math.Inf(1)
		for k := range x.tangents {
			most = min(most, x.tangents[k].most(basis, s))
		}
		sum += most
	}
	return sum
}

// part cuts from a range what lies far from a setting in pump or window.
func (s settingRange) part(at *keyrate.OperatingPoint) (core settingRange, rest []settingRange) {
	core = s
	cut := func(edge float64, setting func(*keyrate.OperatingPoint) *float64) {
		lo, hi := setting(&core.lo), setting(&core.hi)
		if !(*lo < edge && edge < *hi) {
			return
		}
		far := core
		if edge < *setting(at) {
			*setting(&far.hi), *lo = edge, edge
		} else {
			*setting(&far.lo), *hi = edge, edge
		}
		rest = append(rest, far)
	}
	pump := func(p *keyrate.OperatingPoint) *float64 { return &p.PairRateHz }
	window := func(p *keyrate.OperatingPoint) *float64 { return &p.WindowS }
	cut(at.PairRateHz/nearPump, pump)
	cut(at.PairRateHz*mostStronger, pump)
	cut(at.PairRateHz*nearPump, pump)
	cut(at.WindowS/nearWindow, window)
	cut(at.WindowS*nearWindow, window)
	return core, rest
}
