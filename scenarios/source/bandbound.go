package source

import (
	"math"

	"pairspan/keyrate"
	"pairspan/sources"
)

// settingRange is a range of settings; one that is not searched has no width.
type settingRange struct{ lo, hi keyrate.OperatingPoint }

// Where keyrate's search for settings begins and ends; see keyrate.Link.Best.
const (
	leastWindowS   = 1e-12
	widestInSpread = 6.0
	evenShare      = 0.5
	mostShare      = 0.99
	weakestPump    = 1e-9 // of the ceiling
)

// The ratio of its ends down to which a range is split, beyond which rating the
// band costs less, and the room that a bound leaves for rounding.
const (
	finestWindow = 1.25
	finestShare  = 1.15
	finestPump   = 1.6
	boundSlack   = 1e-9
	roundedBits  = 2 // whole bits of a block, and its division between the bases
)

// Bound returns a figure that Worth does not exceed, or one from enough up. It
// splits the range of the settings until no part of it can reach enough, or one
// part may that is too small to split. Where it can, it asks tangents first: see
// tangent.
//
// Within a range of settings a link makes no more key than an imagined one which
// has at once the advantages of both ends:
//
//   - of windows from τ₁ to τ₂, the share of the pairs that τ₂ holds and the
//     accidentals of τ₁: the window τ₁ with all spreads shrunk by τ₁/τ₂, which has
//     the window share of τ₂;
//   - of shares of the key basis from q₁ to q₂, the key basis of q₂ and the check
//     basis of q₁, each in its favour; of a block, all that the key basis makes
//     without limit of size;
//   - of pair rates from B₁ to B₂, B₂/B₁ times the key at B₁, with the noise of the
//     detectors and the scenario's light less by B₁/B₂. Accidentals per pair are
//     a product of singles over B, whose terms in light² grow as B, those in light
//     × noise stay and those in noise² fall as 1/B: all are at least those of B₁
//     with noise so reduced.
//
// The rest is that accidentals never help. Adding δ to the right and the wrong
// coincidences each, of S sifted bits with error E, adds 2δ to S and
// −δ log₂(E(1−E)) ≥ 2δ to S h(E); with f ≥ 1 the key S (1 − f h(E) − h(E')) can
// only fall. All this is to first order in the photons of a slot; the tests find
// it in the whole model over links far beyond those that make key.
func (j *BandJudge) Bound(b sources.Band, enough float64) float64 {
	if math.IsInf(enough, -1) {
		return enough
	}
	without := noKey - 1.0
	if enough <= noKey {
		without = j.worthWithoutKey(&b)
		if without >= enough {
			return without
		}
	}
	x := bandBound{link: j.link(&b), enough: max(enough, leastKey)}
	if most := j.bound(&b, &x); most > noKey || enough > noKey {
		return most
	}
	return without
}

// bound asks tangents first where they can serve, since they tell more of a wide
// range than its splitting does.
func (j *BandJudge) bound(b *sources.Band, x *bandBound) float64 {
	all := x.all(j)
	if j.hints == nil || !x.tangible(&all) {
		return x.within(all)
	}
	if most := x.rough(all); most < x.enough {
		return most
	}
	if at, ok := j.hints.find(b, &x.link, &all); ok {
		if most, good, ok := x.near(all, at); ok {
			j.hints.keep(b, &x.link, good)
			return most
		}
	}
	return x.within(all)
}

// tangible reports whether tangents can bound what the settings in a range make.
// The division of a block between the bases must stay.
func (x *bandBound) tangible(s *settingRange) bool {
	even := s.lo.KeyShare == evenShare && s.hi.KeyShare == evenShare
	return x.enough > 0 && s.lo != s.hi && (even || x.link.BlockBits == 0)
}

// bandBound is the link behind a pair of pass bands, whose worth is in question.
type bandBound struct {
	link     keyrate.Link
	enough   float64
	tangents []tangent // found so far
}

// all returns all settings that are searched.
func (x *bandBound) all(j *BandJudge) settingRange {
	free, p := &j.free, j.setup
	a := settingRange{p, p}
	if free.MaxPairRateHz > 0 {
		a.lo.PairRateHz = p.PairRateHz * weakestPump
	}
	if free.Window {
		a.lo.WindowS, a.hi.WindowS = leastWindowS, x.widestWindowS()
	}
	if free.KeyShare {
		a.lo.KeyShare, a.hi.KeyShare = evenShare, mostShare
	}
	return a
}

// widestWindowS is where keyrate's search for a window ends.
func (x *bandBound) widestWindowS() float64 {
	l := &x.link
	if l.PulseRateHz == 0 {
		return max(leastWindowS, widestInSpread*l.SpreadFWHMPs/psPerSecond)
	}
	spread := max(l.Arms[keyrate.Alice].SpreadFWHMPs, l.Arms[keyrate.Bob].SpreadFWHMPs)
	return min(max(leastWindowS, widestInSpread*spread/psPerSecond), 1/l.PulseRateHz)
}

