package sources

import (
	"math"
	"testing"
)

// measuredWith returns rho as it is measured with uniform accidentals left in.
func measuredWith(car float64, rho DensityMatrix) DensityMatrix {
	return mixed(1/(1+car), rho, Werner(0))
}

// Taking uniform accidentals out restores the state.
func TestAccidentalsComeOutOfMatrices(t *testing.T) {
	d := normalDrawer(40)
	for _, car := range []float64{1, 5, 38, 1e4} {
		for range 50 {
			rho := d.state(3)
			got, mending := FromDensityMatrix(measuredWith(car, rho)).WithoutAccidentals(car)
			if off := distance(got.Matrix, rho); off > 1e-14 || mending.Any() {
				t.Fatalf("off by %g at CAR %g, %+v", off, car, mending)
			}
		}
	}
}

// A state measured with fewer accidentals than are taken out: of Werner's
// p = 0.95 at CAR 10, p' = 1.045, Phi+ has 1.03375 and the others -0.01125.
func TestTooManyAccidentalsTakenOut(t *testing.T) {
	got, mending := FromDensityMatrix(Werner(0.95)).WithoutAccidentals(10)
	checkPhysical(t, got.Matrix)
	near(t, "distance to Phi+", distance(got.Matrix, bell(1, 1)), 0, 1e-14)
	near(t, "lowest eigenvalue", mending.LowestEigenvalue, -0.01125, 1e-14)
	if !mending.Any() {
		t.Error("nothing is said")
	}
}

func TestAccidentalsComeOutOfVisibilities(t *testing.T) {
	const car = 24
	got, mending := FromVisibilities(0.95*car/(car+1), 0.9*car/(car+1)).WithoutAccidentals(car)
	near(t, "visibility HV", got.VisibilityHV, 0.95, 1e-15)
	near(t, "visibility DA", got.VisibilityDA, 0.9, 1e-15)
	if mending.Any() {
		t.Errorf("%+v", mending)
	}
	got, mending = FromVisibilities(0.98, 0.9).WithoutAccidentals(24) // 0.98 x 25/24 = 1.0208
	if got.VisibilityHV != 1 {
		t.Errorf("a visibility of %g", got.VisibilityHV)
	}
	near(t, "excess", mending.VisibilityAboveOne, 0.98*25/24-1, 1e-15)
	expect(t, mending.Sentence(), "with the accidentals taken out a visibility came out above 1 by 0.021 and counts as 1, so the coincidence-to-accidental ratio may be too low")
}

// Of Werner's state the figure alone gives what the matrix gives, exactly.
func TestAccidentalsOfWernerFigures(t *testing.T) {
	for _, car := range []float64{3, 38, 500} {
		raw := measuredWith(car, Werner(0.94))
		want, _ := Werner(0.94).AlignedErrors()
		for _, s := range []State{FromTangle(raw.Tangle()), FromConcurrence(raw.Concurrence()), FromFidelity(raw.Fidelity())} {
			s, mending := s.WithoutAccidentals(car)
			e1, e2 := s.Errors(Nominal)
			near(t, "e1", e1, want, 1e-14)
			near(t, "e2", e2, want, 1e-14)
			if mending.Any() {
				t.Errorf("%+v", mending)
			}
		}
	}
}

// At worst, and for Werner's state, the correlations of a tangle's members grow:
// e -> (e - 1/(2(CAR+1))) (CAR+1)/CAR, floored.
func TestAccidentalsOfMembers(t *testing.T) {
	const car = 20.0
	for _, raw := range []State{FromTangle(0.7), FromConcurrence(0.9)} {
		s, _ := raw.WithoutAccidentals(car)
		for _, m := range []Member{Nominal, AtWorst} {
			r1, r2 := raw.Errors(m)
			e1, e2 := s.Errors(m)
			near(t, "e1", e1, max(0, (r1-1/(2*(car+1)))*(car+1)/car), 1e-15)
			near(t, "e2", e2, max(0, (r2-1/(2*(car+1)))*(car+1)/car), 1e-15)
		}
	}
}

