package sources

import (
	"math"
	"math/cmplx"
)

// Rotation is a rotation of the Poincaré sphere: what wave plates, or a
// polarisation controller, do to one photon.
type Rotation struct {
	Axis     [3]float64 // of length 1, in the directions of σ1 (D), σ2 (L) and σ3 (H)
	AngleDeg float64    // 0 to 180, counter-clockwise for one who looks against the axis
}

// Alignment is a pair of rotations after which the analysers H/V and D/A of both
// sides measure with the least errors that any pair of bases has, and which of
// the two then has the smaller error.
type Alignment struct {
	Alice, Bob Rotation
	KeyBasis   string // "HV" or "DA": the one with the error QBERAligned.Key
}

// Alignment returns the rotations of Alice's and Bob's photons that align their
// frames. They make the correlation matrix diagonal,
//
//	O_A T O_B^T = diag(t1, t2, t3)
//
// with the two largest |t| at σ3 and σ1. From T = U diag(s) V^T the rows of O_A
// are the columns of ±U, those of O_B of ±V, in an order that does this. Signs
// are free, as an outcome may be called 0 or 1, but for the determinants, which
// are 1; so is which of σ3 and σ1 has the larger correlation. Of all these the
// pair closest to no rotation is returned, which has the largest traces.
// Correlations that differ by less than 1e-10 count as equal; Bob's frame then
// keeps its axes among them.
func (rho DensityMatrix) Alignment() Alignment {
	u, s, v := frames(rho.Correlations())
	var best Alignment
	most := math.Inf(-1)
	for _, rows := range [6][3]int{{0, 1, 2}, {2, 1, 0}, {0, 2, 1}, {1, 0, 2}, {1, 2, 0}, {2, 0, 1}} {
		var t [3]float64 // where the correlations go
		for k, row := range rows {
			t[row] = s[k]
		}
		if t[1] > min(t[0], t[2])+equalStrength {
			continue
		}
		a, traceA := nearestTurn(u, rows)
		b, traceB := nearestTurn(v, rows)
		if traceA+traceB > most+equalTrace {
			most = traceA + traceB
			best = Alignment{Alice: rotationOf(a), Bob: rotationOf(b), KeyBasis: "HV"}
			if t[0] > t[2]+equalStrength {
				best.KeyBasis = "DA"
			}
		}
	}
	return best
}

// What counts as equal of correlations, and of how near rotations are to none:
// rounding must not decide.
const (
	equalStrength = 1e-10
	equalTrace    = 1e-9
)

// frames returns the orthonormal vectors u_k and v_k, and the s_k ≥ 0, of
// T = Σ_k s_k u_k v_k^T.
func frames(t [3][3]float64) (u [3][3]float64, s [3]float64, v [3][3]float64) {
	var m, turn [4][4]complex128
	for i := range t {
		turn[i][i] = 1
		for j, x := range t[i] {
			m[i][j] = complex(x, 0)
		}
	}
	orthogonalColumns(&m, &turn, equalStrength)
	for k := range s {
		for i := range s {
			u[k][i], v[k][i] = real(m[i][k]), real(turn[i][k])
		}
		s[k] = length(u[k])
	}
	return orthonormal(u), s, v
}

// orthonormal returns the vectors u, which are orthogonal, with length 1. One
// that is too short to have a direction is made from the axes, its own first.
func orthonormal(u [3][3]float64) [3][3]float64 {
	for k := range u {
		if length(u[k]) >= equalStrength {
			u[k] = unit(u[k])
			continue
		}
		for axis := range u {
			var candidate [3]float64
			candidate[(k+axis)%3] = 1
			for j := range u {
				if j < k || j > k && length(u[j]) >= equalStrength {
					candidate = without(candidate, u[j])
				}
			}
			if length(candidate) > 0.5 { // as one of the three is, at least
				u[k] = unit(candidate)
				break
			}
		}
	}
	return u
}

func unit(v [3]float64) [3]float64 {
	l := length(v)
	return [3]float64{v[0] / l, v[1] / l, v[2] / l}
}

