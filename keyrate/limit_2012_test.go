package keyrate

import (
	"math"
	"testing"
)

// tomamichel is the key of a block after eq. (2) of [1], with the error
// correction's leak f n h(Q) and both bases' errors equal:
//
//	l = n (1 - h(Q + μ)) - leak - log₂(2/(ε_sec² ε_cor)),
//	μ = √((n+k)/(n k) (k+1)/k ln(4/ε_sec))
//
// [1] Tomamichel et al., Nat. Commun. 3, 634 (2012).
func tomamichel(b Block) float64 {
	n, k := b.KeyBits, b.CheckBits
	mu := math.Sqrt((n + k) / (n * k) * (k + 1) / k * math.Log(4/b.EpsilonSec))
	if b.CheckError+mu >= 0.5 {
		return math.Inf(-1)
	}
	return n*(1-BinaryEntropy(b.CheckError+mu)-b.F*BinaryEntropy(b.KeyError)) -
		math.Log2(2/(b.EpsilonSec*b.EpsilonSec*b.EpsilonCor))
}

// Tomamichel et al. 2012, eq. (2); the formula read, the figures computed.
func TestPublishedOlderFormula(t *testing.T) {
	for _, row := range []struct {
		b    Block
		bits float64
	}{
		{Block{1e5, 1e5, 0.02, 0.02, 1.1, 1e-10, 1e-10}, 59158.6},
		{Block{1e6, 1e6, 0.05, 0.05, 1.16, 1e-10, 1e-15}, 352294.0},
	} {
		if got := tomamichel(row.b); math.Abs(got-row.bits) > 0.05 {
			t.Errorf("%+v: %v bits, want %v", row.b, got, row.bits)
		}
		// The newer formula: more, and close at this size.
		if got := row.b.SecretBits(); got < row.bits || got > 1.1*row.bits {
			t.Errorf("%+v: %v bits, the older formula %v", row.b, got, row.bits)
		}
	}
}

// Where there is a key the newer formula gives at least as much as the older
// one; it makes a key of blocks that had none; and the two meet in large
// blocks, since both tend to n (1 - h(Q) - f h(Q)).
func TestNewerFormulaIsTighter(t *testing.T) {
	var blocksWon int
	for _, share := range []float64{0.3, 0.5, 0.7} { // of the check basis
		for _, qber := range []float64{0.01, 0.03, 0.06} {
			for _, epsilon := range []float64{1e-12, 1e-6} {
				for m := 1e3; m <= 1e12; m *= 10 {
					k := math.Round(share * m)
					b := Block{m - k, k, qber, qber, 1.1, epsilon, epsilon}
					newer, older := b.SecretBits(), tomamichel(b)
					if older > 0 && newer < older {
						t.Errorf("%+v: %v bits, the older formula %v", b, newer, older)
					}
					if newer > 0 && older <= 0 {
						blocksWon++
					}
					limit := b.KeyBits * SecretFraction(qber, qber, b.F)
					if m >= 1e10 && !(newer < 1.005*older && newer < limit && older > 0.99*limit) {
						t.Errorf("%+v: %v bits, the older formula %v, at most %v", b, newer, older, limit)
					}
				}
			}
		}
	}
	if blocksWon == 0 {
		t.Error("no small block makes key by the newer formula alone")
	}
}

// A growing block's rate tends to the key basis's part of the asymptotic rate,
// from below: at equal shares to half, since the check basis is disclosed.
func TestFiniteRateTendsToTheKeyBasisPart(t *testing.T) {
	l, p := campus()
	l.EpsilonTotal = 1e-10
	for _, q := range []float64{0.5, 0.8} {
		p.KeyShare = q
		r := l.Key(p)
		part := r.SiftedHz[KeyBasis] * SecretFraction(r.QBER[KeyBasis], r.QBER[CheckBasis], l.ErrorCorrectionF)
		before := -1.0
		for m := 1e3; m <= 1e13; m *= 10 {
			l.BlockBits = m
			finite := l.Key(p)
			if finite.FiniteBps < before || finite.FiniteBps >= part {
				t.Errorf("q = %v, %v bits: %v bit/s after %v, at most %v", q, m, finite.FiniteBps, before, part)
			}
			if !near(finite.UsableBps, l.DutyCycle*finite.FiniteBps, 1e-15) || finite.SecretBps != r.SecretBps {
				t.Errorf("q = %v, %v bits: %+v", q, m, finite)
			}
			before = finite.FiniteBps
		}
		if !near(before, part, 1e-4) {
			t.Errorf("q = %v: the largest block gives %v bit/s, want %v", q, before, part)
		}
	}
}
