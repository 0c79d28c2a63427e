package plan

import (
	"math"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// mostBlockBits is the largest block that a scenario may state.
const mostBlockBits = 1e13

// block is the finite-size key at worst at the installed length; nil without
// blocks or a state.
func (a *asker) block() *Block {
	if a.unknown || !a.s.Finite() {
		return nil
	}
	now := a.at(a.s.DistanceKm(), judged, nil)
	split := now.link.Split(&now.rate)
	b := &Block{
		SiftedBits:         a.s.SiftedBitsPerBlock,
		SecretBits:         max(0, math.Floor(split.SecretBits())),
		AuthenticationBits: a.s.AuthenticationBitsPerBlock,
		EpsilonTotal:       a.s.EpsilonTotal,
		SmallestSiftedBits: a.smallestBlock(now.link),
		AES256PerHour:      now.rate.UsableBps * secondsPerHour / scenarios.AES256Bits,
		AES256PerDay:       now.rate.UsableBps * scenarios.SecondsPerDay / scenarios.AES256Bits,
		SameBasisSecretBps: now.rate.KeyBasisSecretBps(now.link.ErrorCorrectionF),
	}
	if now.rate.UsableBps > 0 {
		b.FirstKeyS = number(b.SiftedBits / (now.rate.SiftedBps() * a.s.DutyCycle))
	}
	if best, ok := a.bestBlock(now); ok {
		b.BestSiftedBits = number(best.link.BlockBits)
		b.BestKeyBasisShare = number(best.setting.KeyShare)
		b.BestUsableRateBps = number(best.rate.UsableBps)
		b.EnoughSiftedBits = number(enoughBits(best))
	}
	b.Sentence = a.blockSentence(b, now.rate.UsableBps)
	return b
}

const secondsPerHour = 3600

// smallestBlock returns the sifted bits, whole, of the smallest block that
// leaves a usable bit: one bit less leaves none. Settings that the scenario
// leaves to the planner are searched again for each size, as in every inverse
// question; those that it fixes stay. nil where no block leaves any.
func (a *asker) smallestBlock(l keyrate.Link) *float64 {
	ok := func(bits float64) bool {
		l.BlockBits = bits
		return a.settle(l).rate.UsableBps > 0
	}
	const step = 8
	enough := math.Ceil(a.s.SiftedBitsPerBlock)
	for !ok(enough) {
		if enough == mostBlockBits {
			return nil
		}
		enough = min(mostBlockBits, enough*step)
	}
	few := math.Floor(enough / step)
	for few > 0 && ok(few) {
		enough, few = few, math.Floor(few/step)
	}
	return number(wholeCrossing(enough, few, ok))
}

// wholeCrossing narrows the bracket between a whole number that passes and a
// smaller one that does not, and returns the one that passes.
func wholeCrossing(pass, fail float64, ok func(float64) bool) float64 {
	for pass-fail > 1 {
		if mid := math.Floor((pass + fail) / 2); ok(mid) {
			pass = mid
		} else {
			fail = mid
		}
	}
	return pass
}

// A day's block and the share of the key basis are tried in turn.
const (
	blockRounds = 4
	shareStep   = 0.001 // three digits
	leastShare  = 0.5
	mostShare   = 0.99
)

// bestBlock returns the block and the share of the key basis that make most
// usable key, at the settings that the scenario fixes and with those searched
// again that it leaves to the planner; false where there is no key.
//
// Key from larger blocks is always more, but has to be waited for: the block
// is as large as what sifts in a day of the duty cycle, three digits down. What
// sifts depends on the share, so that both are found together.
func (a *asker) bestBlock(now reply) (reply, bool) {
	l, p := now.link, now.setting
	free := a.left()
	free.KeyShare = true
	for range blockRounds {
		if l.BlockBits = a.daysBits(l, p); l.BlockBits < 1 {
			return reply{}, false
		}
		p = l.Best(p, free)
	}
	best := a.daily(l, p)
	for i := range int(math.Round((mostShare-leastShare)/shareStep)) + 1 {
		p.KeyShare = round(leastShare+shareStep*float64(i), 3)
		if r := a.daily(l, p); r.rate.UsableBps > best.rate.UsableBps {
			best = r
		}
	}
	return best, best.rate.UsableBps > 0
}

// daily asks for the key of a block that takes a day to sift.
func (a *asker) daily(l keyrate.Link, p keyrate.OperatingPoint) reply {
	l.BlockBits = a.daysBits(l, p)
	return reply{l, p, l.Key(p)}
}

// daysBits returns what sifts within a day of the duty cycle, three digits
// down, at most what a scenario may state.
func (a *asker) daysBits(l keyrate.Link, p keyrate.OperatingPoint) float64 {
	r := l.Key(p)
	day := r.SiftedBps() * scenarios.SecondsPerDay * a.s.DutyCycle
	if day < 1 {
		return 0
	}
	day = min(day, mostBlockBits)
	return math.Floor(keyrate.Round3(day, day))
}

// enoughBits returns the smallest block, at the same settings, that makes 95 %
// of a block's rate: what there is no need to wait longer for.
func enoughBits(best reply) float64 {
	l := best.link
	return wholeCrossing(l.BlockBits, 0, func(bits float64) bool {
		l.BlockBits = bits
		return l.Key(best.setting).UsableBps >= keptShare*best.rate.UsableBps
	})
}
