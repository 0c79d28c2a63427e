package sources

import (
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"
)

// mapDrawing draws spectral maps.
type mapDrawing struct {
	seed    uint64
	bins    [2]int
	tangles bool
	decades float64 // shares span that many
	empty   float64 // how many bins have no pairs, 0 to 1
}

// text returns a drawn map as a file.
func (d mapDrawing) text() string {
	random, states := rand.New(rand.NewPCG(d.seed, 1)), normalDrawer(d.seed)
	var shares []float64
	sum := 0.0
	for range d.bins[0] * d.bins[1] {
		x := math.Pow(10, -d.decades*random.Float64())
		if len(shares) > 0 && random.Float64() < d.empty {
			x = 0
		}
		shares, sum = append(shares, x), sum+x
	}
	var text strings.Builder
	text.WriteString("alice_nm,bob_nm,share,row,col,re,im\n")
	if d.tangles {
		text.Reset()
		text.WriteString("alice_nm,bob_nm,share,tangle\n")
	}
	for k, share := range shares {
		if share == 0 && k%2 == 0 { // half of the empty bins are absent
			continue
		}
		bin := fmt.Sprintf("%g,%g,%g", 1540+0.4*float64(k/d.bins[1]), 1560-0.5*float64(k%d.bins[1]), share/sum)
		if d.tangles {
			fmt.Fprintf(&text, "%s,%g\n", bin, random.Float64())
			continue
		}
		rho := mixed(0.4*random.Float64(), bell(1, 1), states.turned(states.state(1+k%4)))
		for i := range rho {
			for j := range rho {
				fmt.Fprintf(&text, "%s,%d,%d,%v,%v\n", bin, i, j, real(rho[i][j]), imag(rho[i][j]))
			}
		}
	}
	return text.String()
}

func (d mapDrawing) spectralMap(t testing.TB) *SpectralMap {
	t.Helper()
	return mustReadMap(t, d.text())
}

