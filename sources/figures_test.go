package sources

import (
	"math"
	"slices"
	"testing"
)

// Werner's state of p = 0.9: every error 0.05, h(0.05) = 0.28640, so that the
// secret fraction is 1 − 2 h = 0.42721; Phi+ has (1 + 3p)/4.
func TestFiguresOfWerner(t *testing.T) {
	rho := Werner(0.9)
	d := Describe(rho)
	near(t, "tangle", d.Tangle, 0.85*0.85, 1e-14)
	near(t, "secret fraction in the laboratory", d.SecretFraction.Lab, 0.42721, 5e-6)
	near(t, "secret fraction aligned", d.SecretFraction.Aligned, 0.42721, 5e-6)
	near(t, "HV", d.QBERLab.HV, 0.05, 1e-15)
	near(t, "key", d.QBERAligned.Key, 0.05, 1e-15)
	near(t, "fidelity", d.BellFidelity, 0.925, 1e-15)
	expect(t, d.BellState, "Phi+")
	if d.Alignment != (Alignment{Rotation{Axis: [3]float64{2: 1}}, Rotation{Axis: [3]float64{2: 1}}, "HV"}) {
		t.Errorf("an aligned state is turned: %+v", d.Alignment)
	}
	for _, want := range []float64{rho.Entropy(), rho.LinearEntropy(), rho.EntanglementOfFormation(), rho.Purity(), rho.CHSH(), rho.Concurrence(), rho.Fidelity()} {
		if !slices.Contains(d.List(), want) {
			t.Errorf("%g is not among the figures %v", want, d.List())
		}
	}
}

// The secret fraction vanishes at equal errors of 11.0 % (Shor, Preskill, PRL 85,
// 441 (2000)), and is never negative.
func TestPublishedSecretFraction(t *testing.T) {
	if f := idealSecretFraction(0.110, 0.110); !(f > 0 && f < 1e-3) {
		t.Errorf("%g at 11.0 %%", f)
	}
	if f := idealSecretFraction(0.1101, 0.1101); f != 0 {
		t.Errorf("%g above 11.0 %%", f)
	}
	if a, b, c := idealSecretFraction(0, 0), idealSecretFraction(0.5, 0), idealSecretFraction(0, 0.5); a != 1 || b != 0 || c != 0 {
		t.Errorf("%g, %g, %g at the ends", a, b, c)
	}
}

// Of a tangle of 0.80 the secret fraction lies between 0.4038 and 0.7019,
// Werner's is 0.5604.
func TestSecretFractionsOfATangle(t *testing.T) {
	c := math.Sqrt(0.8)
	near(t, "at worst", AtWorstState(c).Figures().SecretFraction.Aligned, 0.4038, 5e-5)
	near(t, "dephased", Dephased(c).Figures().SecretFraction.Lab, 0.7019, 5e-5)
	near(t, "Werner", Werner((1+2*c)/3).Figures().SecretFraction.Lab, 0.5604, 5e-5)
}

func TestNearestBell(t *testing.T) {
	for i, want := range []string{"Phi+", "Phi-", "Psi+", "Psi-"} {
		shares := [4]float64{0.1, 0.1, 0.1, 0.1}
		shares[i] = 0.7
		name, fidelity := bellDiagonal(shares).NearestBell()
		expect(t, name, want)
		near(t, "fidelity", fidelity, 0.7, 1e-15)
	}
	// In the laboratory's axes it is never nearer than the nearest of all
	// maximally entangled states, nor farther than 1/4.
	d := normalDrawer(90)
	for range 300 {
		rho := d.state(2)
		if _, f := rho.NearestBell(); f > rho.Fidelity()+1e-14 || f < 0.25-1e-14 {
			t.Fatalf("fidelity %g, with the nearest of all %g", f, rho.Fidelity())
		}
	}
}

func TestFiguresOfList(t *testing.T) {
	f := normalDrawer(91).state(3).Figures()
	if back := FiguresOf(f.List()); back != f {
		t.Errorf("%+v came back as %+v", f, back)
	}
	distinct := f.List()
	slices.Sort(distinct)
	if len(slices.Compact(distinct)) != 15 && f.SecretFraction.Lab != 0 {
		t.Errorf("figures share a place: %v", f.List())
	}
	if short := FiguresOf([]float64{0.5}); short.Tangle != 0.5 || !math.IsNaN(short.Concurrence) {
		t.Errorf("got %+v", short)
	}
}
