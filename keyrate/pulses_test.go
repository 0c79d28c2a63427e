package keyrate

import (
	"math"
	"math/rand/v2"
	"testing"

	"pairspan/link"
)

// pulses runs a pulsed link slot by slot. A time is the number of a slot here.
type pulses struct {
	link     *Link
	p        OperatingPoint
	r        *rand.Rand
	eta      [2]float64
	inWindow [2]float64 // of photons that click
	dead     [2]int     // slots that a detector misses after a click
	error    [2][2]float64
	turns    [3]map[[2]int][]float64 // of each basis and of unmatched ones: how the photons fall at Bob

	slot     int
	liveFrom [2][4]int
	noiseAt  [2][4]float64 // the slot of each detector's next noise count
	clicks   [2][4]bool    // in this slot
	seen     [2][4]bool    // in its window
	singles  [2]float64
	tags     [2][]tag
}

func newPulses(l *Link, p OperatingPoint, seed uint64) *pulses {
	s := &pulses{link: l, p: p, r: rand.New(rand.NewPCG(2, seed))}
	straight := 1.0
	for i, a := range l.Arms {
		s.eta[i] = a.Transmittance * a.Detector.Efficiency
		s.inWindow[i] = link.WindowShare(p.WindowS*psPerSecond, a.SpreadFWHMPs)
		s.dead[i] = int(a.Detector.DeadTimeNs * 1e-9 * l.PulseRateHz)
		straight *= (1 - 2*a.Misalignment) * (1 - 2*a.PMDError)
		for d := range s.noiseAt[i] {
			s.noiseAt[i][d] = s.untilNoise(i)
		}
	}
	for a := range s.error {
		for b := range s.error {
			s.error[a][b] = 0.5
		}
		s.error[a][a] = (1 - (1-2*l.StateError[a])*straight) / 2
	}
	for i := range s.turns {
		s.turns[i] = map[[2]int][]float64{}
	}
	return s
}

func (s *pulses) chance(p float64) bool { return s.r.Float64() < p }

func (s *pulses) coin() int { return int(s.r.Uint64() & 1) }

// untilNoise is the time to a detector's next noise count, in slots.
func (s *pulses) untilNoise(arm int) float64 {
	a := &s.link.Arms[arm]
	return s.r.ExpFloat64() / (a.BackgroundHz + a.Detector.DarkCountsHz) * s.link.PulseRateHz
}

func (s *pulses) basis() int {
	if s.chance(s.p.KeyShare) {
		return KeyBasis
	}
	return CheckBasis
}

// photon clicks, or not, in one detector of an arm.
func (s *pulses) photon(arm, basis, bit int) {
	if !s.chance(s.eta[arm]) {
		return
	}
	d := bit
	if s.link.Arms[arm].Passive {
		d += 2 * basis
	}
	s.clicks[arm][d] = true
	if s.chance(s.inWindow[arm]) {
		s.seen[arm][d] = true
	}
}

// poissonPairs are independent: each has its own bits, and its own bases at a
// beam splitter.
func (s *pulses) poissonPairs(set [2]int) {
	n, sum := 0, math.Exp(-s.p.PairRateHz/s.link.PulseRateHz)
	for p, u := sum, s.r.Float64(); u > sum; sum += p {
		n++
		p *= s.p.PairRateHz / s.link.PulseRateHz / float64(n)
	}
	for range n {
		basis := set
		for arm := range basis {
			if s.link.Arms[arm].Passive {
				basis[arm] = s.basis()
			}
		}
		bit := s.coin()
		s.photon(Alice, basis[Alice], bit)
		if s.chance(s.error[basis[Alice]][basis[Bob]]) {
			bit ^= 1
		}
		s.photon(Bob, basis[Bob], bit)
	}
}

// thermalPairs are numbers of photons in two polarisations of each Schmidt
// mode, seen in Bob's turned frame. The bases are those set: a beam splitter
// would turn each part of the light by itself.
func (s *pulses) thermalPairs(set [2]int) {
	mean := s.p.PairRateHz / s.link.PulseRateHz / (2 * s.link.Modes)
	number := func() int { return int(math.Log(1-s.r.Float64()) / math.Log(mean/(1+mean))) }
	turn := set[Alice]
	if set[Alice] != set[Bob] {
		turn = 2
	}
	for range int(s.link.Modes) {
		n, m := number(), number()
		if n+m == 0 {
			continue
		}
		falls, ok := s.turns[turn][[2]int{n, m}]
		if !ok {
			falls = turned(n, m, s.error[set[Alice]][set[Bob]])
			s.turns[turn][[2]int{n, m}] = falls
		}
		p := 0
		for u := s.r.Float64() - falls[0]; u > 0 && p < n+m; u -= falls[p] {
			p++
		}
		for arm, first := range [2]int{n, p} {
			for i := range n + m {
				bit := 0
				if i >= first {
					bit = 1
				}
				s.photon(arm, set[arm], bit)
			}
		}
	}
}

// alone are photons without a partner, which come with the pulse.
func (s *pulses) alone(set [2]int) {
	for arm, basis := range set {
		mean := s.link.Arms[arm].UnpairedHz / s.link.PulseRateHz
		for at := s.r.ExpFloat64(); at < mean; at += s.r.ExpFloat64() {
			if s.link.Arms[arm].Passive {
				basis = s.basis()
			}
			s.photon(arm, basis, s.coin())
		}
	}
}

