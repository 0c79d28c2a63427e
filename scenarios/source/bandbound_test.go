package source

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/sources"
)

// draws makes random links from numbers in 0 to 1.
type draws func() float64

func (u draws) between(from, to float64) float64 { return from + (to-from)*u() }

func (u draws) decades(from, to float64) float64 { return math.Pow(10, u.between(from, to)) }

func (u draws) often() bool { return u() < 0.6 }

func (u draws) sometimes(from, to float64) float64 {
	if u.often() {
		return u.decades(from, to)
	}
	return 0
}

// arm draws an arm, from next to no noise to more than any signal.
func (u draws) arm() armBand {
	a := keyrate.Arm{
		Transmittance: u.decades(-3, 0), Passive: u.often(), Misalignment: 0.03 * u() * u(), PMDError: 0.03 * u() * u() * u(),
		BackgroundHz: u.sometimes(0, 6), UnpairedHz: u.sometimes(2, 8), SpreadFWHMPs: u.sometimes(0, 3),
		Detector: link.Detector{Efficiency: u.between(0.1, 1), DarkCountsHz: u.sometimes(-1, 6), DeadTimeNs: u.sometimes(0, 5), JitterFWHMPs: u.sometimes(0, 3)},
	}
	if u.often() {
		a.Detector.Afterpulsing = 0.2 * u()
	}
	return armBand{arm: a, coherencePs: u.decades(-1, 2), dispersionPs: u.between(-300, 300) * u()}
}

// band draws a judge of wide ranges and a pair of pass bands.
func (u draws) band() (*BandJudge, sources.Band) {
	e := 0.08 * u() * u()
	b := sources.Band{Share: u.decades(-4, 0), StateError: [2]float64{e, e + 0.08*u()*u()}}
	j := &BandJudge{
		start: keyrate.Link{Modes: math.Inf(1), ErrorCorrectionF: u.between(1, 1.4), DutyCycle: u.between(0.1, 1)},
		setup: keyrate.OperatingPoint{PairRateHz: u.decades(3, 9.5), WindowS: u.decades(-11.5, -8.5), KeyShare: 0.5},
	}
	for arm := range j.arms {
		a := u.arm()
		j.arms[arm] = [][]armBand{{a}}
		j.jitter[arm] = a.arm.Detector.JitterFWHMPs
		if u.often() {
			b.UnpairedShare[arm] = (1 - b.Share) * u()
		}
	}
	if !u.often() { // pulsed
		j.start.PulseRateHz = u.decades(6, 10)
		if u.often() {
			j.start.Modes = 1 + u.sometimes(-1, 2)
		}
		j.setup.PairRateHz = j.start.PulseRateHz * u.decades(-6, 0.3)
		j.setup.WindowS = min(j.setup.WindowS, 1/j.start.PulseRateHz)
	}
	if !u.often() {
		j.start.BlockBits, j.start.EpsilonTotal, j.start.AuthenticationBits = math.Round(u.decades(3, 9)), u.decades(-12, -5), u.sometimes(0, 3)
	}
	return j, b
}

// setting draws a setting within a settingRange, the ends included.
func (u draws) setting(s settingRange) keyrate.OperatingPoint {
	in := func(lo, hi float64) float64 { return min(hi, max(lo, lo*math.Pow(hi/lo, u()))) }
	return keyrate.OperatingPoint{
		PairRateHz: in(s.lo.PairRateHz, s.hi.PairRateHz),
		WindowS:    in(s.lo.WindowS, s.hi.WindowS),
		KeyShare:   in(s.lo.KeyShare, s.hi.KeyShare),
	}
}

// checkBound compares the bound of a settingRange with a setting in it.
func checkBound(t rapid.TB, u draws) {
	j, b := u.band()
	if u.often() {
		j.free.Window = true
	}
	if !u.often() {
		j.free.KeyShare = true
	}
	if !u.often() {
		j.free.MaxPairRateHz = j.setup.PairRateHz
	}
	l := j.link(&b)
	x := bandBound{link: l}
	s := x.all(j)
	for u() < 0.8 {
		if lower, upper, ok := s.split(); ok && u.often() {
			s = lower
		} else if ok {
			s = upper
		}
	}
	p := u.setting(s)
	r := l.Key(p)
	if worth, most := worthOfKey(&r), x.most(s); worth > most {
		t.Errorf("worth %v at %+v, and %v at most in %+v\n%+v\n%+v\n%+v", worth, p, most, s, j, b, r)
	}
}

// No setting makes more of a link than the range bound says that it lies in: in
// wide ranges of links, near to a key or far from it.
func TestRangesAreBounded(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		zeroToOne := rapid.Float64Range(0, 1)
		checkBound(t, func() float64 { return zeroToOne.Draw(t, "number") })
	})
	random := rand.New(rand.NewPCG(1, 2))
	for range 30_000 {
		checkBound(t, random.Float64)
	}
}

// A band is never passed over while it could be the best: when as much is enough
// as it is worth.
func TestBoundsOfBands(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 2))
	u, keys := draws(random.Float64), 0
	for range 1500 {
		j, b := u.band()
		j.free.Window = u.often()
		j.free.KeyShare = u() < 0.2
		if u() < 0.2 {
			j.free.MaxPairRateHz = j.setup.PairRateHz
		}
		worth := j.Worth(b)
		if most := j.Bound(b, worth); !(most >= worth) {
			t.Errorf("worth %v, and at most %v\n%+v\n%+v", worth, most, j, b)
		}
		if worth > 0 {
			keys++
		}
		// Far above what it is worth it is passed over.
		if most := j.Bound(b, 20*(1+math.Abs(worth))); j.free.MaxPairRateHz == 0 && !j.free.KeyShare && most >= 20*(1+math.Abs(worth)) {
			t.Errorf("worth %v, but %v may be reached\n%+v\n%+v", worth, most, j, b)
		}
	}
	if keys < 300 {
		t.Errorf("only %d bands with a key", keys)
	}
}
