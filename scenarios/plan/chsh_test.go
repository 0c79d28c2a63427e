package plan

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"pairspan/keyrate"
	"pairspan/sources"
)

// TestPublishedCHSH: Werner's state of p = 0.9 has 2 √2 p (Horodecki et al.,
// PLA 200, 340 (1995)), and a QBER of 5 %.
func TestPublishedCHSH(t *testing.T) {
	if got, _ := chsh([2]float64{0.05, 0.05}); math.Abs(got-2.545584) > 1e-6 {
		t.Errorf("Werner's state of p = 0.9: CHSH %v", got)
	}
}

// TestCHSHAgainstAnalysers turns all four analysers over the plane of the two
// bases in small steps: a pair whose bases have the visibilities s₁ and s₂
// gives E(a, b) = s₁ cos a cos b + s₂ sin a sin b. Nothing exceeds the closed
// form, the best comes near it, and its correlators are the ones given.
func TestCHSHAgainstAnalysers(t *testing.T) {
	for _, q := range [][2]float64{{0.02, 0.02}, {0, 0.07}, {0.01, 0.2}} {
		want, e := chsh(q)
		s1, s2 := 1-2*q[0], 1-2*q[1]
		correlator := func(a, b float64) float64 { return s1*math.Cos(a)*math.Cos(b) + s2*math.Sin(a)*math.Sin(b) }
		best, step := 0.0, math.Pi/90
		for a := 0.0; a < math.Pi; a += step {
			for a2 := 0.0; a2 < math.Pi; a2 += step {
				// S = E(a,b) + E(a,b') + E(a',b) - E(a',b') splits into a term of b and one of b',
				// each a scalar product: greatest along the vector's own direction.
				plus := math.Hypot(s1*(math.Cos(a)+math.Cos(a2)), s2*(math.Sin(a)+math.Sin(a2)))
				minus := math.Hypot(s1*(math.Cos(a)-math.Cos(a2)), s2*(math.Sin(a)-math.Sin(a2)))
				best = max(best, plus+minus)
			}
		}
		if best > want+1e-9 || best < want-1e-3 {
			t.Errorf("QBER %v: the best analysers give %v, the closed form %v", q, best, want)
		}
		phi := math.Atan2(s2, s1)
		got := [4]float64{correlator(0, phi), correlator(0, -phi), correlator(math.Pi/2, phi), -correlator(math.Pi/2, -phi)}
		if sum := got[0] + got[1] + got[2] + got[3]; math.Abs(sum-want) > 1e-12 ||
			math.Abs(got[0]-e[0]) > 1e-12 || math.Abs(got[2]-e[1]) > 1e-12 {
			t.Errorf("QBER %v: correlators %v add up to %v; given are %v and %v", q, got, sum, e, want)
		}
	}
}

// TestCHSHOfAMatrix: on a link that adds no error the value at the ends is the
// density matrix's own, and the visibilities are its two best correlations:
// of 0.9 |Φ+> + 0.04 |Φ-> + 0.06 |HV>, 0.88 and 0.86.
func TestCHSHOfAMatrix(t *testing.T) {
	s := quiet(t)
	rho := sources.DensityMatrix{0: {0: 0.47, 3: 0.43}, 1: {1: 0.06}, 3: {0: 0.43, 3: 0.47}}
	s.Source.State = sources.FromDensityMatrix(rho)
	out := newAsker(s).acceptance()
	if want := 2 * math.Hypot(0.88, 0.86); math.Abs(out.CHSH.Nominal-want) > 1e-4 || math.Abs(rho.CHSH()-want) > 1e-12 {
		t.Errorf("CHSH %+v, the state's is %v", *out.CHSH, want)
	}
	if *out.CHSH != (Expected{out.CHSH.Nominal, out.CHSH.Nominal, out.CHSH.Nominal}) {
		t.Errorf("a given state has an interval: %+v", *out.CHSH)
	}
	if v := out.Visibility; math.Abs(v.Key-0.88) > 1e-4 || math.Abs(v.Check-0.86) > 1e-4 {
		t.Errorf("visibilities %+v", *v)
	}
}

// TestCHSHBounds: of a tangle alone, with the link's own errors gone, the value
// lies between 2 √2 C and 2 √(1 + C²) (Verstraete, Wolf, PRL 89, 170401 (2002);
// from memory).
func TestCHSHBounds(t *testing.T) {
	s := quiet(t)
	c := 0.9
	s.Source.State = sources.FromConcurrence(c)
	got := newAsker(s).acceptance().CHSH
	if math.Abs(got.AtWorst-2*math.Sqrt2*c) > 1e-4 || math.Abs(got.AtBest-2*math.Sqrt(1+c*c)) > 1e-4 || got.Nominal <= got.AtWorst || got.Nominal >= got.AtBest {
		t.Errorf("CHSH %+v", *got)
	}
}

// TestBellTimeAgainstCounting counts with dice: after the time given the value
// lies five standard deviations above 2, on average.
func TestBellTimeAgainstCounting(t *testing.T) {
	const coincidencesHz = 700.0
	src := rand.NewPCG(3, 14)
	for _, q := range [][2]float64{{0.03, 0.03}, {0, 0.2}} {
		seconds, ok := bellTime(&keyrate.Rate{QBER: q}, coincidencesHz)
		if !ok {
			t.Fatal("no time")
		}
		_, e := chsh(q)
		const runs = 40_000
		var sum, squares float64
		for range runs {
			var s float64
			for _, e := range [4]float64{e[0], e[0], e[1], e[1]} {
				// Equal and unequal outcomes are each Poisson.
				n := coincidencesHz * seconds / 4
				same := distuv.Poisson{Lambda: n * (1 + e) / 2, Src: src}.Rand()
				other := distuv.Poisson{Lambda: n * (1 - e) / 2, Src: src}.Rand()
				s += (same - other) / (same + other)
			}
			sum, squares = sum+s, squares+s*s
		}
		mean := sum / runs
		sd := math.Sqrt(squares/runs - mean*mean)
		if got := (mean - 2) / sd; math.Abs(got-5) > 0.08 {
			t.Errorf("QBER %v: after %v s the value is %v, %v standard deviations above 2", q, seconds, mean, got)
		}
	}
}

// TestBellTimeLimits: without errors E = 1/√2 everywhere, so 25·4·2/(2√2 - 2)²
// coincidences are needed, and without a violation no time is enough.
func TestBellTimeLimits(t *testing.T) {
	seconds, _ := bellTime(&keyrate.Rate{}, 100)
	if want := 200 / math.Pow(2*math.Sqrt2-2, 2) / 100; math.Abs(seconds-want) > 1e-12*want {
		t.Errorf("%v s, want %v", seconds, want)
	}
	for _, q := range [][2]float64{{0.5, 0.5}, {0, 0.5}, {0.1465, 0.1465}} {
		if seconds, ok := bellTime(&keyrate.Rate{QBER: q}, 100); ok {
			t.Errorf("QBER %v: %v s", q, seconds)
		}
	}
	if _, ok := bellTime(&keyrate.Rate{}, 0); ok {
		t.Error("a time without coincidences")
	}
	if out := filed(t, set{"source.state.tangle", "0.4"}).Acceptance; out.FiveSigmaS != nil {
		t.Errorf("a tangle of 0.4 alone violates nothing for sure, and yet %v s", *out.FiveSigmaS)
	}
}
