package keyrate

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// hopeful is a QBER near enough to the threshold, 0.11, for a key to come of it.
const hopeful = 0.15

// worse compares a link with one that was spoiled: the secret rate must not
// rise, and the QBER of the key basis not fall to less than most, beyond what
// Link.Key promises.
func worse(t *rapid.T, what string, before, after Link, p OperatingPoint, most float64) {
	t.Helper()
	x, y := before.Key(p), after.Key(p)
	if y.SecretBps > x.SecretBps+1e-12*x.SiftedBps() {
		t.Errorf("%s raises the secret rate from %v to %v bit/s\n%+v\n%+v\n%+v", what, x.SecretBps, y.SecretBps, before, after, p)
	}
	if y.QBER[KeyBasis] < x.QBER[KeyBasis]*(1-1e-10) && y.QBER[KeyBasis] < most {
		t.Errorf("%s lowers the QBER from %v to %v\n%+v\n%+v\n%+v", what, x.QBER[KeyBasis], y.QBER[KeyBasis], before, after, p)
	}
}

// Without dead time and afterpulses, which loss relieves. Loss relieves
// threshold detectors of double clicks as well, so that it can lower a QBER far
// beyond hope: see TestLossHelpsOnlyBeyondHope.
func TestLossNeverHelps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(3)
		l = calm(l)
		lossy := l
		arm := Alice
		if u.often() {
			arm = Bob
		}
		lossy.Arms[arm].Transmittance *= u.decades(-3, 0)
		worse(t, "loss", l, lossy, p, hopeful)
	})
}

func TestNoiseNeverHelps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(3)
		l = calm(l)
		for name, spoil := range map[string]func(*Arm, float64){
			"dark counts":    func(a *Arm, x float64) { a.Detector.DarkCountsHz += x },
			"background":     func(a *Arm, x float64) { a.BackgroundHz += x },
			"unpaired light": func(a *Arm, x float64) { a.UnpairedHz += 100 * x },
		} {
			noisy := l
			spoil(&noisy.Arms[Alice], u.decades(-2, 6))
			worse(t, name, l, noisy, p, 0.5)
			spoil(&noisy.Arms[Bob], u.decades(-2, 6))
			worse(t, name, l, noisy, p, 0.5)
		}
	})
}

// Errors move no click, so this holds with dead time and afterpulses too.
func TestErrorsNeverHelp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(3)
		towards := func(e *float64, most float64) { *e += (most - *e) * u() }
		for name, spoil := range map[string]func(*Link){
			"state error of the key basis":   func(l *Link) { towards(&l.StateError[KeyBasis], 0.5) },
			"state error of the check basis": func(l *Link) { towards(&l.StateError[CheckBasis], 0.5) },
			"misalignment":                   func(l *Link) { towards(&l.Arms[Alice].Misalignment, 0.5) },
			"PMD":                            func(l *Link) { towards(&l.Arms[Bob].PMDError, 1.0/3) },
			"error correction":               func(l *Link) { l.ErrorCorrectionF += u() },
		} {
			spoiled := l
			spoil(&spoiled)
			worse(t, name, l, spoiled, p, 0.5)
			if x, y := l.Key(p), spoiled.Key(p); !near(x.SiftedHz[KeyBasis], y.SiftedHz[KeyBasis], 1e-12) || !near(x.SiftedHz[CheckBasis], y.SiftedHz[CheckBasis], 1e-12) {
				t.Errorf("%s changes the sifted rates from %v to %v", name, x.SiftedHz, y.SiftedHz)
			}
		}
	})
}

// The same for a block of a given size, up to the bits that are floored.
func TestFiniteRateNeverRisesWithErrors(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(2)
		l = u.blocks(l)
		spoiled := l
		spoiled.Arms[Bob].Misalignment = l.Arms[Bob].Misalignment + 0.2*u()
		x, y := l.Key(p), spoiled.Key(p)
		oneBit := x.SiftedBps() / l.BlockBits
		if y.FiniteBps > x.FiniteBps*(1+1e-9)+oneBit*1.5 || math.IsNaN(y.FiniteBps) {
			t.Errorf("misalignment raises the finite rate from %v to %v bit/s\n%+v\n%+v", x.FiniteBps, y.FiniteBps, l, p)
		}
	})
}
