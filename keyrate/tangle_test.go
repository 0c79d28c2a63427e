package keyrate

import (
	"math"
	"testing"
)

// What a tangle T alone says of a key, f = 1 and nothing else to spoil it. With
// C = √T both errors are (1-C)/2 at worst, 0 and (1-C)/2 at best, (1-C)/3 for
// the Werner state (Verstraete, Verschelde, PRA 66, 022307 (2002), bounds the
// correlations from which these follow). The figures are computed.
func TestSecretFractionOfATangle(t *testing.T) {
	worst := func(tangle float64) float64 {
		e := (1 - math.Sqrt(tangle)) / 2
		return SecretFraction(e, e, 1)
	}
	concurrence := math.Sqrt(0.80)
	for _, row := range []struct {
		name      string
		got, want float64
	}{
		{"at worst", worst(0.80), 0.4038},
		{"at best", SecretFraction(0, (1-concurrence)/2, 1), 0.7019},
		{"at best, bases exchanged", SecretFraction((1-concurrence)/2, 0, 1), 0.7019},
		{"Werner", SecretFraction((1-concurrence)/3, (1-concurrence)/3, 1), 0.5604},
	} {
		if math.Abs(row.got-row.want) > 5e-5 {
			t.Errorf("tangle 0.80 %s: %v, want %v", row.name, row.got, row.want)
		}
	}
	if worst(0.6082) >= 0 || worst(0.6084) <= 0 {
		t.Errorf("secret fraction %v at 0.6082 and %v at 0.6084, want a zero between", worst(0.6082), worst(0.6084))
	}
}

// A tangle above 0.7 is useful (common practice, no source).
func TestPublishedUsefulTangle(t *testing.T) {
	e := (1 - math.Sqrt(0.7)) / 2
	if got := SecretFraction(e, e, 1); got <= 0 {
		t.Errorf("secret fraction %v at worst", got)
	}
}

func TestBinaryEntropy(t *testing.T) {
	for _, row := range []struct{ p, h float64 }{
		{0, 0}, {0.5, 1}, {1, 0}, {0.25, 2 - 0.75*math.Log2(3)}, // -(1/4)(-2) - (3/4)(log₂ 3 - 2)
	} {
		if got := BinaryEntropy(row.p); !near(got, row.h, 1e-15) {
			t.Errorf("h(%v) = %v, want %v", row.p, got, row.h)
		}
	}
	for _, p := range []float64{-0.1, 1.1, math.NaN()} {
		if got := BinaryEntropy(p); !math.IsNaN(got) {
			t.Errorf("h(%v) = %v, want NaN", p, got)
		}
	}
	// Small: h = p (log₂(1/p) + log₂ e), to the next order.
	const p = 1e-12
	if want := p * (math.Log2(1/p) + math.Log2E); !near(BinaryEntropy(p), want, 1e-12) {
		t.Errorf("h(1e-12) = %v, want %v", BinaryEntropy(p), want)
	}
}
