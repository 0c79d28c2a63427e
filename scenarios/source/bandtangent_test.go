package source

import (
	"math"
	"math/rand/v2"
	"testing"

	"pairspan/keyrate"
	"pairspan/sources"
)

// near draws a setting between two, by their logarithms, or anywhere in a range.
func (u draws) near(p keyrate.OperatingPoint, reach float64, s settingRange) keyrate.OperatingPoint {
	step := func(at, lo, hi float64) float64 { return min(hi, max(lo, at*math.Exp(reach*u.between(-1, 1)))) }
	return keyrate.OperatingPoint{
		PairRateHz: step(p.PairRateHz, s.lo.PairRateHz, s.hi.PairRateHz),
		WindowS:    step(p.WindowS, s.lo.WindowS, s.hi.WindowS),
		KeyShare:   step(p.KeyShare, s.lo.KeyShare, s.hi.KeyShare),
	}
}

// kindOf names what sets a link's statistics apart.
func kindOf(l *keyrate.Link) string {
	kind := "continuous"
	switch {
	case l.PulseRateHz > 0 && math.IsInf(l.Modes, 1):
		kind = "pulsed"
	case l.PulseRateHz > 0:
		kind = "thermal"
	}
	if l.BlockBits > 0 {
		kind += ", blocks"
	}
	return kind
}

// touching draws a link with some settings free and a tangent to it, from anywhere
// or from near its best setting.
func (u draws) touching() (x bandBound, t tangent, s settingRange, ok bool) {
	j, b := u.band()
	j.free.Window, j.free.KeyShare = u.often(), u() < 0.3
	if u.often() {
		j.free.MaxPairRateHz = j.setup.PairRateHz
	}
	x = bandBound{link: j.link(&b), enough: math.SmallestNonzeroFloat64}
	s = x.all(j)
	at := u.setting(s)
	if u.often() {
		at = u.near(x.link.Best(s.hi, j.free), u.decades(-2, 0), s)
	}
	if !x.tangible(&s) {
		return x, t, s, false
	}
	t, ok = x.tangentAt(at, &s)
	x.tangents = []tangent{t}
	return x, t, s, ok
}

// No setting makes more of a link than a tangent says, over the whole model and
// links of all kinds. Of each it looks for the setting that comes nearest to that,
// or beyond: from many settings, and then closer to the best of them.
func TestTangentsBound(t *testing.T) {
	random := rand.New(rand.NewPCG(17, 2))
	u, tangents := draws(random.Float64), map[string]int{}
	for range 30_000 {
		x, tangent, s, ok := u.touching()
		if !ok {
			continue
		}
		tangents[kindOf(&x.link)]++
		closest, at, touched := 0.0, tangent.at, tangent.sum()
		if second, ok := x.tangentAt(u.near(tangent.at, 1, s), &s); ok && u.often() {
			x.tangents = append(x.tangents, second)
			touched = max(touched, second.sum())
		}
		for k := range 40 {
			p := u.setting(s)
			if k >= 10 {
				p = u.near(at, 2*math.Pow(0.9, float64(k-10)), s)
			}
			r := x.link.Key(p)
			if reached := r.UsableBps / max(touched, x.under(&settingRange{p, p})); reached > closest {
				closest, at = reached, p
			}
		}
		if closest > 1 {
			t.Errorf("%v times what the tangent %+v says of %+v in %+v", closest, tangent, at, s)
		}
		x.enough = x.under(&settingRange{at, at}) * (1 - 1e-9)
		if most, _ := x.slices(s); most < x.enough {
			t.Errorf("at most %v in %+v, and %v at %+v\n%+v", most, s, x.enough, at, x.link)
		}
	}
	for _, kind := range []string{"continuous", "pulsed", "thermal", "continuous, blocks", "pulsed, blocks", "thermal, blocks"} {
		if tangents[kind] < 200 {
			t.Errorf("only %d tangents of %s links", tangents[kind], kind)
		}
	}
}

// A tangent touches: at its own setting it says what the model does, but for its
// slack and the whole bits of a block.
func TestTangentsTouch(t *testing.T) {
	random := rand.New(rand.NewPCG(19, 2))
	u := draws(random.Float64)
	for range 2000 {
		x, tangent, _, ok := u.touching()
		if !ok {
			continue
		}
		r := x.link.Key(tangent.at)
		bits := 0.0
		if x.link.BlockBits > 0 {
			bits = (roundedBits + 1) * x.link.DutyCycle * r.SiftedBps() / x.link.BlockBits
		}
		if got := x.under(&settingRange{tangent.at, tangent.at}); got > (r.UsableBps+bits)*(1+2*slopeSlack) {
			t.Errorf("%v at %+v, where the link makes %v\n%+v", got, tangent.at, r.UsableBps, x.link)
		}
	}
}

// hinted returns a judge's copy with hints, the first from what was best.
func hinted(j *BandJudge, b *sources.Band) *BandJudge {
	c := *j
	c.hints = newBandHints(c.arms[0])
	c.Worth(*b)
	return &c
}

// Tangents pass over no band that could be the best, and over those that are not
// by a fifth.
func TestBoundsOfBandsByTangents(t *testing.T) {
	random := rand.New(rand.NewPCG(23, 2))
	u := draws(random.Float64)
	free, passed := 0, 0
	for range 3000 {
		j, b := u.band()
		j.free.Window, j.free.KeyShare = u.often(), u() < 0.2
		if u.often() {
			j.free.MaxPairRateHz = j.setup.PairRateHz
		}
		c := hinted(j, &b)
		worth := c.Worth(b)
		if most := c.Bound(b, worth); !(most >= worth) {
			t.Errorf("worth %v, and at most %v\n%+v\n%+v", worth, most, j, b)
		}
		if worth <= 0 || j.free.MaxPairRateHz == 0 || j.start.BlockBits > 0 {
			continue
		}
		free++
		if c.Bound(b, 1.25*worth) < 1.25*worth {
			passed++
		}
	}
	if free < 300 || passed < free*3/4 {
		t.Errorf("of %d bands with a free pump %d were passed over", free, passed)
	}
}
