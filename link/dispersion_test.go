package link

import (
	"math"
	"testing"
)

func TestDispersionAgainstHighPrecision(t *testing.T) {
	for _, row := range derived(t, "dispersion_g652_ps_per_nm_km") {
		if got := Dispersion(row.x); !near(got, row.value, 1e-12) {
			t.Errorf("%v nm: %v ps/(nm km), want %v", row.x, got, row.value)
		}
	}
	for _, row := range derived(t, "dispersion_silica_ps_per_nm_km") {
		if got := SilicaDispersion(row.x); !near(got, row.value, 1e-12) {
			t.Errorf("silica, %v nm: %v ps/(nm km), want %v", row.x, got, row.value)
		}
	}
}

// At λ₀ the dispersion vanishes and its slope is S₀:
// dD/dλ = (S₀/4)(1 + 3 (λ₀/λ)⁴).
func TestDispersionAtItsZero(t *testing.T) {
	if got := Dispersion(1310); got != 0 {
		t.Errorf("%v ps/(nm km) at the zero", got)
	}
	const step = 1e-2
	if slope := (Dispersion(1310+step) - Dispersion(1310-step)) / (2 * step); !near(slope, 0.092, 1e-7) {
		t.Errorf("slope %v ps/(nm² km), want 0.092", slope)
	}
}

// The formula of G.652 holds from 1000 nm up; below, silica takes over.
func TestDispersionChangesFormulaAt1000(t *testing.T) {
	if below := math.Nextafter(1000, 0); Dispersion(below) != SilicaDispersion(below) {
		t.Error("silica does not hold below 1000 nm")
	}
	if want := 0.092 / 4 * (1000 - math.Pow(1310, 4)/1e9); !near(Dispersion(1000), want, 1e-12) {
		t.Errorf("%v ps/(nm km) at 1000 nm, want %v", Dispersion(1000), want)
	}
}

// Chromatic dispersion is how the group delay per length, n_g/c with
// n_g = n - λ dn/dλ, changes with the wavelength. Here both derivatives of
// Malitson's index are central differences.
func TestSilicaDispersionIsTheSlopeOfTheGroupDelay(t *testing.T) {
	index := func(nm float64) float64 {
		x := nm / 1000 // µm
		n2 := 1 + 0.6961663*x*x/(x*x-0.0684043*0.0684043) +
			0.4079426*x*x/(x*x-0.1162414*0.1162414) + 0.8974794*x*x/(x*x-9.896161*9.896161)
		return math.Sqrt(n2)
	}
	const step = 0.5 // nm
	const lightKmPs = 299792.458e-12
	delay := func(nm float64) float64 { // ps/km
		slope := (index(nm+step) - index(nm-step)) / (2 * step)
		return (index(nm) - nm*slope) / lightKmPs
	}
	for _, nm := range []float64{500, 700, 810, 1000, 1310, 1550} {
		want := (delay(nm+step) - delay(nm-step)) / (2 * step)
		if got := SilicaDispersion(nm); math.Abs(got-want) > 0.01 {
			t.Errorf("%v nm: %v ps/(nm km), want %v", nm, got, want)
		}
	}
}
