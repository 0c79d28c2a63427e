package keyrate

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// satelliteBlock is the block of Lim et al., PRL 126, 100501 (2021), on the
// data of Yin et al., Nature 582, 501 (2020): 3100 sifted bits at a QBER of
// 4.51 %, f = 1.19, the total epsilon split evenly.
func satelliteBlock(k, epsilon float64) Block {
	return Block{3100 - k, k, 0.0451, 0.0451, 1.19, epsilon / 2, epsilon / 2}
}

// The published outcome, read in a secondary summary: six bits at a total
// epsilon of 1e-6, some at 1e-5, none at 1e-7, with the division of the block
// free. The figures at the second decimal are ours, computed independently by a
// search over ξ and ν.
func TestPublishedBlock(t *testing.T) {
	for _, row := range []struct{ k, epsilon, bits, tolerance float64 }{
		{1692, 1e-6, 6.22, 0.005}, {1550, 1e-6, 3.26, 0.005}, {1550, 1e-5, 49.99, 0.005},
	} {
		b := satelliteBlock(row.k, row.epsilon)
		if got := b.SecretBits(); math.Abs(got-row.bits) > row.tolerance {
			t.Errorf("k = %v at %v: %v bits, want %v", row.k, row.epsilon, got, row.bits)
		}
	}
	if b := satelliteBlock(1550, 1e-7); b.SecretBits() > 0 {
		t.Errorf("k = 1550 at 1e-7: %v bits, want none", b.SecretBits())
	}
}

// The same at the best division of the block, all of which are tried.
func TestPublishedBlockDividedFreely(t *testing.T) {
	for _, row := range []struct{ epsilon, bits, tolerance float64 }{
		{1e-6, 6.22, 0.005}, {1e-5, 50.4, 0.05}, {1e-7, -32.7, 0.05},
	} {
		best, bestK := math.Inf(-1), 0.0
		for k := 1.0; k < 3100; k++ {
			b := satelliteBlock(k, row.epsilon)
			if bits := b.SecretBits(); bits > best {
				best, bestK = bits, k
			}
		}
		if math.Abs(best-row.bits) > row.tolerance {
			t.Errorf("at %v: %v bits, want %v", row.epsilon, best, row.bits)
		}
		if row.epsilon == 1e-6 && (bestK != 1692 || math.Floor(best) != 6) {
			t.Errorf("at 1e-6: %v bits with k = %v, want six with 1692", best, bestK)
		}
	}
}

// anyBlock draws a block, mostly one with a key.
func anyBlock(t *rapid.T) Block {
	m := math.Round(math.Pow(10, rapid.Float64Range(3, 13).Draw(t, "block")))
	k := math.Round(m * rapid.Float64Range(0.02, 0.98).Draw(t, "check share"))
	return Block{
		KeyBits: m - k, CheckBits: k,
		KeyError: rapid.Float64Range(0, 0.15).Draw(t, "key error"), CheckError: rapid.Float64Range(0, 0.15).Draw(t, "check error"),
		F:          rapid.Float64Range(1, 1.5).Draw(t, "f"),
		EpsilonSec: math.Pow(10, rapid.Float64Range(-15, -3).Draw(t, "secrecy")),
		EpsilonCor: math.Pow(10, rapid.Float64Range(-15, -3).Draw(t, "correctness")),
	}
}

// bitsAt is the formula of Lim et al. at one choice of ξ and ν: any choice that
// leaves ε_pa above zero proves that many bits secret.
func bitsAt(b Block, xi, nu float64) float64 {
	n, k, m := b.KeyBits, b.CheckBits, b.KeyBits+b.CheckBits
	errors := m * (b.CheckError + xi)
	g := 1/(errors+1) + 1/(m-errors+1)
	pe := math.Sqrt(math.Exp(-2*m*k*xi*xi/(n+1)) + math.Exp(-2*g*(math.Pow(n*(nu-xi), 2)-1)))
	pa := b.EpsilonSec - 2*pe
	if !(pa > 0) {
		return math.Inf(-1)
	}
	return n*(1-BinaryEntropy(b.CheckError+nu)) - b.F*n*BinaryEntropy(b.KeyError) -
		2*math.Log2(1/(2*pa)) - math.Log2(2/b.EpsilonCor)
}

// No ξ and ν do better than those that SecretBits finds. Both are tried in
// units of the deviations that they stand for, around the best and far off.
func TestNoEstimateMakesMoreBits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBlock(t)
		bits := b.SecretBits()
		if math.IsNaN(bits) {
			t.Fatalf("%+v: NaN", b)
		}
		n, k, m := b.KeyBits, b.CheckBits, b.KeyBits+b.CheckBits
		unit := math.Sqrt(-math.Log(b.EpsilonSec) / 2)
		xi := rapid.Float64Range(0.5, 4).Draw(t, "xi") * unit * math.Sqrt((n+1)/(m*k))
		spread := math.Sqrt(m*(b.CheckError+xi)+1) / n
		nu := xi + rapid.Float64Range(0.5, 4).Draw(t, "nu")*unit*spread
		if b.CheckError+nu >= 0.5 {
			return
		}
		other := bitsAt(b, xi, nu)
		if math.IsInf(bits, -1) {
			bits = 0 // too small to say anything: then no choice makes a key
		}
		if other > bits+1e-9*max(1, math.Abs(bits)) {
			t.Errorf("%+v: %v bits, but ξ = %v and ν = %v make %v", b, bits, xi, nu, other)
		}
	})
}

// A larger block, less error, weaker security: never fewer bits. (More check
// bits for the same key bits can make fewer: the second exponential of ε_pe
// bounds a sample by the errors of the whole block, and weakens as that grows.)
func TestBlocksGainByEveryMercy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBlock(t)
		bits := b.SecretBits()
		if !(bits > 0) {
			return
		}
		factor := rapid.Float64Range(1, 3).Draw(t, "factor")
		for name, better := range map[string]Block{
			"larger":               {math.Round(b.KeyBits * factor), math.Round(b.CheckBits * factor), b.KeyError, b.CheckError, b.F, b.EpsilonSec, b.EpsilonCor},
			"less key error":       {b.KeyBits, b.CheckBits, b.KeyError / factor, b.CheckError, b.F, b.EpsilonSec, b.EpsilonCor},
			"less check error":     {b.KeyBits, b.CheckBits, b.KeyError, b.CheckError / factor, b.F, b.EpsilonSec, b.EpsilonCor},
			"better correction":    {b.KeyBits, b.CheckBits, b.KeyError, b.CheckError, 1 + (b.F-1)/factor, b.EpsilonSec, b.EpsilonCor},
			"weaker security":      {b.KeyBits, b.CheckBits, b.KeyError, b.CheckError, b.F, b.EpsilonSec * factor, b.EpsilonCor},
			"more chance of error": {b.KeyBits, b.CheckBits, b.KeyError, b.CheckError, b.F, b.EpsilonSec, b.EpsilonCor * factor},
		} {
			if got := better.SecretBits(); !(got >= bits-1e-9*bits) {
				t.Errorf("%s: %v bits of %+v, %v of %+v", name, got, better, bits, b)
			}
		}
	})
}
