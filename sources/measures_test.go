package sources

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// printed2001 is the matrix printed in James et al. (2001), Phys. Rev. A 64,
// 052312; upper triangle, from memory.
const printed2001 = `row,col,re,im
0,0,0.5069,0
0,1,-0.0239,0.0106
0,2,-0.0412,-0.0221
0,3,0.4833,0.0329
1,1,0.0048,0
1,2,0.0023,0.0019
1,3,-0.0296,-0.0077
2,2,0.0045,0
2,3,-0.0425,0.0192
3,3,0.4839,0
`

// James et al. (2001), Phys. Rev. A 64, 052312: the measures that they print
// for the matrix that they print. From memory.
func TestPublishedMeasuresOfJames2001(t *testing.T) {
	raw, err := ReadDensityMatrix(strings.NewReader(printed2001))
	if err != nil {
		t.Fatal(err)
	}
	rho, _, err := NewDensityMatrix(raw)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "concurrence", rho.Concurrence(), 0.963, 0.002)
	near(t, "tangle", rho.Tangle(), 0.928, 0.002)
	near(t, "entanglement of formation", rho.EntanglementOfFormation(), 0.947, 0.002)
	near(t, "entropy", rho.Entropy(), 0.106, 0.002)
	near(t, "linear entropy", rho.LinearEntropy(), 0.037, 0.002)
}

// Werner's state: C = (3p-1)/2, F = (3p+1)/4, S = 2 sqrt2 p, e = (1-p)/2;
// purity (1+3p²)/4; eigenvalues (1+3p)/4 and three times (1-p)/4.
func TestWerner(t *testing.T) {
	rho := Werner(0.9)
	near(t, "concurrence", rho.Concurrence(), 0.85, 1e-14)
	near(t, "tangle", rho.Tangle(), 0.7225, 1e-14)
	near(t, "fidelity", rho.Fidelity(), 0.925, 1e-14)
	near(t, "CHSH", rho.CHSH(), 2.545584, 5e-7)
	e1, e2 := rho.AlignedErrors()
	near(t, "e1", e1, 0.05, 1e-15)
	near(t, "e2", e2, 0.05, 1e-15)
	for p := -1.0 / 3; p <= 1; p += 1.0 / 64 {
		rho := Werner(p)
		near(t, "concurrence", rho.Concurrence(), max(0, (3*p-1)/2), 1e-14)
		near(t, "purity", rho.Purity(), (1+3*p*p)/4, 1e-14)
		near(t, "linear entropy", rho.LinearEntropy(), 1-p*p, 1e-14)
		a, b := (1+3*p)/4, (1-p)/4
		near(t, "entropy", rho.Entropy(), -xlog2(a)-3*xlog2(b), 1e-13)
		for _, e := range labErrors(rho) {
			near(t, "laboratory error", e, (1-math.Abs(p))/2, 1e-15)
		}
	}
	if c := Werner(1.01).Concurrence(); !math.IsNaN(c) {
		t.Errorf("Werner(1.01) has concurrence %v, want NaN", c)
	}
}

func xlog2(p float64) float64 {
	if p <= 0 {
		return 0
	}
	return p * math.Log2(p)
}

func labErrors(rho DensityMatrix) [3]float64 {
	hv, da, rl := rho.LabErrors()
	return [3]float64{hv, da, rl}
}

// The families named for their concurrence have it, and the errors that their
// names promise.
func TestFamilies(t *testing.T) {
	for c := 0.0; c <= 1; c += 1.0 / 32 {
		worst, dephased := AtWorstState(c), Dephased(c)
		near(t, "concurrence at worst", worst.Concurrence(), c, 1e-14)
		near(t, "concurrence dephased", dephased.Concurrence(), c, 1e-14)
		e1, e2 := worst.AlignedErrors()
		near(t, "e1 at worst", e1, (1-c)/2, 1e-15)
		near(t, "e2 at worst", e2, (1-c)/2, 1e-15)
		hv, da, rl := dephased.LabErrors()
		near(t, "HV dephased", hv, 0, 1e-15)
		near(t, "DA dephased", da, (1-c)/2, 1e-15)
		near(t, "RL dephased", rl, (1-c)/2, 1e-15)
	}
	if !math.IsNaN(AtWorstState(-0.1).Concurrence()) || !math.IsNaN(Dephased(1.1).Concurrence()) {
		t.Error("a concurrence outside 0 to 1 gives a state")
	}
}

