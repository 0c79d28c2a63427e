package keyrate

import "math"

// Slot is one time slot of one pair of bases: two threshold detectors an
// arm, double clicks replaced by a random bit, and Pairs pairs on average.
type Slot struct {
	Pairs      float64    // μ, mean pairs in the slot, both polarisations together
	Efficiency [2]float64 // η of each arm, source to click, 0 to 1
	Noise      [2]float64 // d, mean noise counts of one detector of each arm
	Share      float64    // w, chance that both photons of a detected pair meet in the window (continuous); 1 if pulsed
	Error      float64    // e, chance that a lone pair gives unequal bits, 0 to 1
	Modes      float64    // M, Schmidt modes per polarisation, ≥ 1; +Inf: Poisson
}

// exponents are the logarithms from which a slot's probabilities follow; none
// of the terms built from them is negative, so nothing cancels.
type exponents struct {
	a, b           float64 // chance that one of Alice's (Bob's) detectors stays silent
	aGiven, bGiven float64 // the same, given a silent detector at the other side
	us, ud, rs, rd float64 // what pairs add for equal (s) and different (d) bits
}

// Click returns the probability q of a coincidence in the slot, 0 to 1, and
// its error rate, 0 to 1/2 for e ≤ 1/2 (1/2 where q is 0).
//
// Each slot holds two squeezed modes of polarisation, M Schmidt modes each.
// Double clicks give a random bit (squashing). It is exact within that model
// and holds 1e-14 relative accuracy at any loss. With M = 1 it is the gain and
// error of [1] with μ = 2λ (to first order in dark counts; at e > 0 only within
// some 0.3 %, since [1] turns single pairs); Poisson at low occupancy it is the
// continuous-wave model of [2]. Share counts for Poissonian pairs only: thermal
// ones are pulsed.
//
// [1] Ma et al., PRA 76, 012307 (2007).
// [2] Neumann et al., PRA 104, 022406 (2021).
func (s *Slot) Click() (q, qber float64) {
	if math.IsInf(s.Modes, 1) {
		return s.poisson()
	}
	x := s.thermal()
	noise := x.noise()
	silent := x.a + x.b
	wrong := noise + gained(silent+x.us, x.rs) + gained(silent, x.ud)
	right := noise + gained(silent+x.ud, x.rd) + gained(silent, x.us)
	return ratio(right, wrong)
}

// poisson is Click for Poissonian pairs, where u and r coincide crosswise, so
// that the exponentials are shared.
func (s *Slot) poisson() (q, qber float64) {
	mu, ea, eb := s.Pairs, s.Efficiency[Alice], s.Efficiency[Bob]
	y := mu * ea * eb * s.Share / 2
	a, b := s.silent()
	x := exponents{
		a: a, b: b,
		aGiven: -s.Noise[Alice] - mu*ea*(1-eb*s.Share)/2,
		bGiven: -s.Noise[Bob] - mu*eb*(1-ea*s.Share)/2,
	}
	noise := x.noise()
	silent := x.a + x.b
	same, different := (1-s.Error)*y, s.Error*y
	wrong := noise + gained(silent+same, different) + gained(silent, different)
	right := noise + gained(silent+different, same) + gained(silent, same)
	return ratio(right, wrong)
}

// thermal returns the exponents for M thermal modes per polarisation.
func (s *Slot) thermal() exponents {
	m, ea, eb := s.Modes, s.Efficiency[Alice], s.Efficiency[Bob]
	l := s.Pairs / (2 * m)
	x := (1 + l*ea) * (1 + l*eb)
	y := l * (1 + l) * ea * eb
	d := 1 + l*(ea+eb-ea*eb)
	a, b := s.silent()
	return exponents{
		a: a, b: b,
		aGiven: -s.Noise[Alice] - m*math.Log1p(l*ea*(1-eb)/(1+l*eb)),
		bGiven: -s.Noise[Bob] - m*math.Log1p(l*eb*(1-ea)/(1+l*ea)),
		us:     -m * math.Log1p(-y*(1-s.Error)/x),
		ud:     -m * math.Log1p(-y*s.Error/x),
		rs:     m * math.Log1p(y*s.Error/d),
		rd:     m * math.Log1p(y*(1-s.Error)/d),
	}
}

// noise returns half the chance of a coincidence whose bits have nothing to
// do with each other.
//
//	N = [(1-A) + B (1-A')] [(1-B) + A (1-B')]/2
func (x *exponents) noise() float64 {
	alice := -math.Expm1(x.a) - math.Exp(x.b)*math.Expm1(x.aGiven)
	bob := -math.Expm1(x.b) - math.Exp(x.a)*math.Expm1(x.bGiven)
	return alice * bob / 2
}

// gained returns exp(base) (exp(r) - 1) without overflow, for r ≥ 0.
func gained(base, r float64) float64 { return math.Exp(base+r) * -math.Expm1(-r) }

// ratio returns the sum of right and wrong, and the share of wrong.
func ratio(right, wrong float64) (q, qber float64) {
	q = right + wrong
	if q == 0 {
		return 0, 0.5
	}
	return q, wrong / q
}

// silent returns the logarithms of the chances that one of Alice's (Bob's)
// detectors stays silent in the slot.
func (s *Slot) silent() (a, b float64) {
	a, b = -s.Noise[Alice], -s.Noise[Bob]
	if math.IsInf(s.Modes, 1) {
		return a - s.Pairs*s.Efficiency[Alice]/2, b - s.Pairs*s.Efficiency[Bob]/2
	}
	l := s.Pairs / (2 * s.Modes)
	return a - s.Modes*math.Log1p(l*s.Efficiency[Alice]), b - s.Modes*math.Log1p(l*s.Efficiency[Bob])
}

// Accidental returns the chance that both arms click in the slot for
// independent reasons.
//
//	(1 - A²)(1 - B²)
func (s *Slot) Accidental() float64 {
	a, b := s.silent()
	return math.Expm1(2*a) * math.Expm1(2*b)
}