func (x *bandBound) within(s settingRange) float64 {
	most := math.Inf(1)
	if len(x.tangents) > 0 {
		most = x.told(&s)
	}
	if most >= x.enough {
		most = x.most(s)
	}
	if most < x.enough {
		return most
	}
	lower, upper, ok := s.split()
	if !ok {
		return most
	}
	most = x.within(lower)
	if most < x.enough {
		most = max(most, x.within(upper))
	}
	return most
}

// split halves the range that is the widest for its kind, by its logarithm.
func (s settingRange) split() (lower, upper settingRange, ok bool) {
	lower, upper = s, s
	width := func(lo, hi, finest float64) float64 {
		if lo == hi {
			return 0
		}
		return math.Log(hi/lo) / math.Log(finest)
	}
	window := width(s.lo.WindowS, s.hi.WindowS, finestWindow)
	share := width(s.lo.KeyShare, s.hi.KeyShare, finestShare)
	pump := width(s.lo.PairRateHz, s.hi.PairRateHz, finestPump)
	lo, hi := &lower.hi.WindowS, &upper.lo.WindowS
	switch widest := max(window, share, pump); {
	case widest <= 1:
		return s, s, false
	case pump == widest:
		lo, hi = &lower.hi.PairRateHz, &upper.lo.PairRateHz
	case share == widest:
		lo, hi = &lower.hi.KeyShare, &upper.lo.KeyShare
	}
	*lo = math.Sqrt(*lo * *hi)
	*hi = *lo
	return lower, upper, true
}

// most returns what no setting in the range is worth more than.
func (x *bandBound) most(s settingRange) float64 {
	l, more := x.ideal(&s)
	if most := roughly(&l, &s, more); most < x.enough || l.BlockBits == 0 || s.lo.KeyShare < s.hi.KeyShare {
		return most
	}
	r := l.Key(s.lo)
	r.UsableBps = (r.UsableBps + roundedBps(&l, &r)) * more
	r.SecretBps *= more
	return worthOfKey(&r)
}

// rough is most without what a block costs for its size.
func (x *bandBound) rough(s settingRange) float64 {
	l, more := x.ideal(&s)
	return roughly(&l, &s, more)
}

// ideal returns the link to be asked at the lower ends of window and pair rate,
// and how much more the best setting may make.
func (x *bandBound) ideal(s *settingRange) (l keyrate.Link, more float64) {
	l = x.link
	fewer := s.lo.PairRateHz / s.hi.PairRateHz
	tighter := 1.0
	if s.lo.WindowS < s.hi.WindowS {
		tighter = s.lo.WindowS / s.hi.WindowS
	}
	l.SpreadFWHMPs *= tighter
	for i := range l.Arms {
		a := &l.Arms[i]
		a.SpreadFWHMPs *= tighter
		a.Detector.DarkCountsHz *= fewer
		a.Detector.Afterpulsing *= fewer
		a.BackgroundHz *= fewer
		a.UnpairedHz *= fewer
	}
	return l, (1 + boundSlack) / fewer
}

// roundedBps is what whole bits can make of a usable rate, of a block that has
// a key or is about to.
func roundedBps(l *keyrate.Link, r *keyrate.Rate) float64 {
	if r.UsableBps == 0 {
		block := l.Split(r)
		if !(block.SecretBits()+roundedBits > l.AuthenticationBits) {
			return 0
		}
	}
	return roundedBits * l.DutyCycle * r.SiftedBps() / l.BlockBits
}

// roughly returns what an ideal link is worth at most with the best of each share
// of the key basis, its blocks without end. What a short block costs is more than
// what the rounding of its division can give.
func roughly(l *keyrate.Link, s *settingRange, more float64) float64 {
	endless, p := *l, s.lo
	endless.BlockBits = 0
	r := endless.Key(p)
	if p.KeyShare = s.hi.KeyShare; p != s.lo {
		check := r
		r = endless.Key(p)
		r.SiftedHz[keyrate.CheckBasis], r.QBER[keyrate.CheckBasis] = check.SiftedHz[keyrate.CheckBasis], check.QBER[keyrate.CheckBasis]
	}
	key := r.KeyBasisSecretBps(l.ErrorCorrectionF) * more
	check := r.SiftedHz[keyrate.CheckBasis] * more * max(0, keyrate.SecretFraction(r.QBER[keyrate.CheckBasis], r.QBER[keyrate.KeyBasis], l.ErrorCorrectionF))
	r.SecretBps, r.UsableBps = key+check, l.DutyCycle*(key+check)
	if l.BlockBits > 0 {
		r.UsableBps = l.DutyCycle * key
	}
	return worthOfKey(&r)
}