// A pure state a|HH> + b|HV> + c|VH> + d|VV> has C = 2|ad - bc|, entropy 0 and
// purity 1.
func TestPureStates(t *testing.T) {
	d := normalDrawer(4)
	for n := range 3000 {
		v := [4]complex128{d.complex(), d.complex(), d.complex(), d.complex()}
		if n%3 == 0 { // a product but for one part in 10^(n/300)
			v[3] = v[1]*v[2]/v[0] + complex(math.Pow(10, -float64(n)/300), 0)
		}
		norm := 0.0
		for _, x := range v {
			norm += real(x * cmplx.Conj(x))
		}
		var rho DensityMatrix
		for i := range rho {
			for j := range rho {
				rho[i][j] = v[i] * cmplx.Conj(v[j]) / complex(norm, 0)
			}
		}
		near(t, "concurrence", rho.Concurrence(), 2*cmplx.Abs(v[0]*v[3]-v[1]*v[2])/norm, 1e-14)
		near(t, "purity", rho.Purity(), 1, 1e-14)
		near(t, "entropy", rho.Entropy(), 0, 1e-12)
		near(t, "fidelity", rho.Fidelity(), (1+rho.Concurrence())/2, 1e-14)
		// The entanglement of a pure state is the entropy of one photon.
		p := real(rho[0][0] + rho[1][1])
		x := cmplx.Abs(rho[0][2] + rho[1][3])
		root := math.Hypot(p-0.5, x)
		near(t, "entanglement of formation", rho.EntanglementOfFormation(), -xlog2(0.5+root)-xlog2(0.5-root), 1e-12)
	}
}

// An X state, with local rotations on top, has
// C = 2 max(0, |r14| - sqrt(r22 r33), |r23| - sqrt(r11 r44)), also where
// eigenvalues vanish.
func TestConcurrenceOfXStates(t *testing.T) {
	d := normalDrawer(5)
	for n := range 3000 {
		p := d.shares()
		if n%2 == 0 { // one population gone, and with it a coherence
			p[1], p[2] = 0, p[2]+p[1]
		}
		var x DensityMatrix
		for i := range x {
			x[i][i] = complex(p[i], 0)
		}
		phase := cmplx.Exp(complex(0, d()))
		reach := math.Min(1, 1.2*d.share()) // 1: rank-deficient
		x[0][3] = complex(reach*math.Sqrt(p[0]*p[3]), 0) * phase
		x[1][2] = complex(d.share()*math.Sqrt(p[1]*p[2]), 0) * phase
		x[3][0], x[2][1] = cmplx.Conj(x[0][3]), cmplx.Conj(x[1][2])
		want := 2 * max(0, cmplx.Abs(x[0][3])-math.Sqrt(p[1]*p[2]), cmplx.Abs(x[1][2])-math.Sqrt(p[0]*p[3]))
		near(t, "concurrence", d.turned(x).Concurrence(), want, 1e-10)
	}
}

// Wootters' own recipe, the square roots of the eigenvalues of rho rho~, by
// gonum; good where no eigenvalue is small.
func TestConcurrenceAgainstSpinFlip(t *testing.T) {
	d := normalDrawer(6)
	flip := kron([2][2]complex128{{0, -1i}, {1i, 0}}, [2][2]complex128{{0, -1i}, {1i, 0}})
	entangled := 0
	for range 1000 {
		rho := mixed(d.share()/2, d.state(1), d.state(4))
		conjugate := rho
		for i := range rho {
			for j := range rho {
				conjugate[i][j] = cmplx.Conj(rho[i][j])
			}
		}
		product := times(rho, times(flip, times(conjugate, flip)))
		var e mat.Eigen
		if !e.Factorize(embed(product), mat.EigenNone) {
			t.Fatal("no reference")
		}
		sum, largest := 0.0, 0.0
		for _, value := range e.Values(nil) { // each twice
			root := math.Sqrt(max(0, real(value)))
			sum += root / 2
			largest = max(largest, root)
		}
		want := max(0, 2*largest-sum)
		near(t, "concurrence", rho.Concurrence(), want, 1e-7)
		if want > 0 {
			entangled++
		}
	}
	if entangled < 100 {
		t.Errorf("only %d of the states are entangled", entangled)
	}
}