// without returns a less its part along b.
func without(a, b [3]float64) [3]float64 {
	share := (a[0]*b[0] + a[1]*b[1] + a[2]*b[2]) / (b[0]*b[0] + b[1]*b[1] + b[2]*b[2])
	for i := range a {
		a[i] -= share * b[i]
	}
	return a
}

func length(v [3]float64) float64 { return math.Hypot(math.Hypot(v[0], v[1]), v[2]) }

// nearestTurn returns the rotation matrix whose row rows[k] is ±axes[k], with the
// signs of the greatest trace, and that trace.
func nearestTurn(axes [3][3]float64, rows [3]int) (nearest [3][3]float64, trace float64) {
	trace = math.Inf(-1)
	for signs := range 8 {
		var o [3][3]float64
		for k, row := range rows {
			sign := 1 - 2*float64(signs>>k&1)
			for i, x := range axes[k] {
				o[row][i] = sign * x
			}
		}
		if sum := o[0][0] + o[1][1] + o[2][2]; determinant(o) > 0 && sum > trace+equalTrace {
			nearest, trace = o, sum
		}
	}
	return nearest, trace
}

func determinant(o [3][3]float64) float64 {
	return o[0][0]*(o[1][1]*o[2][2]-o[1][2]*o[2][1]) +
		o[0][1]*(o[1][2]*o[2][0]-o[1][0]*o[2][2]) +
		o[0][2]*(o[1][0]*o[2][1]-o[1][1]*o[2][0])
}

// rotationOf returns axis and angle of a rotation matrix; the axis of no
// rotation is σ3.
func rotationOf(o [3][3]float64) Rotation {
	// The differences across the diagonal are 2 sin(angle) × axis, which vanishes
	// at 180 degrees too; o + o^T + 1 − trace is 2 (1 − cos(angle)) × axis axis^T,
	// of which the longest column serves there.
	trace := o[0][0] + o[1][1] + o[2][2]
	turn := [3]float64{o[2][1] - o[1][2], o[0][2] - o[2][0], o[1][0] - o[0][1]}
	angle := math.Atan2(length(turn), trace-1)
	axis := turn
	if trace < 0 {
		axis = longestColumn(o, trace)
		if axis[0]*turn[0]+axis[1]*turn[1]+axis[2]*turn[2] < 0 {
			axis = [3]float64{-axis[0], -axis[1], -axis[2]}
		}
	}
	if angle < 1e-9 {
		return Rotation{Axis: [3]float64{2: 1}}
	}
	return Rotation{unit(axis), angle * 180 / math.Pi}
}

// longestColumn returns the longest column of o + o^T + 1 − trace.
func longestColumn(o [3][3]float64, trace float64) (longest [3]float64) {
	for k := range o {
		var column [3]float64
		for i := range column {
			column[i] = o[i][k] + o[k][i]
		}
		column[k] += 1 - trace
		if length(column) > length(longest) {
			longest = column
		}
	}
	return longest
}

// unitary returns exp(−i angle/2 axis·σ), which turns the Poincaré sphere so.
func (r Rotation) unitary() (u [2][2]complex128) {
	sin, cos := math.Sincos(r.AngleDeg * math.Pi / 360)
	x, y, z := complex(sin*r.Axis[0], 0), complex(sin*r.Axis[1], 0), complex(sin*r.Axis[2], 0)
	c := complex(cos, 0)
	return [2][2]complex128{{c - 1i*z, -1i*x - y}, {-1i*x + y, c + 1i*z}}
}

// Rotated returns the state after a rotation of each photon's polarisation.
func (rho DensityMatrix) Rotated(alice, bob Rotation) (turned DensityMatrix) {
	a, b := alice.unitary(), bob.unitary()
	var u [4][4]complex128
	for i := range u {
		for j := range u {
			u[i][j] = a[i/2][j/2] * b[i%2][j%2]
		}
	}
	for i := range u {
		for j := range u {
			for k := range u {
				for l := range u {
					turned[i][j] += u[i][k] * rho[k][l] * cmplx.Conj(u[j][l])
				}
			}
		}
	}
	return turned
}
