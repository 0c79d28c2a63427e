package sources

import (
	"math"
	"testing"
)

// entropyOf is the binary entropy, for the secret fraction 1 - h(e1) - h(e2)
// (Shor, Preskill 2000, f = 1).
func entropyOf(p float64) float64 { return -xlog2(p) - xlog2(1-p) }

func secretFraction(s State, m Member) float64 {
	e1, e2 := s.Errors(m)
	return 1 - entropyOf(e1) - entropyOf(e2)
}

// Each member's errors are those of a state that has the figures.
func TestMembersAreStates(t *testing.T) {
	for c := 0.0; c <= 1; c += 1.0 / 32 {
		even := bellDiagonal([4]float64{(1 + c) / 2, (1 - c) / 4, (1 - c) / 4, 0})
		for m, rho := range map[Member]DensityMatrix{
			Nominal: Werner((1 + 2*c) / 3), AtWorst: AtWorstState(c), BestDephased: Dephased(c), BestEven: even,
		} {
			near(t, "concurrence", rho.Concurrence(), c, 1e-14)
			w1, w2 := rho.AlignedErrors()
			for _, s := range []State{FromConcurrence(c), FromTangle(c * c)} {
				e1, e2 := s.Errors(m)
				near(t, "e1", e1, w1, 1e-15)
				near(t, "e2", e2, w2, 1e-15)
				near(t, "concurrence of the figure", s.Concurrence(), c, 1e-15)
			}
		}
	}
}

// The same for a fidelity to Phi+, in the laboratory's own axes: at worst all
// the rest is Psi-, which errs in both bases.
func TestFidelityMembersAreStates(t *testing.T) {
	for f := 33.0 / 64; f <= 1; f += 1.0 / 64 {
		for m, rho := range map[Member]DensityMatrix{
			Nominal:      Werner((4*f - 1) / 3),
			AtWorst:      bellDiagonal([4]float64{f, 0, 0, 1 - f}),
			BestDephased: bellDiagonal([4]float64{f, 1 - f, 0, 0}),
			BestEven:     bellDiagonal([4]float64{f, (1 - f) / 2, (1 - f) / 2, 0}),
		} {
			near(t, "fidelity", rho.FidelityWith(bell(1, 1)), f, 1e-14)
			hv, da, _ := rho.LabErrors()
			e1, e2 := FromFidelity(f).Errors(m)
			near(t, "e1", e1, min(hv, da), 1e-15)
			near(t, "e2", e2, max(hv, da), 1e-15)
		}
	}
}

// However the rest of a state of fidelity f to Phi+ is spread, and with any
// coherences, its errors in the axes of f lie between best and worst.
func TestFidelityBoundsHold(t *testing.T) {
	d := normalDrawer(30)
	tried := 0
	for range 20000 {
		rho := mixed(d.share(), bell(1, 1), d.state(2))
		f := rho.FidelityWith(bell(1, 1))
		if f <= 0.5 {
			continue
		}
		tried++
		hv, da, _ := rho.LabErrors()
		worst, _ := FromFidelity(f).Errors(AtWorst)
		if max(hv, da) > worst+1e-12 || hv+da < worst-1e-12 {
			t.Fatalf("errors %g and %g with fidelity %g", hv, da, f)
		}
	}
	if tried < 1000 {
		t.Errorf("only %d states tried", tried)
	}
}