// next plays one slot.
func (s *pulses) next() {
	set := [2]int{s.basis(), s.basis()}
	if math.IsInf(s.link.Modes, 1) {
		s.poissonPairs(set)
	} else {
		s.thermalPairs(set)
	}
	s.alone(set)
	for arm := range s.clicks {
		s.noise(arm)
		s.register(arm, set[arm])
	}
	s.clicks, s.seen = [2][4]bool{}, [2][4]bool{}
	s.slot++
}

func (s *pulses) detectors(arm int) int {
	if s.link.Arms[arm].Passive {
		return 4
	}
	return 2
}

func (s *pulses) noise(arm int) {
	for d := range s.detectors(arm) {
		for s.noiseAt[arm][d] < float64(s.slot+1) {
			s.noiseAt[arm][d] += s.untilNoise(arm)
			s.clicks[arm][d] = true
			if s.chance(s.p.WindowS * s.link.PulseRateHz) {
				s.seen[arm][d] = true
			}
		}
	}
}

// register lets dead time pass, and makes a tag of each basis of the arm that
// clicked in its window; both detectors together are a random bit.
func (s *pulses) register(arm, set int) {
	for d := range s.detectors(arm) {
		if !s.clicks[arm][d] {
			continue
		}
		if s.slot < s.liveFrom[arm][d] {
			s.seen[arm][d] = false
			continue
		}
		s.liveFrom[arm][d] = s.slot + 1 + s.dead[arm]
		s.singles[arm]++
	}
	for d := 0; d < s.detectors(arm); d += 2 {
		zero, one := s.seen[arm][d], s.seen[arm][d+1]
		if !zero && !one {
			continue
		}
		basis, bit := set, 0
		if s.link.Arms[arm].Passive {
			basis = d / 2
		}
		if one {
			bit = 1
		}
		if zero && one {
			bit = s.coin()
		}
		s.tags[arm] = append(s.tags[arm], tag{float64(s.slot), uint8(basis), uint8(bit)})
	}
}

// Every figure is held to three standard deviations. The seeds are the numbers
// of the links and were chosen once, before the first run. One arm's dead time
// is short, so that the dead times which coincide do not show.
func TestRatesAgainstPulses(t *testing.T) {
	poisson := math.Inf(1)
	for i, row := range []struct {
		name               string
		modes, mean, share float64
		slots              int
		alice, bob         Arm
		aliceDead, bobDead float64 // ns
		passiveA, passiveB bool
	}{
		{"passive, Poisson", poisson, 0.2, 0.5, 1.5e6, Arm{Transmittance: 0.3}, Arm{Transmittance: 0.4}, 8, 0, true, true},
		{
			"active and passive, biased, Poisson, dead time", poisson, 0.1, 0.7, 8e6,
			Arm{Transmittance: 0.3, SpreadFWHMPs: 700},
			Arm{Transmittance: 0.06},
			200, 10, false, true,
		},
		{"active, one thermal mode", 1, 0.2, 0.5, 1.5e6, Arm{Transmittance: 0.3}, Arm{Transmittance: 0.4}, 9.9, 0, false, false},
		{
			"active, biased, two thermal modes, dead time", 2, 0.15, 0.7, 6e6,
			Arm{Transmittance: 0.05},
			Arm{Transmittance: 0.4, SpreadFWHMPs: 900},
			19.9, 100, false, false,
		},
		{
			"passive and active, Poisson, light without a partner", poisson, 0.1, 0.5, 3e6,
			Arm{Transmittance: 0.3, UnpairedHz: 2e7, SpreadFWHMPs: 700},
			Arm{Transmittance: 0.25, UnpairedHz: 4e7},
			8, 0, true, false,
		},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			if testing.Short() && row.slots > 2e6 {
				t.Skip("takes too long")
			}
			l := arms(row.alice, row.bob)
			l.PulseRateHz, l.Modes = 1e8, row.modes
			for arm := range l.Arms {
				a := &l.Arms[arm]
				a.Passive = [2]bool{row.passiveA, row.passiveB}[arm]
				a.Detector = link.Detector{Efficiency: 1, DarkCountsHz: 2e4, DeadTimeNs: [2]float64{row.aliceDead, row.bobDead}[arm]}
				a.BackgroundHz = 1e4
			}
			p := OperatingPoint{PairRateHz: row.mean * l.PulseRateHz, WindowS: 1e-9, KeyShare: row.share}
			s := newPulses(&l, p, uint64(i))
			if got, want := l.Key(p).WindowShare, s.inWindow[Alice]*s.inWindow[Bob]; !near(got, want, 1e-14) {
				t.Errorf("window share %v, want both arms' product %v", got, want)
			}
			for range row.slots {
				s.next()
			}
			want, seconds := modelled(&l, p), float64(row.slots)/l.PulseRateHz
			for arm, name := range [2]string{"Alice's singles", "Bob's singles"} {
				singles := want.singles[arm] * seconds
				within(t, name, s.singles[arm], singles, math.Sqrt(singles))
			}
			compare(t, s.tags, 0.5, 100, seconds, want)
		})
	}
}
