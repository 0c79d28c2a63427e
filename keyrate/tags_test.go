package keyrate

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
)

// tag is one click, or one registered count, of an arm.
type tag struct {
	at         float64 // s
	basis, bit uint8
}

// lab runs a continuous-wave link event by event: pairs at random times, lost
// or not, their bits, the jitter of their detectors, noise, dead time and
// afterpulses. The link's spread must be that of the jitters.
type lab struct {
	link    *Link
	p       OperatingPoint
	seconds float64
	seed    uint64
	r       *rand.Rand
	clicks  [2][]tag // in any order
}

func newLab(l *Link, p OperatingPoint, seconds float64, seed uint64) *lab {
	s := &lab{link: l, p: p, seconds: seconds, seed: seed, r: rand.New(rand.NewPCG(1, seed))}
	for arm, a := range l.Arms {
		clicks := (p.PairRateHz+a.UnpairedHz)*s.efficiency(arm) + 4*(a.BackgroundHz+a.Detector.DarkCountsHz)
		s.clicks[arm] = make([]tag, 0, int(1.05*clicks*seconds)) // room for nearly any run
	}
	return s
}

// run returns each arm's tags in the order of time.
func (s *lab) run() (tags [2][]tag) {
	s.pairs()
	for arm := range tags {
		s.lonePhotons(arm)
		s.noise(arm)
		slices.SortFunc(s.clicks[arm], func(x, y tag) int { return cmp.Compare(x.at, y.at) })
		tags[arm] = s.registered(arm)
	}
	return tags
}

func (s *lab) chance(p float64) bool { return s.r.Float64() < p }

func (s *lab) coin() uint8 { return uint8(s.r.Uint64() & 1) }

// poisson calls f at random times, hz times a second.
func (s *lab) poisson(hz float64, f func(at float64)) {
	if hz == 0 {
		return
	}
	for at := s.r.ExpFloat64() / hz; at < s.seconds; at += s.r.ExpFloat64() / hz {
		f(at)
	}
}

// basis is chosen by each photon at a beam splitter, or for all that arrives
// within 100 ns.
func (s *lab) basis(arm int, at float64) uint8 {
	key := false
	if s.link.Arms[arm].Passive {
		key = s.chance(s.p.KeyShare)
	} else {
		const switchHz = 1e7
		x := uint64(at*switchHz)<<1 | uint64(arm)
		x = (x + s.seed) * 0x9e3779b97f4a7c15 // mixed as in a linear congruence, and folded
		x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
		x = (x ^ x>>27) * 0x94d049bb133111eb
		key = float64((x^x>>31)>>11)/(1<<53) < s.p.KeyShare
	}
	if key {
		return KeyBasis
	}
	return CheckBasis
}

// arrive adds a photon's click, with its detector's jitter.
func (s *lab) arrive(arm int, at float64, basis, bit uint8) {
	jitterS := s.link.Arms[arm].Detector.JitterFWHMPs / psPerSecond / (2 * math.Sqrt(2*math.Ln2))
	s.clicks[arm] = append(s.clicks[arm], tag{at + jitterS*s.r.NormFloat64(), basis, bit})
}

func (s *lab) efficiency(arm int) float64 {
	a := &s.link.Arms[arm]
	return a.Transmittance * a.Detector.Efficiency
}

// pairs gives equal bits in equal bases, unless one of the flips happens: the
// state's in that basis, and each arm's misalignment and PMD.
func (s *lab) pairs() {
	eta := [2]float64{s.efficiency(Alice), s.efficiency(Bob)}
	s.poisson(s.p.PairRateHz, func(at float64) {
		seen := [2]bool{s.chance(eta[Alice]), s.chance(eta[Bob])}
		if !seen[Alice] && !seen[Bob] {
			return
		}
		var basis, bit [2]uint8
		for arm := range basis {
			basis[arm] = s.basis(arm, at)
		}
		bit[Alice] = s.coin()
		bit[Bob] = bit[Alice]
		if basis[Alice] != basis[Bob] {
			bit[Bob] = s.coin()
		} else if s.chance(s.link.StateError[basis[Bob]]) {
			bit[Bob] ^= 1
		}
		for arm := range seen {
			if !seen[arm] {
				continue
			}
			for _, e := range [2]float64{s.link.Arms[arm].Misalignment, s.link.Arms[arm].PMDError} {
				if s.chance(e) {
					bit[arm] ^= 1
				}
			}
			s.arrive(arm, at, basis[arm], bit[arm])
		}
	})
}