// The secret fraction at worst vanishes where 2 h((1-C)/2) = 1.
func TestLeastTangleWithKey(t *testing.T) {
	lo, hi := 0.0, 1.0
	for range 60 {
		if mid := (lo + hi) / 2; secretFraction(FromTangle(mid), AtWorst) > 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	near(t, "least tangle", lo, 0.6083, 5e-5)
}

func TestTangleConsequences(t *testing.T) {
	s := FromTangle(0.80)
	near(t, "secret fraction at worst", secretFraction(s, AtWorst), 0.4038, 5e-5)
	near(t, "secret fraction dephased", secretFraction(s, BestDephased), 0.7019, 5e-5)
	near(t, "secret fraction of Werner's state", secretFraction(s, Nominal), 0.5604, 5e-5)
	near(t, "tangle of Werner's state of fidelity 0.95", Werner((4*0.95-1)/3).Tangle(), 0.81, 1e-14)
	f1, _ := FromFidelity(0.95).Errors(Nominal)
	t1, _ := FromTangle(0.81).Errors(Nominal)
	near(t, "error of fidelity 0.95 and of tangle 0.81", f1, t1, 1e-15)
}

// Where the state is given all members are the same; the smaller error comes
// first.
func TestGivenStates(t *testing.T) {
	visible := FromVisibilities(0.9, 0.96)
	rho := bellDiagonal([4]float64{0.9, 0.06, 0.03, 0.01})
	for _, m := range []Member{Nominal, AtWorst, BestDephased, BestEven} {
		e1, e2 := visible.Errors(m)
		near(t, "e1 of visibilities", e1, 0.02, 1e-15)
		near(t, "e2 of visibilities", e2, 0.05, 1e-15)
		e1, e2 = FromDensityMatrix(rho).Errors(m) // HV errs in Psi+, Psi-; DA in Phi-, Psi-
		near(t, "e1 of the matrix", e1, 0.04, 1e-15)
		near(t, "e2 of the matrix", e2, 0.07, 1e-15)
	}
	near(t, "concurrence of the matrix", FromDensityMatrix(rho).Concurrence(), 0.8, 1e-14)
}

func TestKnowledge(t *testing.T) {
	for _, row := range []struct {
		state State
		want  Knowledge
	}{
		{State{}, Unknown},
		{FromTangle(0.5), Bounded},
		{FromConcurrence(0.5), Bounded},
		{FromFidelity(0.9), Bounded},
		{FromVisibilities(0.9, 0.9), Given},
		{FromDensityMatrix(Werner(0.5)), Given},
		{State{Kind: 99}, Unknown},
	} {
		if got := row.state.Knowledge(); got != row.want {
			t.Errorf("knowledge of %+v is %d, want %d", row.state, got, row.want)
		}
	}
}

// A state is a plain value: a figure that is changed is the one that counts.
func TestEditedState(t *testing.T) {
	s, _ := FromTangle(0.5).WithoutAccidentals(30)
	want, _ := FromTangle(0.81).WithoutAccidentals(30)
	s.Figure = 0.81
	if s != want {
		t.Errorf("an edited state is %+v, want %+v", s, want)
	}
	v := FromVisibilities(0.5, 0.5)
	v.VisibilityDA = 0.9
	if e1, e2 := v.Errors(Nominal); math.Abs(e1-0.05) > 1e-15 || e2 != 0.25 {
		t.Errorf("errors %g, %g after an edit", e1, e2)
	}
	m := FromDensityMatrix(Werner(0.5))
	m.Matrix = Werner(0.9)
	if e1, _ := m.Errors(Nominal); math.Abs(e1-0.05) > 1e-15 {
		t.Errorf("error %g after an edit of the matrix", e1)
	}
}

func TestErrorsOutsideTheDomain(t *testing.T) {
	nan := math.NaN()
	for _, s := range []State{
		{},
		{Kind: 99},
		FromTangle(-0.1), FromTangle(1.1), FromTangle(nan), FromConcurrence(-0.1), FromConcurrence(1.1),
		FromFidelity(0.5), FromFidelity(1.1), FromFidelity(nan), FromVisibilities(0.9, 1.1), FromVisibilities(-0.1, 0.9), FromVisibilities(nan, 0.9),
		FromDensityMatrix(Werner(nan)),
	} {
		for _, m := range []Member{Nominal, AtWorst, BestDephased, BestEven} {
			without, _ := s.WithoutAccidentals(50)
			for _, s := range []State{s, without} {
				if e1, e2 := s.Errors(m); !math.IsNaN(e1) || !math.IsNaN(e2) {
					t.Errorf("errors of kind %d, figure %g, member %d are %g, %g, want NaN", s.Kind, s.Figure, m, e1, e2)
				}
			}
		}
	}
	for _, s := range []State{FromTangle(0.5), FromFidelity(0.9)} {
		if e1, e2 := s.Errors(99); !math.IsNaN(e1) || !math.IsNaN(e2) {
			t.Errorf("a member that does not exist has errors %g, %g", e1, e2)
		}
	}
	for _, s := range []State{{}, FromFidelity(0.9), FromVisibilities(0.9, 0.9), FromTangle(-1)} {
		if c := s.Concurrence(); !math.IsNaN(c) {
			t.Errorf("concurrence of %+v is %g, want NaN", s, c)
		}
	}
}

func TestErrorsAllocateNothing(t *testing.T) {
	for _, s := range []State{FromTangle(0.8), FromFidelity(0.9), FromVisibilities(0.9, 0.8), FromDensityMatrix(Werner(0.9))} {
		if n := testing.AllocsPerRun(100, func() { s.Errors(AtWorst) }); n != 0 {
			t.Errorf("kind %d: %g allocations", s.Kind, n)
		}
	}
}
