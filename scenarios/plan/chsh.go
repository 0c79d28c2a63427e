package plan

import (
	"math"

	"pairspan/keyrate"
	"pairspan/sources"
)

// bellBound is the greatest CHSH value without entanglement.
const bellBound = 2.0

// bellSD is how many standard deviations above it a test is to end.
const bellSD = 5.0

// visibility returns the contrast of the coincidences as counted, accidentals
// included, in a basis of such a QBER.
func visibility(qber float64) float64 { return 1 - 2*qber }

// chsh returns the greatest CHSH value of a link whose two bases have these
// QBERs, accidentals included, and the correlators behind it.
//
//	S = 2 √(s₁² + s₂²),  s = 1 - 2 QBER     [1]
//
// It is reached with Alice's analyser along the two bases and Bob's at the
// angles ±φ, tan φ = s₂/s₁, from the key basis, on the sphere of polarisations:
// two of the four correlators are then s₁ cos φ = s₁²/√(s₁² + s₂²), the other
// two s₂ sin φ, in size; with equal bases each is S/4.
//
// [1] Horodecki et al., PLA 200, 340 (1995).
func chsh(qber [2]float64) (value float64, correlators [2]float64) {
	s1, s2 := visibility(qber[keyrate.KeyBasis]), visibility(qber[keyrate.CheckBasis])
	r := math.Hypot(s1, s2)
	if r == 0 {
		return 0, correlators
	}
	return 2 * r, [2]float64{s1 * s1 / r, s2 * s2 / r}
}

// bellTime returns how long to count, in seconds, until the CHSH value is
// expected five standard deviations above 2; ok where it is above 2 at all.
//
// The four pairs of analyser settings share the time T equally, or where beam
// splitters choose them evenly, the coincidences. Either way each correlator
// rests on N = C T/4 coincidences, C being those that the link counts per
// second, of all four outcomes of a setting at once, with its own detectors.
// Outcomes are independent, so that
//
//	Var E = (1 - E²)/N,  Var S = Σ (1 - E²)/N,  S - 2 = 5 √(Var S)
//	T = 25 · 4 · Σ (1 - E²)/(C (S - 2)²)
func bellTime(rate *keyrate.Rate, coincidencesHz float64) (seconds float64, ok bool) {
	s, e := chsh(rate.QBER)
	if s <= bellBound || coincidencesHz <= 0 {
		return 0, false
	}
	noise := 2*(1-e[0]*e[0]) + 2*(1-e[1]*e[1])
	above := (s - bellBound) / bellSD
	return 4 * noise / (coincidencesHz * above * above), true
}

// bell fills in what a test of the CHSH inequality should show.
func (d *firstDay) bell(out *Acceptance) {
	value := func(m sources.Member) float64 {
		l := d.s.Link(d.km, m)
		rate := l.Key(d.setting)
		s, _ := chsh(rate.QBER)
		return s
	}
	out.CHSH = &Expected{
		AtWorst: value(sources.AtWorst),
		Nominal: value(sources.Nominal),
		AtBest:  max(value(sources.BestDephased), value(sources.BestEven)),
	}
	out.Visibility = &PerBasis{visibility(d.expected[qberKey]), visibility(d.expected[qberCheck])}
	worst := d.s.Link(d.km, sources.AtWorst)
	rate := worst.Key(d.setting)
	counted, _ := worst.Coincidences(d.setting)
	if seconds, ok := bellTime(&rate, counted); ok {
		out.FiveSigmaS = number(seconds)
	}
}
