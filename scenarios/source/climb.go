package source

import (
	"math"

	"pairspan/keyrate"
)

// noKey is what a rate without any key is worth, and leastKey the least that one
// with some is.
const (
	noKey    = -1
	leastKey = noKey + 1e-15
)

// worthOf returns what a search climbs: the usable rate in bit/s. Where there is
// none it is negative: above −1 where blocks are too short for a key, the more
// the greater the asymptotic rate; below that by how far the secret fraction is
// from zero.
func worthOf(l *keyrate.Link, r *keyrate.Rate) float64 {
	worth := worthOfKey(r)
	if worth == noKey {
		worth += wantOf(l, r)
	}
	return worth
}

// worthOfKey is worthOf with all that give no key alike.
func worthOfKey(r *keyrate.Rate) float64 {
	switch {
	case r.UsableBps > 0:
		return r.UsableBps
	case r.SecretBps > 0:
		return max(leastKey, -1/(1+r.SecretBps))
	}
	return noKey
}

// wantOf returns the secret fraction of the better basis where it is negative,
// else 0.
func wantOf(l *keyrate.Link, r *keyrate.Rate) float64 {
	key, check, f := r.QBER[keyrate.KeyBasis], r.QBER[keyrate.CheckBasis], l.ErrorCorrectionF
	return min(0, max(keyrate.SecretFraction(key, check, f), keyrate.SecretFraction(check, key, f)))
}

// How finely climbPump looks for a pump power.
const (
	pumpGrid = 18   // steps of the whole range
	pumpStep = 2e-3 // relative; settings are rounded to three digits after
	golden   = 0.6180339887498949
)

// climbPump returns where between lo and hi, logarithms of a power or rate, f is
// greatest: the best point of a grid, then golden sections between its
// neighbours.
func climbPump(lo, hi float64, f func(float64) float64) float64 {
	step := (hi - lo) / pumpGrid
	best, most := hi, math.Inf(-1)
	for i := range pumpGrid + 1 {
		x := lo + float64(i)*step
		if fx := f(x); fx > most {
			best, most = x, fx
		}
	}
	a, b := max(lo, best-step), min(hi, best+step)
	c, d := b-golden*(b-a), a+golden*(b-a)
	fc, fd := f(c), f(d)
	for b-a > pumpStep {
		if fc >= fd {
			b, d, fd = d, c, fc
			c = b - golden*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = a + golden*(b-a)
			fd = f(d)
		}
	}
	if x := (a + b) / 2; f(x) > most {
		return x
	}
	return best
}
