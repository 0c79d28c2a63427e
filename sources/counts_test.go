package sources

import (
	"fmt"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// combinations returns all settings of two analysers with the given letters,
// nothing counted yet.
func combinations(letters string) (c Counts) {
	for _, a := range letters {
		for _, b := range letters {
			s := Setting{Names: [2]string{string(a), string(b)}, Exposure: 1}
			s.Alice, _ = LetterAnalyser(s.Names[0])
			s.Bob, _ = LetterAnalyser(s.Names[1])
			c.Settings = append(c.Settings, s)
		}
	}
	return c
}

// varied returns the settings with random exposures over two decades and
// accidentals up to the given number.
func (d drawer) varied(c Counts, accidentals float64) (varied Counts) {
	for _, s := range c.Settings {
		s.Exposure = 0.1 + 10*d.share()
		s.Accidentals = accidentals * d.share()
		varied.Settings = append(varied.Settings, s)
	}
	return varied
}

// chance returns Tr(ρ P) of the setting.
func (s Setting) chance(rho DensityMatrix) float64 {
	p, sum := s.pair(), complex128(0)
	for i := range p {
		for j := range p {
			sum += cmplx.Conj(p[i]) * rho[i][j] * p[j]
		}
	}
	return max(0, real(sum))
}

// exact returns the settings with the counts that are expected of total pairs,
// fractions left as they are.
func (c Counts) exact(rho DensityMatrix, total float64) (counted Counts) {
	for _, s := range c.Settings {
		s.Counts = total*s.Exposure*s.chance(rho) + s.Accidentals
		counted.Settings = append(counted.Settings, s)
	}
	return counted
}

// simulated returns the settings with Poisson counts.
func (c Counts) simulated(rho DensityMatrix, total float64, seed uint64) (counted Counts) {
	source := rand.NewPCG(seed, 99)
	for _, s := range c.exact(rho, total).Settings {
		s.Counts = distuv.Poisson{Lambda: s.Counts, Src: source}.Rand()
		counted.Settings = append(counted.Settings, s)
	}
	return counted
}

// written returns the counts as a file by letters.
func (c Counts) written() string {
	text := "alice,bob,counts,accidentals,seconds\n"
	for _, s := range c.Settings {
		text += fmt.Sprintf("%s,%s,%.0f,%.17g,%.17g\n", s.Names[0], s.Names[1], s.Counts, s.Accidentals, s.Exposure)
	}
	return text
}

// R is the eigenvector of σ2 to −1, L that to +1, D and A those of σ1, H and V
// those of σ3.
func TestLetterAnalysers(t *testing.T) {
	for letter, want := range map[string][4]float64{
		"H": {1, 0, 0, 1}, "V": {1, 0, 0, -1},
		"D": {1, 1, 0, 0}, "A": {1, -1, 0, 0},
		"L": {1, 0, 1, 0}, "R": {1, 0, -1, 0},
	} {
		a, known := LetterAnalyser(letter)
		if !known {
			t.Fatalf("%s is not known", letter)
		}
		for i, got := range a.stokes() {
			near(t, fmt.Sprintf("S%d of %s", i, letter), got, want[i], 1e-15)
		}
	}
	for _, letter := range []string{"", "h", "X", "HV"} {
		if _, known := LetterAnalyser(letter); known {
			t.Errorf("%q is known", letter)
		}
	}
}

// The correlations that analysers measure are those of DensityMatrix: of two
// analysers at ± along an axis each, T = P(++) + P(--) - P(+-) - P(-+).
func TestAnalysersMeasureCorrelations(t *testing.T) {
	pairs := [3]string{"DA", "LR", "HV"}
	rho := normalDrawer(80).state(3)
	want := rho.Correlations()
	for i, alice := range pairs {
		for j, bob := range pairs {
			sum := 0.0
			for a, sign := range []float64{1, -1} {
				for b, other := range []float64{1, -1} {
					var s Setting
					s.Alice, _ = LetterAnalyser(alice[a : a+1])
					s.Bob, _ = LetterAnalyser(bob[b : b+1])
					sum += sign * other * s.chance(rho)
				}
			}
			near(t, fmt.Sprintf("T%d%d", i+1, j+1), sum, want[i][j], 1e-14)
		}
	}
}
