package plan

// Bounds and steps of the searches for a crossing.
const (
	mostExtraDB   = 300.0
	marginStepDB  = 0.5
	mostReachKm   = 2000.0
	crossingPart  = 1e-9 // of the bracket's far end, how closely a crossing is found
	crossingLeast = 1e-9
)

// Reasons for a margin or a reach that is null.
const (
	noLossHelps  = "no_loss_helps"
	beyondSearch = "beyond_search"
	notAtZeroKm  = "not_at_zero_km"
)

// crossing narrows the bracket between a value that passes and one that does
// not, and returns the end that passes.
func crossing(pass, fail float64, ok func(float64) bool) float64 {
	tolerance := max(crossingLeast, crossingPart*max(abs(pass), abs(fail)))
	for abs(fail-pass) > tolerance {
		if mid := (pass + fail) / 2; ok(mid) {
			pass = mid
		} else {
			fail = mid
		}
	}
	return pass
}

// firstFailure walks from a passing start in steps towards most and returns
// the last value that passes before the first that does not.
func firstFailure(start, most, step float64, ok func(float64) bool) (float64, bool) {
	for pass := start; pass < most; {
		next := min(pass+step, most)
		if !ok(next) {
			return crossing(pass, next, ok), true
		}
		pass = next
	}
	return 0, false
}

// firstPass walks from a failing start down in steps towards least and
// returns the first value that passes.
func firstPass(start, least, step float64, ok func(float64) bool) (float64, bool) {
	for fail := start; fail > least; {
		next := max(fail-step, least)
		if ok(next) {
			return crossing(next, fail, ok), true
		}
		fail = next
	}
	return 0, false
}

// margin returns the extra loss, in dB on the arms that lengthen, from which
// the need is no longer met; where it is not met now, minus the least loss to
// remove. Rates are not monotone in loss where detectors are blinded, hence
// the steps.
func (a *asker) margin(r role, met bool) (db float64, reason string) {
	km := a.s.DistanceKm()
	ok := func(db float64) bool { return a.meets(a.at(km, r, a.lose(db))) }
	if met {
		db, found := firstFailure(0, mostExtraDB, marginStepDB, ok)
		if !found {
			return 0, beyondSearch
		}
		return db, ""
	}
	db, found := firstPass(0, -a.removable(), marginStepDB, ok)
	if !found {
		return 0, noLossHelps
	}
	return db, ""
}

// reach returns the distance up to which the need is met: the first crossing
// beyond the installed length, or else the greatest shorter one that meets it.
func (a *asker) reach(r role, met bool) (km float64, reason string) {
	step := a.s.SearchStepKm()
	ok := func(km float64) bool { return a.meets(a.at(km, r, nil)) }
	if met {
		km, found := firstFailure(a.s.DistanceKm(), mostReachKm, step, ok)
		if !found {
			return 0, beyondSearch
		}
		return km, ""
	}
	km, found := firstPass(a.s.DistanceKm(), 0, step, ok)
	if !found {
		return 0, notAtZeroKm
	}
	return km, ""
}

func abs(x float64) float64 { return max(x, -x) }