// A dephased state is found again from the concurrence that it was measured
// with, and no state is better than the members at best.
func TestAtBestHoldsWithoutAccidentals(t *testing.T) {
	d := normalDrawer(43)
	for range 3000 {
		car, c := 2+50*d.share(), d.share()
		raw := measuredWith(car, Dephased(c)).Concurrence()
		s, _ := FromConcurrence(raw).WithoutAccidentals(car)
		e1, e2 := s.Errors(BestDephased)
		near(t, "dephased e1", e1, 0, 1e-12)
		if raw > 0 {
			near(t, "dephased e2", e2, (1-c)/2, 1e-12)
		}
		rho := mixed(d.share()/3, d.turned(bell(1, 1)), d.state(2))
		s, _ = FromConcurrence(measuredWith(car, rho).Concurrence()).WithoutAccidentals(car)
		e1, e2 = rho.AlignedErrors()
		if even, _ := s.Errors(BestEven); e1+e2 < 2*even-1e-12 {
			t.Fatalf("errors %g and %g below the best, %g each, at CAR %g", e1, e2, even, car)
		}
	}
}

// Accidentals come out of a fidelity exactly, whatever the state.
func TestAccidentalsOfFidelity(t *testing.T) {
	d := normalDrawer(47)
	for range 300 {
		rho := mixed(d.share()/4, bell(1, 1), d.state(2))
		car := 5 + 50*d.share()
		s, _ := FromFidelity(measuredWith(car, rho).FidelityWith(bell(1, 1))).WithoutAccidentals(car)
		_, worst := s.Errors(AtWorst)
		near(t, "1 - F", worst, 1-rho.FidelityWith(bell(1, 1)), 1e-12)
	}
}

// Whatever the state, a tangle measured with uniform accidentals bounds it from
// the worst side once they are out.
func TestAtWorstHoldsWithoutAccidentals(t *testing.T) {
	d := normalDrawer(41)
	for range 3000 {
		rho := mixed(d.share()/3, d.turned(bell(1, 1)), d.state(2))
		car := 2 + 50*d.share()
		s, _ := FromConcurrence(measuredWith(car, rho).Concurrence()).WithoutAccidentals(car)
		_, e2 := rho.AlignedErrors()
		if _, worst := s.Errors(AtWorst); e2 > worst+1e-12 {
			t.Fatalf("e2 %g above the worst %g at CAR %g", e2, worst, car)
		}
	}
}

// A tangle of 0.98 cannot be measured by Werner's state at CAR 10: at most
// 10/11 of full visibility is left.
func TestFigureAgainstAccidentals(t *testing.T) {
	s, mending := FromTangle(0.98).WithoutAccidentals(10)
	near(t, "excess", mending.VisibilityAboveOne, (1+2*math.Sqrt(0.98))/3*1.1-1, 1e-15)
	if e1, e2 := s.Errors(Nominal); e1 != 0 || e2 != 0 {
		t.Errorf("errors %g, %g, want 0", e1, e2)
	}
}

func TestAccidentalsAtTheEdges(t *testing.T) {
	raw := FromDensityMatrix(Werner(0.9))
	if got, mending := raw.WithoutAccidentals(math.Inf(1)); got != raw || mending.Any() {
		t.Errorf("an infinite ratio changes the state: %+v", mending)
	}
	for _, car := range []float64{0, -1, math.NaN()} {
		if got, _ := raw.WithoutAccidentals(car); got != (State{}) {
			t.Errorf("a ratio of %g gives %+v", car, got)
		}
	}
	// Twice is once with the product of both factors: 1.25 x 1.2 = 1.5.
	once, _ := FromTangle(0.1).WithoutAccidentals(2)
	twice, _ := FromTangle(0.1).WithoutAccidentals(4)
	twice, _ = twice.WithoutAccidentals(5)
	a, _ := once.Errors(AtWorst)
	b, _ := twice.Errors(AtWorst)
	near(t, "error after taking out twice", b, a, 1e-15)
}
