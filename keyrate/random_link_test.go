package keyrate

import (
	"math"

	"pgregory.net/rapid"
)

// draws makes random links from numbers in 0 to 1, which come from rapid or
// from a seeded source.
type draws func() float64

// rapidly draws from rapid, which tries both ends often and shrinks.
func rapidly(t *rapid.T) draws {
	zeroToOne := rapid.Float64Range(0, 1)
	return func() float64 { return zeroToOne.Draw(t, "number") }
}

func (u draws) between(from, to float64) float64 { return from + (to-from)*u() }

func (u draws) decades(from, to float64) float64 { return math.Pow(10, u.between(from, to)) }

func (u draws) often() bool { return u() < 0.6 }

// sometimes is zero now and then, else 10 to a power between from and to.
func (u draws) sometimes(from, to float64) float64 {
	if u.often() {
		return u.decades(from, to)
	}
	return 0
}

// arm draws an arm of at most lossDecades decades of loss. Its noise reaches
// from none to more than any signal.
func (u draws) arm(lossDecades float64) Arm {
	a := Arm{
		Transmittance: u.decades(-lossDecades, 0), Passive: u.often(),
		Misalignment: 0.03 * u() * u(), PMDError: 0.03 * u() * u() * u(),
		BackgroundHz: u.sometimes(0, 6), UnpairedHz: u.sometimes(2, 8), SpreadFWHMPs: u.sometimes(0, 3),
	}
	a.Detector.Efficiency = u.between(0.1, 1)
	a.Detector.DarkCountsHz = u.sometimes(-1, 6)
	a.Detector.DeadTimeNs = u.sometimes(0, 5)
	if u.often() {
		a.Detector.Afterpulsing = 0.2 * u()
	}
	return a
}

// link draws a link, pulsed or continuous, of wide ranges, and a setting.
func (u draws) link(lossDecades float64) (Link, OperatingPoint) {
	e := 0.08 * u() * u()
	l := Link{
		Modes: math.Inf(1), StateError: [2]float64{e, e + 0.08*u()*u()},
		Arms: [2]Arm{u.arm(lossDecades), u.arm(lossDecades)}, SpreadFWHMPs: u.sometimes(0, 3),
		ErrorCorrectionF: u.between(1, 1.4), DutyCycle: u(),
	}
	p := OperatingPoint{PairRateHz: u.decades(3, 9), WindowS: u.decades(-11.5, -8.5), KeyShare: 0.5}
	if u.often() {
		p.KeyShare = u.between(0.5, 0.99)
	}
	if u.often() { // pulsed
		l.PulseRateHz = u.decades(6, 10)
		if u.often() {
			l.Modes = 1 + u.sometimes(-1, 2)
		}
		p.PairRateHz = l.PulseRateHz * u.decades(-6, 0.7)
		p.WindowS = min(p.WindowS, 1/l.PulseRateHz)
	}
	return l, p
}

// calm takes dead time and afterpulses out of a link.
func calm(l Link) Link {
	for i := range l.Arms {
		l.Arms[i].Detector.DeadTimeNs, l.Arms[i].Detector.Afterpulsing = 0, 0
	}
	return l
}

// blocks turns a link to finite-size keys.
func (u draws) blocks(l Link) Link {
	l.BlockBits, l.EpsilonTotal, l.AuthenticationBits = math.Round(u.decades(3, 12)), u.decades(-15, -5), u.sometimes(0, 3)
	return l
}
