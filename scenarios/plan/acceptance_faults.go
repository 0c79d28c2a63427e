package plan

import (
	"math"

	"pairspan/keyrate"
	"pairspan/link"
)

// fault is one thing that can be wrong with a running link. Faults add up: each
// edits what the ones before it have left.
type fault func(*keyrate.Link, *keyrate.OperatingPoint)

func sound(*keyrate.Link, *keyrate.OperatingPoint) {}

// lost is an extra loss in one arm; a negative one was not there.
func lost(arm int, db float64) fault {
	return func(l *keyrate.Link, _ *keyrate.OperatingPoint) {
		t := &l.Arms[arm].Transmittance
		*t = min(1, *t*link.DB(db).Transmittance())
	}
}

// stray is extra background in every detector of one arm.
func stray(arm int, hz float64) fault {
	return func(l *keyrate.Link, _ *keyrate.OperatingPoint) { l.Arms[arm].BackgroundHz += hz }
}

// pumped is a pair rate that is off by so many decibels.
func pumped(db float64) fault {
	return func(_ *keyrate.Link, p *keyrate.OperatingPoint) { p.PairRateHz /= link.DB(db).Transmittance() }
}

// widened is a coincidence window wider than planned.
func widened(factor float64) fault {
	return func(_ *keyrate.Link, p *keyrate.OperatingPoint) { p.WindowS *= factor }
}

// erred is an extra chance that a bit of one basis comes out wrong.
func erred(basis int, e float64) fault {
	return func(l *keyrate.Link, _ *keyrate.OperatingPoint) {
		s := &l.StateError[basis]
		*s += e - 2**s*e
	}
}

// turned is a polarisation frame that has turned: an extra error of both bases.
func turned(e float64) fault {
	return both(erred(keyrate.KeyBasis, e), erred(keyrate.CheckBasis, e))
}

func both(f, g fault) fault {
	return func(l *keyrate.Link, p *keyrate.OperatingPoint) {
		f(l, p)
		g(l, p)
	}
}

// late is a window that holds fewer of the pairs than planned, by so many
// decibels, while the singles stay: it widens the arrival spread until
//
//	erf(√(ln 2) τ/FWHM) = w·10^(-db/10)
//
// of a pulsed source against Bob's clock. A negative loss ends at w = 1.
func late(db float64) fault {
	return func(l *keyrate.Link, p *keyrate.OperatingPoint) {
		spread := &l.SpreadFWHMPs
		if l.PulseRateHz > 0 {
			spread = &l.Arms[keyrate.Bob].SpreadFWHMPs
		}
		windowPs := p.WindowS * psPerSecond
		w := link.WindowShare(windowPs, *spread) * link.DB(db).Transmittance()
		*spread = 0
		if w < 1 {
			*spread = math.Sqrt(math.Ln2) * windowPs / math.Erfinv(w)
		}
	}
}

// cause is a fault that grows with x from none at 0.
type cause struct {
	fault func(x float64) fault
	most  float64
	step  float64 // over which the rate changes little
}

const (
	mostError     = 0.5
	errorStep     = 0.01
	strayDecades  = 12.0 // up to 1e12 counts per second and detector
	strayStep     = 0.1
	mostWidening  = 3.0 // decades
	mostPumpingDB = 40.0
)

// strayHz turns the logarithm that is searched into counts per second: none
// at 0, and decades above 1 per second.
func strayHz(x float64) float64 { return math.Expm1(x * math.Ln10) }

func lossInArm(arm int) cause {
	return cause{func(db float64) fault { return lost(arm, db) }, mostExtraDB, marginStepDB}
}

func strayInArm(arm int) cause {
	return cause{func(x float64) fault { return stray(arm, strayHz(x)) }, strayDecades, strayStep}
}

func lossInBoth(int) cause {
	return cause{func(db float64) fault { return both(lost(keyrate.Alice, db), lost(keyrate.Bob, db)) }, mostExtraDB, marginStepDB}
}

func strayInBoth(int) cause {
	return cause{func(x float64) fault {
		return both(stray(keyrate.Alice, strayHz(x)), stray(keyrate.Bob, strayHz(x)))
	}, strayDecades, strayStep}
}

func turnedFrame(int) cause { return cause{turned, mostError, errorStep} }

// suffering is a link with a fault.
func suffering(l keyrate.Link, p keyrate.OperatingPoint, f fault) (keyrate.Link, keyrate.OperatingPoint) {
	f(&l, &p)
	return l, p
}

// sizeOf returns how large a fault must be for f, which changes in one
// direction from 0 to most, to reach a target; not ok where it never does.
func sizeOf(most, target float64, f func(x float64) float64) (x float64, ok bool) {
	start, end := f(0), f(most)
	if !(min(start, end) <= target && target <= max(start, end)) {
		return 0, false
	}
	return crossing(0, most, func(x float64) bool {
		if end > start {
			return f(x) <= target
		}
		return f(x) >= target
	}), true
}
