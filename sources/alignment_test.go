package sources

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// Turned as Alignment says, the correlations are diagonal, the largest two at
// the bases of the key, and the laboratory's errors are the aligned ones.
func TestAlignmentAligns(t *testing.T) {
	forRandomStates(t, 200, func(rho DensityMatrix) string {
		a := rho.Alignment()
		turned := rho.Rotated(a.Alice, a.Bob)
		c := turned.Correlations()
		for i := range c {
			for j := range c {
				if i != j && math.Abs(c[i][j]) > 1e-9 {
					return fmt.Sprintf("correlation %d,%d is %g", i, j, c[i][j])
				}
			}
		}
		key, check := rho.AlignedErrors()
		hv, da, rl := turned.LabErrors()
		if a.KeyBasis == "DA" {
			hv, da = da, hv
		}
		if math.Abs(hv-key) > 1e-9 || math.Abs(da-check) > 1e-9 || rl < da-1e-9 {
			return fmt.Sprintf("errors %g, %g, %g; aligned %g, %g", hv, da, rl, key, check)
		}
		for _, r := range []Rotation{a.Alice, a.Bob} {
			if math.Abs(length(r.Axis)-1) > 1e-12 || !(r.AngleDeg >= 0 && r.AngleDeg <= 180) {
				return fmt.Sprintf("rotation %+v", r)
			}
		}
		return ""
	})
}

// A rotation acts on the Poincaré sphere as it says: about its axis, by its
// angle (Rodrigues' formula).
func TestRotationTurnsTheSphere(t *testing.T) {
	d := normalDrawer(92)
	for range 300 {
		axis := [3]float64{d(), d(), d()}
		l := length(axis)
		r := Rotation{[3]float64{axis[0] / l, axis[1] / l, axis[2] / l}, 180 * d.share()}
		light := d.turn()
		before := Analyser{light[0][0], light[0][1]}.stokes()
		u := r.unitary()
		after := Analyser{u[0][0]*light[0][0] + u[0][1]*light[0][1], u[1][0]*light[0][0] + u[1][1]*light[0][1]}.stokes()
		n, v := r.Axis, [3]float64{before[1], before[2], before[3]}
		sin, cos := math.Sincos(r.AngleDeg * math.Pi / 180)
		along := n[0]*v[0] + n[1]*v[1] + n[2]*v[2]
		cross := [3]float64{n[1]*v[2] - n[2]*v[1], n[2]*v[0] - n[0]*v[2], n[0]*v[1] - n[1]*v[0]}
		for i := range v {
			near(t, "Stokes parameter", after[i+1], v[i]*cos+cross[i]*sin+n[i]*along*(1-cos), 1e-13)
		}
	}
}

// rotationOf undoes what a rotation's matrix is made of, at any angle.
func TestRotationOfItsMatrix(t *testing.T) {
	d := normalDrawer(93)
	for n := range 400 {
		axis := [3]float64{d(), d(), d()}
		l := length(axis)
		want := Rotation{[3]float64{axis[0] / l, axis[1] / l, axis[2] / l}, 180 * d.share()}
		switch n % 4 {
		case 1:
			want.AngleDeg = 180 - math.Pow(10, -9*d.share())
		case 2:
			want.AngleDeg = math.Pow(10, -6*d.share())
		}
		// Column k is where the rotation takes the axis k: of a state with Alice's
		// photon there and Bob's at H, the correlation with H.
		var o [3][3]float64
		for k, letter := range []string{"D", "L", "H"} {
			a, _ := LetterAnalyser(letter)
			q := [2][2]complex128{{a[0] * cmplx.Conj(a[0]), a[0] * cmplx.Conj(a[1])}, {a[1] * cmplx.Conj(a[0]), a[1] * cmplx.Conj(a[1])}}
			c := DensityMatrix(kron(q, [2][2]complex128{{1, 0}, {0, 0}})).Rotated(want, Rotation{}).Correlations()
			for i := range o {
				o[i][k] = c[i][2]
			}
		}
		got := rotationOf(o)
		near(t, "angle", got.AngleDeg, want.AngleDeg, 1e-9)
		near(t, "axis off", length([3]float64{got.Axis[0] - want.Axis[0], got.Axis[1] - want.Axis[1], got.Axis[2] - want.Axis[2]}), 0, 1e-8)
	}
}

// Bell states need no turn: signs are free. Nor does a state whose best basis is
// D/A; one turned at Bob's side is turned back there or at Alice's.
func TestAlignmentIsNoMoreThanNeeded(t *testing.T) {
	none := Rotation{Axis: [3]float64{2: 1}}
	for k := range 4 {
		var shares [4]float64
		shares[k] = 1
		if a := bellDiagonal(shares).Alignment(); a != (Alignment{none, none, "HV"}) {
			t.Errorf("Bell state %d is turned: %+v", k, a)
		}
	}
	flipped := bellDiagonal([4]float64{0.8, 0.05, 0.15, 0}) // errors HV 0.15, DA 0.05, RL 0.2
	if a := flipped.Alignment(); a != (Alignment{none, none, "DA"}) {
		t.Errorf("a state with the better basis D/A is turned: %+v", a)
	}
	turn := Rotation{[3]float64{0.6, 0, 0.8}, 40}
	a := Werner(0.9).Rotated(none, turn).Alignment()
	near(t, "angles of both sides", a.Alice.AngleDeg+a.Bob.AngleDeg, 40, 1e-6)
	a = DensityMatrix(bellDiagonal([4]float64{0.9, 0.07, 0.03, 0})).Rotated(none, turn).Alignment()
	near(t, "Alice's angle", a.Alice.AngleDeg, 0, 1e-6)
	near(t, "Bob's angle", a.Bob.AngleDeg, 40, 1e-6)
}

// White noise has no best basis and is left alone.
func TestAlignmentOfNoise(t *testing.T) {
	none := Rotation{Axis: [3]float64{2: 1}}
	if a := Werner(0).Alignment(); a != (Alignment{none, none, "HV"}) {
		t.Errorf("%+v", a)
	}
}
