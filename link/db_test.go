package link

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// A loss and its transmittance are two ways to say the same.
func TestLossAndTransmittanceUndoEachOther(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		loss := DB(rapid.Float64Range(0, 300).Draw(t, "loss"))
		// The transmittance's last digit is worth 1e-15 dB; that of a loss of
		// 300 dB is worth 6e-14 dB.
		if got := LossOf(loss.Transmittance()); math.Abs(float64(got-loss)) > 2e-13 {
			t.Errorf("%v dB comes back as %v dB", loss, got)
		}
		other := DB(rapid.Float64Range(0, 300).Draw(t, "other"))
		if (loss < other) && loss.Transmittance() < other.Transmittance() {
			t.Errorf("%v dB lets less through than %v dB", loss, other)
		}
	})
}

func TestLossAtTheEnds(t *testing.T) {
	for _, row := range []struct{ transmittance, loss float64 }{
		{1, 0}, {0.1, 10}, {0.001, 30}, {0, math.Inf(1)},
	} {
		if got := float64(LossOf(row.transmittance)); !near(got, row.loss, 1e-15) || math.Signbit(got) {
			t.Errorf("transmittance %v: %v dB, want %v", row.transmittance, got, row.loss)
		}
		if got := DB(row.loss).Transmittance(); !near(got, row.transmittance, 1e-15) {
			t.Errorf("%v dB: transmittance %v, want %v", row.loss, got, row.transmittance)
		}
	}
	if got := LossOf(-0.1); !math.IsNaN(float64(got)) {
		t.Errorf("a negative transmittance has a loss of %v dB, want NaN", got)
	}
}
