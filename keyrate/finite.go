package keyrate

import "math"

// Block is a block of sifted bits from which a finite-size key is made.
type Block struct {
	KeyBits, CheckBits     float64 // n and k, bits of each basis
	KeyError, CheckError   float64 // QBER of each basis; the check basis's is disclosed
	F                      float64 // inefficiency of the error correction, ≥ 1
	EpsilonSec, EpsilonCor float64 // secrecy and correctness
}

// Split divides a block of m sifted bits between the bases as the link sifts
// them, and its failure probability evenly between secrecy and correctness.
func (l *Link) Split(r *Rate) Block {
	total := r.SiftedBps()
	n := 0.0
	if total > 0 {
		n = math.Round(l.BlockBits * r.SiftedHz[KeyBasis] / total)
	}
	return Block{
		KeyBits: n, CheckBits: l.BlockBits - n,
		KeyError: r.QBER[KeyBasis], CheckError: r.QBER[CheckBasis],
		F: l.ErrorCorrectionF, EpsilonSec: l.EpsilonTotal / 2, EpsilonCor: l.EpsilonTotal / 2,
	}
}

// wholeBits returns the secret bits of a block, floored, not below 0.
func (l *Link) wholeBits(r *Rate) float64 {
	b := l.Split(r)
	return max(0, math.Floor(b.SecretBits()))
}

// SecretBits returns the secret bits of the block, not rounded; zero or
// negative where there is no key, -Inf where the block is too small to say
// anything of its errors.
//
//	l = n (1 - h(δ + ν)) - f n h(e_key) - 2 log₂(1/(2 ε_pa)) - log₂(2/ε_cor)
//	ε_sec = ε_pa + 2 ε_pe
//
// maximised over 0 < ξ < ν < 1/2 - δ, where
//
//	ε_pe² = exp(-2 m k ξ²/(n+1)) + exp(-2 G ((n (ν - ξ))² - 1))
//	G     = 1/(m (δ+ξ) + 1) + 1/(m - m (δ+ξ) + 1)
//
// and δ is the error of the check basis. Only the key basis makes key, since
// the check basis is disclosed.
//
// Source: Lim et al., PRL 126, 100501 (2021), arXiv:2009.04882; from memory,
// and corroborated by its published outcome (see the tests).
func (b *Block) SecretBits() float64 {
	if b.KeyBits < 1 || b.CheckBits < 1 {
		return math.Inf(-1)
	}
	nu, paShare, ok := b.bestEstimate()
	if !ok {
		return math.Inf(-1)
	}
	pa := b.EpsilonSec * paShare
	return b.KeyBits*(1-BinaryEntropy(b.CheckError+nu)-b.F*BinaryEntropy(b.KeyError)) +
		2*math.Log2(2*pa) - math.Log2(2/b.EpsilonCor)
}

// estimateEnd ends the iteration: each step gains a factor of twice the
// exponents of ε_pe, that is of twenty or more.
const estimateEnd = 1e-10

// bestEstimate returns the ν that makes most key, and ε_pa/ε_sec there.
//
// Instead of ξ and ν it varies t = ε_pe/ε_sec and s, the first exponential's
// share of ε_pe²: ξ and ν then follow in closed form, and l is stationary where
//
//	(1-s)/s    = m k ξ/((n+1) n G R)/c,   R = n (ν - ξ)
//	t/(1-2t)   = κ = n h'(δ+ν) V ln 2/4,  V = -t dν/dt
//
// with c = 1 - Λ G'/(4 n G² R) for the change of G with ξ, Λ the second
// exponent. Both right-hand sides move only with the logarithms of s and t.
func (b *Block) bestEstimate() (nu, paShare float64, ok bool) {
	n, k, delta := b.KeyBits, b.CheckBits, b.CheckError
	m := n + k
	s, kappa := 0.5, 1.0
	for last := 0.0; math.Abs(nu-last) > estimateEnd*nu || nu == 0; {
		last = nu
		t := kappa / (1 + 2*kappa)
		lnPe2 := 2 * math.Log(t*b.EpsilonSec)
		xi := math.Sqrt(-(n + 1) * (lnPe2 + math.Log(s)) / (2 * m * k))
		errors := m*(delta+xi) + 1
		rest := m + 2 - errors
		if rest <= 0 {
			return 0, 0, false
		}
		g := 1/errors + 1/rest
		gSlope := m * (1/(rest*rest) - 1/(errors*errors))
		lambda := -(lnPe2 + math.Log1p(-s))
		r := math.Sqrt(1 + lambda/(2*g))
		nu = xi + r/n
		if delta+nu >= 0.5 {
			return 0, 0, false
		}
		c := 1 - lambda*gSlope/(4*n*g*g*r)
		s = 1 / (1 + m*k*xi/((n+1)*n*g*r)/c)
		v := (n+1)/(2*m*k*xi)*c + 1/(2*n*g*r)
		kappa = n * entropySlope(delta+nu) * v * math.Ln2 / 4
	}
	return nu, 1 / (1 + 2*kappa), true
}

// entropySlope returns h'(p) = log₂((1-p)/p).
func entropySlope(p float64) float64 { return math.Log2((1 - p) / p) }
