package sources

import (
	"math"
	"math/cmplx"
)

// Counts is what two-photon tomography counted: coincidences behind two
// analysers, setting by setting.
type Counts struct {
	Settings []Setting // in file order
}

// Setting is one setting of the two analysers, and what was counted there.
type Setting struct {
	Names       [2]string // how the file names Alice's analyser and Bob's: "R", or "hwp 22.5 qwp 0"
	Alice, Bob  Analyser  // what passes
	Counts      float64   // whole number of coincidences counted, accidentals included
	Accidentals float64   // expected number of accidentals among them, 0 or more
	Exposure    float64   // seconds x efficiency, above 0
	line        int       // where the setting stands in the file, 0 if in none
}

// Analyser is the polarisation that an analyser lets pass, as the amplitudes of
// H and V, of length 1: the Jones vector of a field that goes as
// exp(i(kz − ωt)).
type Analyser [2]complex128

// analyserLetters are the letters of the six analysers. D is at +45° and A at
// −45° from H; R = (H − iV)/√2 turns clockwise for one who looks towards the
// source, and L the other way.
const analyserLetters = "HVDARL"

// LetterAnalyser returns the analyser with the letter H, V, D, A, R or L, and
// whether there is one: D and A = (H ± V)/√2, R and L = (H ∓ iV)/√2.
func LetterAnalyser(letter string) (Analyser, bool) {
	const r = math.Sqrt2 / 2
	switch letter {
	case "H":
		return Analyser{1, 0}, true
	case "V":
		return Analyser{0, 1}, true
	case "D":
		return Analyser{r, r}, true
	case "A":
		return Analyser{r, -r}, true
	case "R":
		return Analyser{r, -1i * r}, true
	case "L":
		return Analyser{r, 1i * r}, true
	}
	return Analyser{}, false
}

// Total returns the number of coincidences counted in all settings.
func (c Counts) Total() float64 {
	sum := 0.0
	for _, s := range c.Settings {
		sum += s.Counts
	}
	return sum
}

// usable tells whether the setting's numbers are in range, as those of a file
// are.
func (s Setting) usable() bool {
	for _, x := range []float64{s.Counts, s.Accidentals, s.Exposure} {
		if !(x >= 0) || math.IsInf(x, 1) {
			return false
		}
	}
	return s.Exposure > 0 && math.Abs(s.Alice.stokes()[0]*s.Bob.stokes()[0]-1) < 1e-9
}

// pair returns the two-photon polarisation that passes both analysers, in the
// order HH, HV, VH, VV.
func (s Setting) pair() (p [4]complex128) {
	for i := range p {
		p[i] = s.Alice[i/2] * s.Bob[i%2]
	}
	return p
}

// stokes returns the analyser's Stokes parameters 1, <σ1>, <σ2>, <σ3>.
func (a Analyser) stokes() [4]float64 {
	cross := cmplx.Conj(a[0]) * a[1]
	h, v := real(a[0]*cmplx.Conj(a[0])), real(a[1]*cmplx.Conj(a[1]))
	return [4]float64{h + v, 2 * real(cross), 2 * imag(cross), h - v}
}
