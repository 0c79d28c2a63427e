package plan

import (
	"cmp"
	"math"
	"slices"
)

// Steps of a derivative by differences, relative to the entry.
const (
	differenceStep   = 1e-5
	elasticityDigit  = 1e6  // one over the last digit: differences are good for no more
	jumpPart         = 0.01 // two steps that differ by more have a jump between them,
	jumpLeast        = 1e-3 // if by more than this too
	fourthOrder      = 4.0 / 3
	fourthOrderMinus = 1.0 / 3
)

// elasticities returns d ln(usable rate)/d ln(entry) at worst, at the
// installed point, of every measured figure in use that moves the rate, the
// greatest first, to six decimals. The settings stay as the plan chose them: an operator does
// not turn them for a small change, and at an optimum it makes no difference.
// A block's key is taken without its whole bits, which would be stairs. A
// figure at which the rate jumps, such as a dead time of exactly so many
// pulses, has none; nor has one at 0.
func (a *asker) elasticities() []Elasticity {
	found := []Elasticity{}
	if a.unknown {
		return found
	}
	now := a.at(a.s.DistanceKm(), judged, nil)
	if !(smoothUsable(&now) > 0) {
		return found
	}
	for _, entry := range a.s.Figures() {
		e, ok := a.elasticity(entry, &now)
		if e = math.Round(e*elasticityDigit) / elasticityDigit; ok && e != 0 {
			found = append(found, Elasticity{entry, e})
		}
	}
	slices.SortStableFunc(found, func(x, y Elasticity) int { return cmp.Compare(abs(y.Value), abs(x.Value)) })
	return found
}

// elasticity returns that of one entry; not ok where it has none.
func (a *asker) elasticity(entry string, now *reply) (float64, bool) {
	q, err := a.s.Quantity(entry)
	if err != nil || !(q.InUse > 0) {
		return 0, false
	}
	t := a.trialOf(entry)
	ln := func(step float64) float64 { // of the rate, that much further
		return math.Log(t.held(q.InUse*(1+step), now))
	}
	slope := central
	switch reach := q.InUse * 2 * differenceStep; {
	case q.InUse+reach > q.Hi:
		slope = oneSided(-1)
	case q.InUse-reach < q.Lo:
		slope = oneSided(+1)
	}
	near, far := slope(ln, differenceStep), slope(ln, 2*differenceStep)
	if !(abs(near-far) <= max(jumpPart*abs(near), jumpLeast)) { // NaN too
		return 0, false
	}
	return fourthOrder*near - fourthOrderMinus*far, true
}

// central is a derivative by central differences, at 0 of a logarithm's
// argument 1 + x.
func central(ln func(float64) float64, h float64) float64 {
	return (ln(h) - ln(-h)) / (2 * h)
}

// oneSided is one from values on one side alone, at the end of a range.
func oneSided(side float64) func(func(float64) float64, float64) float64 {
	return func(ln func(float64) float64, h float64) float64 {
		h *= side / 2
		return (4*ln(h) - ln(2*h) - 3*ln(0)) / (2 * h)
	}
}

// held returns the smooth usable rate at worst with x in place, at the
// settings that were found without it.
func (t *trial) held(x float64, now *reply) float64 {
	*t.at = x
	p := t.s.Setting()
	if t.s.WindowAuto {
		p.WindowS = now.setting.WindowS
	}
	if t.s.Source.PumpAuto {
		p.PairRateHz = now.setting.PairRateHz
	}
	if t.s.KeyShareAuto {
		p.KeyShare = now.setting.KeyShare
	}
	l := t.s.Link(t.s.DistanceKm(), t.members(judged)[0])
	return smoothUsable(&reply{l, p, l.Key(p)})
}

// smoothUsable is the usable rate without whole bits: of a block that has no
// key it is negative.
func smoothUsable(r *reply) float64 {
	if r.link.BlockBits == 0 {
		return r.rate.UsableBps
	}
	return r.link.DutyCycle * blockBits(r) / r.link.BlockBits * r.rate.SiftedBps()
}
