package sources

import (
	"fmt"
	"math"
)

// Plates are the angles of an analyser's wave plates, in degrees: of the fast
// axis from H, positive towards D.
type Plates struct{ HWPDeg, QWPDeg float64 }

// Analyser returns what passes the plates and the polariser behind them. Light
// meets the quarter-wave plate first, then the half-wave plate, then a polariser
// that passes H, so that
//
//	|a> = Q(q)† W(h)† |H>,  Q(q) = rot(q) diag(1, i) rot(−q),  W(h) = rot(h) diag(1, −1) rot(−h)
//
// for a field that goes as exp(i(kz − ωt)): the slow axis lags by a quarter of a
// period, or by half of one. Hence, with h and q the angles of half- and
// quarter-wave plate,
//
//	H: h 0, q 0      D: h 22.5, q 45      R: h 22.5, q 0
//	V: h 45, q 0     A: h −22.5, q 45     L: h 22.5, q 90
//
// and either plate may be turned further by 180 degrees.
func (p Plates) Analyser() Analyser {
	// The half-wave plate mirrors H at its axis; what the quarter-wave plate
	// then makes of it on the way back, its slow axis leading, is the
	// amplitude on each of its axes.
	sin2h, cos2h := sincosDeg(2 * p.HWPDeg)
	sinq, cosq := sincosDeg(p.QWPDeg)
	fast := complex(cosq*cos2h+sinq*sin2h, 0)
	slow := complex(0, -(cosq*sin2h - sinq*cos2h))
	c, s := complex(cosq, 0), complex(sinq, 0)
	return Analyser{c*fast - s*slow, s*fast + c*slow}
}

// sincosDeg returns the sine and cosine of an angle in degrees, exact at
// multiples of 90.
func sincosDeg(deg float64) (sin, cos float64) {
	deg = math.Mod(deg, 360)
	quarter := math.Round(deg / 90)
	s, c := math.Sincos((deg - 90*quarter) * math.Pi / 180)
	switch (int(quarter) + 4) % 4 {
	case 1:
		return c, -s
	case 2:
		return -s, -c
	case 3:
		return -c, s
	}
	return s, c
}

// name returns how a setting of the plates is called.
func (p Plates) name() string {
	return fmt.Sprintf("hwp %g qwp %g", p.HWPDeg+0, p.QWPDeg+0) // -0 + 0 is 0
}

// maxRadians is what no angle in radians exceeds that was meant to lie within
// half a turn.
const maxRadians = 3.2

// radians returns an error where all angles of the file look like radians: all
// within half a turn of those, and not all multiples of half a degree, as angles
// are that people set in degrees. Angles in degrees that small would not make a
// tomography.
func radians(angles []csvCell) error {
	var suspect *csvCell
	for i, cell := range angles {
		x, err := cell.number()
		if err != nil {
			return err
		}
		if math.Abs(x) > maxRadians {
			return nil
		}
		if suspect == nil && 2*x != math.Round(2*x) {
			suspect = &angles[i]
		}
	}
	if suspect == nil {
		return nil
	}
	x, _ := suspect.number()
	return suspect.fail(fmt.Sprintf("looks like radians: all angles of the file lie within %g", maxRadians),
		fmt.Sprintf("give angles in degrees: %.4g", x*180/math.Pi))
}