func mustReadMap(t testing.TB, text string) *SpectralMap {
	t.Helper()
	m, err := ReadSpectralMap(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// allBands calls do for all pairs of pass bands of a map.
func allBands(m *SpectralMap, do func(first, last [2]int)) {
	nA, nB := len(m.CentreNm[0]), len(m.CentreNm[1])
	for a := range nA {
		for b := a; b < nA; b++ {
			for c := range nB {
				for d := c; d < nB; d++ {
					do([2]int{a, c}, [2]int{b, d})
				}
			}
		}
	}
}

// exactShares sums the shares bin by bin with 200 binary digits: of both photons
// inside, of Alice's alone, of Bob's alone.
func exactShares(m *SpectralMap, first, last [2]int) (sums [3]*big.Float) {
	for k := range sums {
		sums[k] = new(big.Float).SetPrec(200)
	}
	for i, row := range m.Bins {
		for j, bin := range row {
			inA, inB := i >= first[0] && i <= last[0], j >= first[1] && j <= last[1]
			place := 0
			switch {
			case inA && inB:
			case inA:
				place = 1
			case inB:
				place = 2
			default:
				continue
			}
			sums[place].Add(sums[place], big.NewFloat(bin.Share))
		}
	}
	return sums
}

// offBy returns how far x is off the exact value, relative to it.
func offBy(x float64, exact *big.Float) float64 {
	if exact.Sign() == 0 {
		return math.Abs(x)
	}
	d := new(big.Float).SetPrec(200).Sub(big.NewFloat(x), exact)
	r, _ := d.Quo(d, exact).Float64()
	return math.Abs(r)
}

// Bands that hold 1e-14 of the pairs, or leave that much unpaired, keep their
// digits as well as the widest.
func TestBandSumsAreExact(t *testing.T) {
	for seed := range uint64(6) {
		m := mapDrawing{seed: seed, bins: [2]int{6, 7}, decades: 14, empty: 0.3}.spectralMap(t)
		allBands(m, func(first, last [2]int) {
			b := m.Band(first, last)
			exact := exactShares(m, first, last)
			for k, x := range []float64{b.Share, b.UnpairedShare[0], b.UnpairedShare[1]} {
				if off := offBy(x, exact[k]); off > 1e-14 {
					t.Fatalf("seed %d, band %v %v: share %d is %g, off by %g", seed, first, last, k, x, off)
				}
			}
			rho, ok := m.Mixture(first, last)
			if ok != (b.Share > 0) {
				t.Fatalf("band %v %v: share %g, but ok is %v", first, last, b.Share, ok)
			}
			if !ok {
				return
			}
			e1, e2 := rho.AlignedErrors()
			if math.Abs(b.StateError[0]-e1) > 1e-13 || math.Abs(b.StateError[1]-e2) > 1e-13 {
				t.Fatalf("seed %d, band %v %v: errors %v, and %g, %g of the mixture", seed, first, last, b.StateError, e1, e2)
			}
		})
	}
}

func TestStrengths(t *testing.T) {
	random := normalDrawer(5)
	for k := range 4000 {
		var m columns3
		var wide [4][4]complex128
		for c := range m {
			for r := range m[c] {
				m[c][r] = random()
				switch {
				case k%5 == 1 && c > 0: // of rank 1
					m[c][r] = m[0][r] * float64(c)
				case k%5 == 2: // diagonal
					if r != c {
						m[c][r] = 0
					}
				case k%5 == 3: // nearly degenerate
					m[c][r] *= 1e-9
					if r == c {
						m[c][r]++
					}
				case k%5 == 4: // of very different sizes
					m[c][r] *= math.Pow(10, -6*float64(c))
				}
				wide[r][c] = complex(m[c][r], 0)
			}
		}
		want := singularValues(wide)
		s1, s2 := m.strengths()
		if math.Abs(s1-want[0]) > 1e-14*want[0] || math.Abs(s2-want[1]) > 1e-14*want[0] {
			t.Fatalf("%v has %v, %v, want %v", m, s1, s2, want)
		}
	}
	if s1, s2 := (columns3{}).strengths(); s1 != 0 || s2 != 0 {
		t.Errorf("no correlations: %g, %g", s1, s2)
	}
}

// Concurrence is convex: no mixture has more than the mean of its bins. Werner
// states about the same Bell state have just that.
func TestMostConcurrence(t *testing.T) {
	m := mapDrawing{seed: 1, bins: [2]int{3, 4}, decades: 1}.spectralMap(t)
	below := false
	allBands(m, func(first, last [2]int) {
		rho, _ := m.Mixture(first, last)
		c, most := rho.Concurrence(), m.MostConcurrence(first, last)
		if c > most+1e-9 {
			t.Errorf("band %v %v: concurrence %g, above %g", first, last, c, most)
		}
		below = below || c < most-0.01
	})
	if !below {
		t.Error("no mixture lies below the mean: the states drawn are all alike")
	}
	m = mapDrawing{seed: 2, bins: [2]int{3, 4}, decades: 1, tangles: true}.spectralMap(t)
	allBands(m, func(first, last [2]int) {
		rho, _ := m.Mixture(first, last)
		if c, most := rho.Concurrence(), m.MostConcurrence(first, last); math.Abs(c-most) > 1e-9 {
			t.Errorf("band %v %v: concurrence %g, want %g", first, last, c, most)
		}
	})
}

// Two bins of Bell states that differ by a phase φ mix to a state of concurrence
// |p + (1−p) exp(iφ)|, which a pass band around one of them restores.
func TestMixtureOfPhases(t *testing.T) {
	const p, phase = 0.7, 1.1
	file := "alice_nm,bob_nm,share,row,col,re,im\n"
	for k, share := range []float64{p, 1 - p} {
		c, s := math.Cos(phase*float64(k)), math.Sin(phase*float64(k))
		for i := range 4 {
			for j := i; j < 4; j++ {
				re, im := 0.0, 0.0
				switch {
				case i == j && i%3 == 0:
					re = 0.5
				case i == 0 && j == 3:
					re, im = c/2, s/2
				}
				file += fmt.Sprintf("%d,1550,%v,%d,%d,%v,%v\n", 1549+k, share, i, j, re, im)
			}
		}
	}
	m := mustReadMap(t, file)
	rho, _ := m.Mixture([2]int{0, 0}, [2]int{1, 0})
	want := math.Hypot(p+(1-p)*math.Cos(phase), (1-p)*math.Sin(phase))
	if c := rho.Concurrence(); math.Abs(c-want) > 1e-9 {
		t.Errorf("concurrence %g, want %g", c, want)
	}
	whole, one := m.Whole(), m.Band([2]int{}, [2]int{})
	if e := whole.StateError; math.Abs(e[0]) > 1e-14 || math.Abs(e[1]-(1-want)/2) > 1e-14 {
		t.Errorf("errors of the whole are %v", e)
	}
	if one.Share != p || one.StateError[1] > 1e-14 || one.UnpairedShare != [2]float64{0, 1 - p} {
		t.Errorf("the narrow band is %+v", one)
	}
	if whole.WidthNm(0) != 2 || whole.WidthNm(1) != 0 || one.CentreNm(0) != 1549 || one.ToNm[0] != 1549.5 {
		t.Errorf("bands lie at %+v and %+v", whole, one)
	}
}
