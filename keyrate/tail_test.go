package keyrate

import (
	"math"
	"testing"
)

// TestExactTailIsNeverAboveTheBound: errors fall on the bits of both bases
// like balls drawn without replacement, whatever their number is. The exact
// chance that the check basis shows an error rate of δ at most while the key
// basis has δ + ν or more must not exceed the ε_pe² that the block was given,
// at the ν that makes most key. Derived: the hypergeometric sum, by logarithms
// of factorials.
func TestExactTailIsNeverAboveTheBound(t *testing.T) {
	tried := 0
	for _, b := range []Block{
		{KeyBits: 500, CheckBits: 500, CheckError: 0.02, EpsilonSec: 1e-2},
		{KeyBits: 600, CheckBits: 400, CheckError: 0.05, EpsilonSec: 1e-4},
		{KeyBits: 300, CheckBits: 900, CheckError: 0.03, EpsilonSec: 1e-3},
		{KeyBits: 1200, CheckBits: 300, CheckError: 0.01, EpsilonSec: 1e-3},
		{KeyBits: 1408, CheckBits: 1692, CheckError: 0.0451, EpsilonSec: 5e-7},
		{KeyBits: 2000, CheckBits: 2000, CheckError: 0, EpsilonSec: 1e-6},
	} {
		b.F, b.EpsilonCor = 1, b.EpsilonSec
		nu, paShare, ok := b.bestEstimate()
		if !ok {
			t.Fatalf("%+v: too small", b)
		}
		pe := b.EpsilonSec * (1 - paShare) / 2
		worst := 0.0
		for errors := 0.0; errors <= b.KeyBits+b.CheckBits; errors++ {
			worst = max(worst, b.missed(errors, nu))
		}
		if worst > pe*pe {
			t.Errorf("%+v: the chance is %v, bounded by %v", b, worst, pe*pe)
		}
		if worst > 0 {
			tried++
		}
	}
	if tried < 4 {
		t.Errorf("only %d blocks have a chance to miss", tried)
	}
}

// missed is the exact chance that so many errors among all bits show a rate of
// δ at most in the check basis and of δ + ν at least in the key basis.
func (b *Block) missed(errors, nu float64) (chance float64) {
	n, k := b.KeyBits, b.CheckBits
	most := min(math.Floor(k*b.CheckError), math.Floor(errors-n*(b.CheckError+nu)))
	for j := max(0, errors-n); j <= min(most, k); j++ {
		chance += math.Exp(lnChoose(k, j) + lnChoose(n, errors-j) - lnChoose(n+k, errors))
	}
	return chance
}

// lnChoose is the logarithm of a binomial coefficient.
func lnChoose(n, k float64) float64 {
	a, _ := math.Lgamma(n + 1)
	b, _ := math.Lgamma(k + 1)
	c, _ := math.Lgamma(n - k + 1)
	return a - b - c
}
