package link

import (
	"math"
	"testing"
)

// integral is Simpson's rule with steps enough for the smooth functions here.
func integral(f func(float64) float64, from, to float64) float64 {
	const steps = 400
	h := (to - from) / steps
	sum := f(from) + f(to)
	for i := 1; i < steps; i++ {
		weight := 2.0
		if i%2 == 1 {
			weight = 4
		}
		sum += weight * f(from+float64(i)*h)
	}
	return sum * h / 3
}

// PMDError from the beginning, by integrals. A fibre of differential group
// delay d turns the polarisation of the light at an offset ω from the middle
// of the spectrum by the angle ωd about a principal axis. Over a Gaussian
// spectrum the two components across that axis shrink by the mean of cos ωd.
// The delays of long fibres have a Maxwell distribution, of mean 2a√(2/π), and
// principal axes of all directions: a basis at the angle θ to one keeps
// cos²θ + sin²θ <cos ωd> of its correlation, which is 1 - 2 e.
func TestPMDErrorIsAnAverageOverSpectrumDelaysAndAxes(t *testing.T) {
	for _, row := range []struct{ meanDelayPs, wavelengthNm, bandwidthNm float64 }{
		{0.1, 1550, 0.8}, {0.5, 1550, 0.8}, {1, 1310, 5}, {3, 1550, 2}, {0.7, 810, 3}, {10, 1550, 1},
	} {
		// The width in wavelength, b, is one in angular frequency of 2πc b/λ².
		fwhm := 2 * math.Pi * 299792.458 * row.bandwidthNm / (row.wavelengthNm * row.wavelengthNm) // 1/ps
		spectrum := func(w float64) float64 { return math.Exp(-4 * math.Ln2 * (w / fwhm) * (w / fwhm)) }
		light := integral(spectrum, -3*fwhm, 3*fwhm)
		kept := func(d float64) float64 {
			return integral(func(w float64) float64 { return spectrum(w) * math.Cos(w*d) }, -3*fwhm, 3*fwhm) / light
		}
		a := row.meanDelayPs / 2 * math.Sqrt(math.Pi/2)
		maxwell := func(d float64) float64 {
			return math.Sqrt(2/math.Pi) * d * d / (a * a * a) * math.Exp(-d*d/(2*a*a))
		}
		if mean := integral(func(d float64) float64 { return d * maxwell(d) }, 0, 9*a); !near(mean, row.meanDelayPs, 1e-7) {
			t.Fatalf("the delays have a mean of %v ps, want %v", mean, row.meanDelayPs)
		}
		across := integral(func(d float64) float64 { return maxwell(d) * kept(d) }, 0, 9*a)
		shrink := integral(func(z float64) float64 { return z*z + (1-z*z)*across }, 0, 1) // z = cos θ, evenly spread
		want := (1 - shrink) / 2
		if got := PMDError(row.meanDelayPs, row.wavelengthNm, row.bandwidthNm); !near(got, want, 1e-7) {
			t.Errorf("%+v: %v, want %v", row, got, want)
		}
	}
}

// The width σ of the spectrum, against high precision: the formula of PMDError
// solved for it, at the delay where aσ is 1/2.
func TestPMDSpectralWidthAgainstHighPrecision(t *testing.T) {
	for _, row := range derived(t, "pmd_sigma_per_ps") {
		a := 0.5 / row.value
		e := PMDError(a/math.Sqrt(math.Pi/8), row.x, row.y)
		if got := math.Sqrt(math.Pow(1-3*e, -2.0/3)-1) / a; !near(got, row.value, 1e-13) {
			t.Errorf("%v nm, %v nm wide: %v per ps, want %v", row.x, row.y, got, row.value)
		}
	}
}

// Small: e = (a σ)²/2, to all digits. Large: a third of the directions stays
// untouched, so 1/3 at most.
func TestPMDErrorAtTheEnds(t *testing.T) {
	if got := PMDError(0, 1550, 1); got != 0 {
		t.Errorf("no delay: %v", got)
	}
	if got := PMDError(1e9, 1550, 1); !near(got, 1.0/3, 1e-15) {
		t.Errorf("endless delay: %v, want 1/3", got)
	}
	if small, smaller := PMDError(1e-5, 1550, 1), PMDError(1e-7, 1550, 1); !near(small/smaller, 1e4, 1e-9) {
		t.Errorf("a hundredth of the delay has 1/%v of the error, want 1/10000", small/smaller)
	}
}

// The delay of a fibre grows with the square root of its length.
func TestMeanDelay(t *testing.T) {
	if got := MeanDelay(0.1, 100); got != 1 {
		t.Errorf("%v ps, want 1", got)
	}
	if got, want := MeanDelay(0.07, 40), 2*MeanDelay(0.07, 10); !near(got, want, 1e-15) {
		t.Errorf("four times the length: %v ps, want %v", got, want)
	}
}
