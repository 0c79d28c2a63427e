package sources

import "math"

// concurrenceErrors returns the errors of member m of all states of concurrence
// c, 0 to 1, with the analysers aligned.
//
// The two largest singular values of the correlation matrix satisfy s2 ≥ C and
// s1 + s2 ≤ 2F ≤ 1 + C ([1], [2]), so (s1, s2) lies in the triangle (C, C),
// (1, C), ((1+C)/2, (1+C)/2), whose corners are AtWorst, BestDephased and
// BestEven; e = (1 − s)/2. Werner's state of this concurrence has s = (1+2C)/3.
//
// With accidentals left in, gain = 1/CAR of them, c is that of the measured
// state. At worst and for Werner's state the correlations of the members then
// grow by 1 + gain. At best the state has lost more than that: dephased, its
// concurrence was C' = c (1 + gain) + gain/2, and no state can have been better,
// since its fidelity F' = F (1 + gain) - gain/4 obeys F ≤ (1+c)/2, that is
// s1 + s2 ≤ 2F' ≤ 1 + C'.
//
// [1] Verstraete, Verschelde (2002). "Fidelity of mixed states of two qubits". Phys. Rev. A 66, 022307.
// [2] Verstraete, Wolf (2002). "Entanglement versus Bell violations and their behavior under local filtering operations". Phys. Rev. Lett. 89, 170401.
func concurrenceErrors(c, gain float64, m Member) (e1, e2 float64) {
	best := max(0, 1-c-gain*(c+0.5)) // 1 - C'
	switch m {
	case Nominal:
		e := cleared((1-c)/3, gain)
		return e, e
	case AtWorst:
		e := cleared((1-c)/2, gain)
		return e, e
	case BestDephased:
		return 0 * c, best / 2 // 0·c, not 0: NaN stays NaN in both
	case BestEven:
		return best / 4, best / 4
	}
	return math.NaN(), math.NaN()
}

// fidelityErrors returns the errors of member m of all states of fidelity f,
// above 1/2 and up to 1, to the intended Bell state, with the analysers in the
// frame in which f was measured.
//
// What is not the intended Bell state has weight 1 − f on the other three. The
// one that errs in both bases costs most, e1 = e2 = 1 − f; without it
// e1 + e2 = 1 − f however the weight is shared between the other two. Werner's
// state has 2(1 − f)/3 in each. Accidentals left in, gain = 1/CAR of them, come
// out of a fidelity exactly: F = f (1 + gain) − gain/4, at most 1.
func fidelityErrors(f, gain float64, m Member) (e1, e2 float64) {
	if !(f > 0.5 && f <= 1) {
		return math.NaN(), math.NaN()
	}
	f = min(1, f+gain*(f-0.25))
	switch m {
	case Nominal:
		return 2 * (1 - f) / 3, 2 * (1 - f) / 3
	case AtWorst:
		return 1 - f, 1 - f
	case BestDephased:
		return 0, 1 - f
	case BestEven:
		return (1 - f) / 2, (1 - f) / 2
	}
	return math.NaN(), math.NaN()
}
