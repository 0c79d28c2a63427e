package link

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestWindowShareAgainstHighPrecision(t *testing.T) {
	for _, row := range derived(t, "window_share") {
		if got := WindowShare(row.x, row.y); !near(got, row.value, 1e-14) {
			t.Errorf("%v ps of %v ps: %v, want %v", row.x, row.y, got, row.value)
		}
	}
}

// The share is the integral of a Gaussian of the given full width at half
// maximum, exp(-4 ln 2 (t/FWHM)²), over the window.
func TestWindowShareIsAnIntegral(t *testing.T) {
	const fwhmPs = 80
	density := func(ps float64) float64 {
		return math.Exp(-4*math.Ln2*(ps/fwhmPs)*(ps/fwhmPs)) * 2 * math.Sqrt(math.Ln2/math.Pi) / fwhmPs
	}
	for _, windowPs := range []float64{1, 40, 80, 150, 400} {
		want := integral(density, -windowPs/2, windowPs/2)
		if got := WindowShare(windowPs, fwhmPs); !near(got, want, 1e-10) {
			t.Errorf("%v ps: %v, want %v", windowPs, got, want)
		}
	}
	if got := WindowShare(1, 0); got != 1 {
		t.Errorf("no spread: share %v, want 1", got)
	}
}

func TestCoherenceTimeAgainstHighPrecision(t *testing.T) {
	for _, row := range derived(t, "coherence_time_ps") {
		if got := CoherenceTime(row.x, row.y); !near(got, row.value, 1e-14) {
			t.Errorf("%v nm, %v nm wide: %v ps, want %v", row.x, row.y, got, row.value)
		}
	}
}

// Energy conservation: with a narrow pump ω_A + ω_B is fixed, so both photons
// have the same width in frequency, c b/λ² in the small, and hence the same
// coherence time.
func TestPartnersAreEquallyWideInFrequency(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		own := rapid.Float64Range(400, 1700).Draw(t, "own")
		partner := rapid.Float64Range(400, 1700).Draw(t, "partner")
		width := rapid.Float64Range(0.01, 100).Draw(t, "width")
		got := CoherenceTime(partner, PartnerBandwidth(width, own, partner))
		if want := CoherenceTime(own, width); !near(got, want, 1e-13) {
			t.Errorf("coherence times %v and %v ps", want, got)
		}
		if back := PartnerBandwidth(PartnerBandwidth(width, own, partner), partner, own); !near(back, width, 1e-13) {
			t.Errorf("%v nm comes back as %v nm", width, back)
		}
	})
}

func TestRootSumSquare(t *testing.T) {
	for _, row := range []struct {
		parts []float64
		sum   float64
	}{
		{nil, 0}, {[]float64{7}, 7}, {[]float64{3, 4}, 5}, {[]float64{2, 3, 6}, 7}, {[]float64{-3, 4, 0}, 5},
	} {
		if got := RootSumSquare(row.parts...); !near(got, row.sum, 1e-15) {
			t.Errorf("%v: %v, want %v", row.parts, got, row.sum)
		}
	}
}
