package keyrate

import "math"

// BinaryEntropy returns h(p) = -p log₂ p - (1-p) log₂(1-p) in bits, for p in
// 0 to 1; NaN outside.
func BinaryEntropy(p float64) float64 {
	if p == 0 || p == 1 {
		return 0
	}
	return -(p*math.Log(p) + (1-p)*math.Log1p(-p)) / math.Ln2
}

// SecretFraction returns the secret bits per sifted bit, negative where there
// is no key:
//
//	r = 1 - f h(e_bit) - h(e_phase)
//
// with the bit error eBit, the phase error ePhase (0 to 1/2) and the error
// correction's inefficiency f ≥ 1.
//
// Source: Koashi, Preskill, PRL 90, 057902 (2003); f = 1 and equal errors is
// Shor, Preskill, PRL 85, 441 (2000).
func SecretFraction(eBit, ePhase, f float64) float64 {
	return 1 - f*BinaryEntropy(eBit) - BinaryEntropy(ePhase)
}

// Threshold returns the QBER, equal in both bases, above which error
// correction of inefficiency f ≥ 1 leaves no key: 0.110 at f = 1.
func Threshold(f float64) float64 {
	lo, hi := 0.0, 0.5
	for range 60 {
		if mid := (lo + hi) / 2; SecretFraction(mid, mid, f) > 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo
}