// T_ij = Tr(rho sigma_i x sigma_j), written out.
func TestCorrelations(t *testing.T) {
	pauli := [3][2][2]complex128{{{0, 1}, {1, 0}}, {{0, -1i}, {1i, 0}}, {{1, 0}, {0, -1}}}
	d := normalDrawer(7)
	for range 100 {
		rho := d.state(4)
		got := rho.Correlations()
		for i := range pauli {
			for j := range pauli {
				near(t, fmt.Sprintf("T%d%d", i+1, j+1), got[i][j], real(traceOf(times(rho, kron(pauli[i], pauli[j])))), 1e-14)
			}
		}
	}
}

// Malus' law: with both analysers at H, V, D, A, R, L the four outcomes of a
// basis give its error, the less frequent of equal and unequal.
func TestLabErrorsFromOutcomes(t *testing.T) {
	const r = math.Sqrt2 / 2
	bases := [3][2][2]complex128{{{1, 0}, {0, 1}}, {{r, r}, {r, -r}}, {{r, -1i * r}, {r, 1i * r}}}
	d := normalDrawer(8)
	for range 200 {
		rho := d.state(2)
		got := labErrors(rho)
		for k, basis := range bases {
			equal := 0.0
			for _, v := range basis {
				for i := range rho {
					for j := range rho {
						equal += real(cmplx.Conj(v[i/2]*v[i%2]) * rho[i][j] * v[j/2] * v[j%2])
					}
				}
			}
			near(t, "error", got[k], min(equal, 1-equal), 1e-14)
		}
	}
}

// In the frame in which T = diag(t1, t2, t3) the Bell states have the weights
// (1 + t1 - t2 + t3)/4 and so on, whence F = (1 + s1 + s2 - sign(det T) s3)/4.
func TestFidelityFromCorrelations(t *testing.T) {
	forRandomStates(t, 300, func(rho DensityMatrix) string {
		s, sign := referenceStrengths(rho)
		want := (1 + s[0] + s[1] - sign*s[2]) / 4
		if got := rho.Fidelity(); math.Abs(got-want) > 1e-13 {
			return fmt.Sprintf("fidelity %.16g, want %.16g", got, want)
		}
		return ""
	})
}

// Rotating either photon's polarisation changes no measure but the laboratory
// errors.
func TestLocalRotationsChangeNothing(t *testing.T) {
	d := normalDrawer(9)
	forRandomStates(t, 100, func(rho DensityMatrix) string {
		a, b := allMeasures(rho), allMeasures(d.turned(rho))
		for k := range a {
			tolerance := 1e-12
			if k == 0 || k == 1 {
				tolerance = 1e-7 // the concurrence feels the root of a rounded eigenvalue
			}
			if math.Abs(a[k]-b[k]) > tolerance {
				return fmt.Sprintf("measure %d: %.16g before, %.16g after", k, a[k], b[k])
			}
		}
		return ""
	})
}

func allMeasures(rho DensityMatrix) []float64 {
	e1, e2 := rho.AlignedErrors()
	return []float64{rho.Concurrence(), rho.EntanglementOfFormation(), rho.Fidelity(), rho.Purity(), rho.Entropy(), rho.LinearEntropy(), rho.CHSH(), e1, e2}
}

// With a pure state the fidelity is <psi|sigma|psi>; of states that are diagonal
// in the same basis it is the squared sum of the roots; it is symmetric, and 1
// with the state itself.
func TestFidelityWith(t *testing.T) {
	d := normalDrawer(10)
	for range 500 {
		psi, sigma := d.state(1), d.state(3)
		overlap := real(traceOf(times(psi, sigma)))
		near(t, "fidelity with a pure state", psi.FidelityWith(sigma), overlap, 1e-13)
		near(t, "the same exchanged", sigma.FidelityWith(psi), overlap, 1e-13)
		near(t, "fidelity with itself", sigma.FidelityWith(sigma), 1, 1e-13)
		p, q := d.shares(), d.shares()
		sum := 0.0
		for k := range p {
			sum += math.Sqrt(p[k] * q[k])
		}
		near(t, "fidelity of Bell-diagonal states", bellDiagonal(p).FidelityWith(bellDiagonal(q)), sum*sum, 1e-13)
	}
}
