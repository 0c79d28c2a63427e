package source

import (
	"math"
	"testing"

	"pairspan/keyrate"
)

// Smooth peaks anywhere, the ends included, are found to the step that settings
// are rounded to.
func TestClimbPump(t *testing.T) {
	for _, peak := range []float64{-3, -2.99, -1.234, 0, 2.5, 4} {
		if x := climbPump(-3, 4, func(x float64) float64 { return -math.Cosh(x - peak) }); math.Abs(x-peak) > 2*pumpStep {
			t.Errorf("found %v, want %v", x, peak)
		}
	}
}

// What is nearer to a key is worth more, and any key more than none.
func TestWorthRises(t *testing.T) {
	l := keyrate.Link{ErrorCorrectionF: 1.1}
	last := math.Inf(-1)
	for k, r := range []keyrate.Rate{
		{QBER: [2]float64{0.5, 0.5}},
		{QBER: [2]float64{0.2, 0.3}},
		{QBER: [2]float64{0.1, 0.12}},
		{QBER: [2]float64{0.01, 0.01}},
		{SecretBps: 1e-30},
		{SecretBps: 0.1},
		{SecretBps: 1e6},
		{UsableBps: 1e-9, SecretBps: 1},
		{UsableBps: 5},
	} {
		worth := worthOf(&l, &r)
		if !(worth > last) {
			t.Errorf("place %d is worth %v, the one before %v", k, worth, last)
		}
		last = worth
	}
}
