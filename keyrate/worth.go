package keyrate

import "math"

// goal is a rate that a search climbs.
type goal int

const (
	bothBases goal = iota // the asymptotic rate
	signedSum             // of both bases
	keyBasisAlone
	checkBasisAlone
	blockKey // the finite-size rate after authentication
)

// worth is what a search climbs: the secret rate where there is key, and
// otherwise how far the link is from one, which is not positive. (The signed
// rate has false peaks where nothing is sifted.) Whole bits would be stairs,
// so neither a block's division nor its key is rounded here.
func (v *view) worth(windowS float64, g goal) float64 {
	var r Rate
	v.key(windowS, &r)
	l := v.link
	if g == blockKey {
		b, sifted := l.Split(&r), r.SiftedBps()
		if sifted > 0 {
			b.KeyBits = l.BlockBits * r.SiftedHz[KeyBasis] / sifted
			b.CheckBits = l.BlockBits - b.KeyBits
		}
		return keyOrWant(sifted, (b.SecretBits()-l.AuthenticationBits)/l.BlockBits)
	}
	hk, hc, f := BinaryEntropy(r.QBER[KeyBasis]), BinaryEntropy(r.QBER[CheckBasis]), l.ErrorCorrectionF
	key, check := 1-f*hk-hc, 1-f*hc-hk
	switch g {
	case signedSum:
		if sum := r.SiftedHz[KeyBasis]*key + r.SiftedHz[CheckBasis]*check; sum > 0 {
			return sum
		}
		return min(0, math.Max(key, check))
	case keyBasisAlone:
		return keyOrWant(r.SiftedHz[KeyBasis], key)
	case checkBasisAlone:
		return keyOrWant(r.SiftedHz[CheckBasis], check)
	}
	if r.SecretBps > 0 {
		return r.SecretBps
	}
	return min(0, math.Max(key, check))
}

// keyOrWant returns the secret rate, or the negative secret fraction.
func keyOrWant(sifted, fraction float64) float64 {
	if fraction > 0 {
		return sifted * fraction
	}
	return fraction
}