// lonePhotons are the source's light without a partner.
func (s *lab) lonePhotons(arm int) {
	s.poisson(s.link.Arms[arm].UnpairedHz*s.efficiency(arm), func(at float64) {
		s.arrive(arm, at, s.basis(arm, at), s.coin())
	})
}

// noise is each detector's own: four of a passive arm, else two, which are in
// the basis that is set.
func (s *lab) noise(arm int) {
	a := &s.link.Arms[arm]
	hz := a.BackgroundHz + a.Detector.DarkCountsHz
	for bit := range uint8(2) {
		if a.Passive {
			for basis := range uint8(2) {
				s.poisson(hz, func(at float64) { s.clicks[arm] = append(s.clicks[arm], tag{at, basis, bit}) })
			}
			continue
		}
		s.poisson(hz, func(at float64) { s.clicks[arm] = append(s.clicks[arm], tag{at, s.basis(arm, at), bit}) })
	}
}

// registered takes an arm's clicks through dead time and afterpulses, detector
// by detector. An afterpulse comes up to 100 µs after its count.
func (s *lab) registered(arm int) []tag {
	const afterS = 100e-6
	a := &s.link.Arms[arm]
	deadS := a.Detector.DeadTimeNs * 1e-9
	var liveFrom [4]float64
	tags := make([]tag, 0, len(s.clicks[arm]))
	var later []tag // afterpulses to come
	meet := func(c tag) {
		detector := c.bit
		if a.Passive {
			detector += 2 * c.basis
		}
		if c.at < liveFrom[detector] {
			return
		}
		liveFrom[detector] = c.at + deadS
		tags = append(tags, c)
		if a.Detector.Afterpulsing > 0 && s.chance(a.Detector.Afterpulsing) {
			c.at += afterS * s.r.Float64()
			if !a.Passive {
				c.basis = s.basis(arm, c.at)
			}
			later = append(later, c)
			slices.SortFunc(later, func(x, y tag) int { return cmp.Compare(x.at, y.at) })
		}
	}
	for _, c := range s.clicks[arm] {
		for len(later) > 0 && later[0].at < c.at {
			next := later[0]
			later = later[1:]
			meet(next)
		}
		meet(c)
	}
	return tags
}

// coincidences are pairs of tags by Alice's and Bob's bases.
type coincidences struct{ all, wrong [2][2]float64 }

func (c *coincidences) total() float64 {
	return c.all[0][0] + c.all[0][1] + c.all[1][0] + c.all[1][1]
}

// pairUp pairs all tags that lie within a window of each other, Bob's taken as
// so much later.
func pairUp(tags [2][]tag, windowS, laterS float64) (c coincidences) {
	first := 0
	bob := tags[Bob]
	for _, a := range tags[Alice] {
		from, to := a.at-laterS-windowS/2, a.at-laterS+windowS/2
		for first < len(bob) && bob[first].at < from {
			first++
		}
		for i := first; i < len(bob) && bob[i].at <= to; i++ {
			c.all[a.basis][bob[i].basis]++
			if a.bit != bob[i].bit {
				c.wrong[a.basis][bob[i].basis]++
			}
		}
	}
	return c
}

// accidentals is the mean number of coincidences in windows that are early or
// late by multiples of lateS, beyond any dead time, where only chance makes
// pairs.
func accidentals(tags [2][]tag, windowS, lateS float64, windows int) (sum float64) {
	for i := range windows {
		late := lateS * float64(1+i/2)
		if i%2 == 1 {
			late = -late
		}
		c := pairUp(tags, windowS, late)
		sum += c.total()
	}
	return sum / float64(windows)
}
