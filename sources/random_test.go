package sources

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// A drawer returns numbers in -1 to 1, or normal ones: the entries of random
// vectors.
type drawer func() float64

func normalDrawer(seed uint64) drawer {
	return rand.New(rand.NewPCG(seed, 0)).NormFloat64
}

// rapidDrawer draws from -1 to 1 with a liking for 0, ±1 and tiny numbers.
func rapidDrawer(t *rapid.T) drawer {
	number := rapid.Float64Range(-1, 1)
	return func() float64 { return number.Draw(t, "x") }
}

func (d drawer) complex() complex128 { return complex(d(), d()) }

// share returns a number from 0 to 1.
func (d drawer) share() float64 { return math.Abs(math.Mod(d(), 1)) }

// state returns G G† normalised, G a random 4 x rank matrix; of rank 1 it is
// pure. Where all numbers drawn vanish it is |HH>.
func (d drawer) state(rank int) (rho DensityMatrix) {
	for range rank {
		var v [4]complex128
		for i := range v {
			v[i] = d.complex()
		}
		for i := range rho {
			for j := range rho {
				rho[i][j] += v[i] * cmplx.Conj(v[j])
			}
		}
	}
	trace := real(rho[0][0] + rho[1][1] + rho[2][2] + rho[3][3])
	if trace < 1e-200 {
		return DensityMatrix{0: {0: 1}}
	}
	return hermitianPart(rho, trace)
}

// qubit returns a random pure or mixed state of one photon.
func (d drawer) qubit(rank int) (q [2][2]complex128) {
	for range rank {
		a, b := d.complex(), d.complex()
		q[0][0] += a * cmplx.Conj(a)
		q[0][1] += a * cmplx.Conj(b)
		q[1][1] += b * cmplx.Conj(b)
	}
	trace := real(q[0][0] + q[1][1])
	if trace < 1e-200 {
		return [2][2]complex128{{1, 0}, {0, 0}}
	}
	q[1][0] = cmplx.Conj(q[0][1])
	for i := range q {
		for j := range q {
			q[i][j] /= complex(trace, 0)
		}
	}
	return q
}

// turn returns a random unitary of one photon's polarisation.
func (d drawer) turn() [2][2]complex128 {
	a, b := d.complex(), d.complex()
	n := math.Hypot(cmplx.Abs(a), cmplx.Abs(b))
	if n < 1e-100 {
		return [2][2]complex128{{1, 0}, {0, 1}}
	}
	a, b = a/complex(n, 0), b/complex(n, 0)
	return [2][2]complex128{{a, b}, {-cmplx.Conj(b), cmplx.Conj(a)}}
}

// kron returns the tensor product of two 2x2 matrices.
func kron(a, b [2][2]complex128) (m [4][4]complex128) {
	for i := range m {
		for j := range m {
			m[i][j] = a[i/2][j/2] * b[i%2][j%2]
		}
	}
	return m
}

func times(a, b [4][4]complex128) (m [4][4]complex128) {
	for i := range m {
		for j := range m {
			for k := range m {
				m[i][j] += a[i][k] * b[k][j]
			}
		}
	}
	return m
}

func traceOf(m [4][4]complex128) complex128 { return m[0][0] + m[1][1] + m[2][2] + m[3][3] }

// turned returns rho after a random rotation of each photon's polarisation.
func (d drawer) turned(rho DensityMatrix) DensityMatrix {
	u := kron(d.turn(), d.turn())
	return times(times(u, rho), dagger(u))
}

// mixed returns (1 - share) a + share b.
func mixed(share float64, a, b DensityMatrix) (m DensityMatrix) {
	for i := range m {
		for j := range m {
			m[i][j] = complex(1-share, 0)*a[i][j] + complex(share, 0)*b[i][j]
		}
	}
	return m
}

// bellDiagonal returns the mixture of Phi+, Phi-, Psi+, Psi- with these shares.
func bellDiagonal(p [4]float64) (rho DensityMatrix) {
	rho = bell(p[0]+p[1], p[0]-p[1])
	w, c := complex((p[2]+p[3])/2, 0), complex((p[2]-p[3])/2, 0)
	rho[1][1], rho[2][2], rho[1][2], rho[2][1] = w, w, c, c
	return rho
}

func (d drawer) shares() (p [4]float64) {
	sum := 0.0
	for i := range p {
		p[i] = d.share()
		sum += p[i]
	}
	if sum == 0 {
		return [4]float64{1, 0, 0, 0}
	}
	for i := range p {
		p[i] /= sum
	}
	return p
}

// kinds of random states, each a corner of the space where something may fail.
var stateFamilies = []struct {
	name string
	draw func(d drawer) DensityMatrix
}{
	{"full rank", func(d drawer) DensityMatrix { return d.state(4) }},
	{"rank 2", func(d drawer) DensityMatrix { return d.state(2) }},
	{"rank 3", func(d drawer) DensityMatrix { return d.state(3) }},
	{"pure", func(d drawer) DensityMatrix { return d.state(1) }},
	{"near-pure", func(d drawer) DensityMatrix {
		return mixed(math.Pow(10, -16*d.share()), d.state(1), d.state(4))
	}},
	{"product", func(d drawer) DensityMatrix { return kron(d.qubit(2), d.qubit(2)) }},
	{"pure product", func(d drawer) DensityMatrix { return kron(d.qubit(1), d.qubit(1)) }},
	{"turned Bell-diagonal", func(d drawer) DensityMatrix { return d.turned(bellDiagonal(d.shares())) }},
	{"turned state at worst", func(d drawer) DensityMatrix { return d.turned(AtWorstState(d.share())) }},
	{"turned dephased", func(d drawer) DensityMatrix { return d.turned(Dephased(d.share())) }},
	{"entangled with noise", func(d drawer) DensityMatrix {
		return mixed(d.share()/4, d.turned(bell(1, 1)), d.state(2))
	}},
}

// forRandomStates runs check on normal draws of every family, and on rapid's.
func forRandomStates(t *testing.T, perFamily int, check func(rho DensityMatrix) string) {
	t.Helper()
	for _, family := range stateFamilies {
		t.Run(family.name, func(t *testing.T) {
			d := normalDrawer(uint64(len(family.name)))
			for range perFamily {
				if rho := family.draw(d); check(rho) != "" {
					t.Fatalf("%s\nstate %v", check(rho), rho)
				}
			}
			rapid.Check(t, func(rt *rapid.T) {
				if rho := family.draw(rapidDrawer(rt)); check(rho) != "" {
					rt.Fatalf("%s\nstate %v", check(rho), rho)
				}
			})
		})
	}
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %.15g, want %.15g within %g", what, got, want, tolerance)
	}
}

// distance returns the root of the sum of all |a_ij - b_ij|².
func distance(a, b [4][4]complex128) float64 {
	for i := range a {
		for j := range a {
			a[i][j] -= b[i][j]
		}
	}
	return frobenius(a)
}
