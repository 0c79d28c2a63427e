package plan

import (
	"math"

	"pairspan/keyrate"
	"pairspan/sources"
)

// trial is a scenario of which one number is tried at several values, all
// settings left to the planner searched again at each.
type trial struct {
	*asker
	at *float64
}

// trialOf returns a trial of one entry, in a copy of the scenario. The entry
// exists; a tangle takes the place of whatever the state is known by.
func (a *asker) trialOf(entry string) *trial {
	s := a.s.Clone()
	if entry == tangleEntry {
		s.Source.State = sources.FromTangle(0)
	}
	at, err := s.Fix(entry)
	if err != nil {
		panic(err) // a question names what exists
	}
	return &trial{newAsker(s), at}
}

// with asks at the installed distance with x in place.
func (t *trial) with(x float64, r role) reply {
	*t.at = x
	t.setting = t.s.Setting()
	return t.asker.at(t.s.DistanceKm(), r, nil)
}

// excess says by how much a rate is above what is needed, 0 or more exactly
// where it meets it: relative to the need, or to the sifted rate where any
// key will do. Without key it says how far from one the link is, so that a
// search finds its way.
func (a *asker) excess(r reply) float64 {
	const none = -math.SmallestNonzeroFloat64
	usable := r.rate.UsableBps
	switch {
	case a.need > 0 && usable > 0:
		return (usable - a.need) / a.need
	case a.need > 0:
		return -1 + want(&r)
	case usable > 0:
		return usable / r.rate.SiftedBps()
	}
	return min(want(&r), none)
}

// want returns how far a link without key is from one, at most 0: the secret
// fraction of a block, or of the better basis where no block would help.
func want(r *reply) float64 {
	if r.rate.SecretBps > 0 { // then a block's key is what is missing
		if fraction := blockBits(r) / r.link.BlockBits; !math.IsInf(fraction, 0) && !math.IsNaN(fraction) {
			return min(0, fraction)
		}
		return -1
	}
	key, check, f := r.rate.QBER[keyrate.KeyBasis], r.rate.QBER[keyrate.CheckBasis], r.link.ErrorCorrectionF
	fraction := min(0, math.Max(keyrate.SecretFraction(key, check, f), keyrate.SecretFraction(check, key, f)))
	if r.link.BlockBits > 0 {
		fraction--
	}
	return fraction
}

// blockBits returns the secret bits of a block after authentication, neither
// floored nor its split between the bases rounded: a smooth function of
// everything. It may be negative, and -Inf.
func blockBits(r *reply) float64 {
	b := r.link.Split(&r.rate)
	b.KeyBits = r.link.BlockBits * r.rate.SiftedHz[keyrate.KeyBasis] / r.rate.SiftedBps()
	b.CheckBits = r.link.BlockBits - b.KeyBits
	return b.SecretBits() - r.link.AuthenticationBits
}
