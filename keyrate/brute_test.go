package keyrate

import (
	"math"
	"math/rand/v2"
	"testing"
)

// pattern is the probability of every set of clicks in a slot; the set is a
// number of the bits 1 and 2 (Alice's detectors) and 4 and 8 (Bob's).
type pattern [16]float64

const (
	aliceBit = 1
	bobBit   = 4
)

// either is what two independent causes make together.
func (p pattern) either(q pattern) (both pattern) {
	for i, x := range p {
		for j, y := range q {
			both[i|j] += x * y
		}
	}
	return both
}

var nothing = pattern{0: 1}

// lone is one cause that makes the clicks with probability p.
func lone(clicks int, p float64) pattern {
	c := pattern{0: 1 - p}
	c[clicks] += p
	return c
}

// ofNumber is a random number of equal causes: numbers[n] is the chance of n.
func (p pattern) ofNumber(numbers []float64) (sum pattern) {
	after := nothing // n of them
	for _, chance := range numbers {
		for i, x := range after {
			sum[i] += chance * x
		}
		after = after.either(p)
	}
	return sum
}

// score adds the noise counts d of one detector of each arm and returns what a
// slot is worth: the chance that both arms click, and the share of unequal
// bits, a double click being a random bit.
func (p pattern) score(d [2]float64) (q, qber float64) {
	for i, bit := range [4]int{1, 2, 4, 8} {
		p = p.either(lone(bit, -math.Expm1(-d[i/2])))
	}
	var wrong float64
	for clicks, x := range p {
		a, b := clicks&3, clicks>>2
		switch {
		case a == 0 || b == 0:
			continue
		case a == 3 || b == 3:
			wrong += x / 2
		case a != b:
			wrong += x
		}
		q += x
	}
	return q, wrong / q
}

// most is more photons of one kind than any row here has with a chance above
// 1e-16.
const most = 90

// poissonNumbers are the chances of 0, 1, 2... of a Poisson number.
func poissonNumbers(mean float64) []float64 {
	p := make([]float64, most)
	p[0] = math.Exp(-mean)
	for n := 1; n < most; n++ {
		p[n] = p[n-1] * mean / float64(n)
	}
	return p
}

// thermalNumbers are the chances of 0, 1, 2... photons in all of a number of
// thermal modes, not necessarily whole, each of the same mean.
func thermalNumbers(modes, mean float64) []float64 {
	p := make([]float64, most)
	p[0] = math.Pow(1+mean, -modes)
	for n := 1; n < most; n++ {
		p[n] = p[n-1] * (float64(n) - 1 + modes) / float64(n) * mean / (1 + mean)
	}
	return p
}

// pairClicks is what one pair does whose photons belong to Alice's detector i
// and Bob's detector j.
func pairClicks(i, j int, eta [2]float64) pattern {
	return lone(aliceBit<<i, eta[Alice]).either(lone(bobBit<<j, eta[Bob]))
}

// bruteForcePoisson sums over photon numbers. Pairs come in four kinds: equal
// bits twice, μ(1-e)/2 each, and unequal bits twice, μ e/2 each. A pair of
// which only a share w meets in the window puts both photons into this slot
// with the mean μ w; with the mean μ(1-w) the slot sees Alice's photon of a
// pair whose other photon falls into another slot, and as often Bob's alone.
func bruteForcePoisson(s Slot) (q, qber float64) {
	all := nothing
	for i := range 2 {
		for j := range 2 {
			mean := s.Pairs / 2 * s.Error
			if i == j {
				mean = s.Pairs / 2 * (1 - s.Error)
			}
			all = all.either(pairClicks(i, j, s.Efficiency).ofNumber(poissonNumbers(mean * s.Share)))
		}
		alone := poissonNumbers(s.Pairs / 2 * (1 - s.Share))
		all = all.either(lone(aliceBit<<i, s.Efficiency[Alice]).ofNumber(alone))
		all = all.either(lone(bobBit<<i, s.Efficiency[Bob]).ofNumber(alone))
	}
	return all.score(s.Noise)
}

// bruteForceThermal sums over the photon numbers of both polarisations, at no
// error.
func bruteForceThermal(s Slot) (q, qber float64) {
	numbers := thermalNumbers(s.Modes, s.Pairs/(2*s.Modes))
	all := nothing
	for i := range 2 {
		all = all.either(pairClicks(i, i, s.Efficiency).ofNumber(numbers))
	}
	return all.score(s.Noise)
}

// anySlot draws a slot of moderate figures.
func anySlot(r *rand.Rand) Slot {
	decades := func(from, to float64) float64 { return math.Pow(10, from+(to-from)*r.Float64()) }
	return Slot{
		Pairs:      decades(-2, 0.3),
		Efficiency: [2]float64{decades(-1.5, 0), decades(-1.5, 0)},
		Noise:      [2]float64{decades(-6, -1.5), decades(-6, -1.5)},
		Share:      1, Error: 0.3 * r.Float64(), Modes: math.Inf(1),
	}
}

// agrees holds a slot to a brute-force figure, to 1e-9.
func agrees(t *testing.T, s Slot, wantQ, wantQBER float64) {
	t.Helper()
	q, qber := s.Click()
	if !near(q, wantQ, 1e-9) || !near(qber, wantQBER, 1e-9) {
		t.Errorf("%+v: gain %v, QBER %v; the photons say %v, %v", s, q, qber, wantQ, wantQBER)
	}
}

func TestPoissonSlotAgainstPhotonNumbers(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for i := range 24 {
		s := anySlot(r)
		if i%2 == 1 {
			s.Share = 0.05 + 0.95*r.Float64()
		}
		q, qber := bruteForcePoisson(s)
		agrees(t, s, q, qber)
	}
}

func TestThermalSlotAgainstPhotonNumbers(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 1))
	for _, modes := range []float64{1, 1.2, 1.7, 2, 3, 7.5, 50} {
		for range 2 {
			s := anySlot(r)
			s.Error, s.Modes = 0, modes
			q, qber := bruteForceThermal(s)
			agrees(t, s, q, qber)
		}
	}
}

// Accidental is what is left when no pair reaches both arms: the same photons
// and noise at each arm, of which the other knows nothing.
func TestAccidentalsAgainstPhotonNumbers(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1))
	for range 12 {
		s := anySlot(r)
		s.Share = 0
		want, _ := bruteForcePoisson(s)
		s.Share = r.Float64() // accidentals do not ask which pairs meet
		if got := s.Accidental(); !near(got, want, 1e-9) {
			t.Errorf("%+v: accidental %v; the photons say %v", s, got, want)
		}
	}
}
