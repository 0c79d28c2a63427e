package source

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"pairspan/sources"
)

// anyState is a state at random: a mixture of as many random pure states as it
// has rank.
func anyState(r *rand.Rand) (rho sources.DensityMatrix) {
	total := 0.0
	for range 1 + r.IntN(4) {
		var v [4]complex128
		for i := range v {
			v[i] = complex(r.NormFloat64(), r.NormFloat64())
		}
		for i := range v {
			for j := range v {
				rho[i][j] += v[i] * complex(real(v[j]), -imag(v[j]))
			}
			total += real(v[i])*real(v[i]) + imag(v[i])*imag(v[i])
		}
	}
	for i := range rho {
		for j := range rho {
			rho[i][j] /= complex(total, 0)
		}
	}
	return rho
}

// TestFidelityRange holds of random states, and its ends are reached.
func TestFidelityRange(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1))
	const rounding = 1e-9
	for range 3000 {
		rho := anyState(r)
		c, f := rho.Concurrence(), rho.Fidelity()
		if is := fidelityRange(c); f < is.From-rounding || f > is.To+rounding {
			t.Fatalf("concurrence %v: fidelity %v is outside %v", c, f, is)
		}
		if c < 2*f-1-rounding { // the conversion of a fidelity alone
			t.Fatalf("fidelity %v: concurrence %v", f, c)
		}
	}
	for _, c := range []float64{0.4, 0.7, 0.93} {
		is := fidelityRange(c)
		if f := sources.Dephased(c).Fidelity(); math.Abs(f-is.To) > rounding {
			t.Errorf("dephased: %v, want %v", f, is.To)
		}
		if f := sources.AtWorstState(c).Fidelity(); math.Abs(f-is.From) > rounding {
			t.Errorf("at worst: %v, want %v", f, is.From)
		}
	}
	if fidelityRange(math.NaN()) != nil {
		t.Error("a range of nothing")
	}
}

// TestVisibilitiesBoundTheFidelity: that with the nearest maximally entangled
// state is at least their mean.
func TestVisibilitiesBoundTheFidelity(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 1))
	for range 3000 {
		rho := anyState(r)
		hv, da, _ := rho.LabErrors()
		if mean := ((1 - 2*hv) + (1 - 2*da)) / 2; rho.Fidelity() < mean-1e-9 {
			t.Fatalf("visibilities %v and %v, fidelity %v", 1-2*hv, 1-2*da, rho.Fidelity())
		}
	}
}

// TestIntervals: what a figure alone tells, and what it does not.
func TestIntervals(t *testing.T) {
	s := describe(sources.FromTangle(0.86))
	if s.Known != Bounded || s.DensityMatrix != nil || s.Purity.Value != nil || s.QBERAligned.Key.Value != nil || s.Aligning != "" {
		t.Errorf("%+v", s)
	}
	if s.Conversions != "tangle 0.86 = concurrence 0.927; fidelity between 0.927 and 0.964" {
		t.Error(s.Conversions)
	}
	if c := math.Sqrt(0.86); math.Abs(s.Members.AtWorst.QBERKey-(1-c)/2) > 1e-12 || math.Abs(s.Members.Nominal.QBERCheck-(1-c)/3) > 1e-12 || s.Members.AtBest.QBERKey != 0 {
		t.Errorf("%+v", s.Members)
	}
	// Published: a tangle of 0.80 gives 0.4038 to 0.7019, and 0.5604 for Werner's state.
	m := describe(sources.FromTangle(0.8)).Members
	for got, want := range map[float64]float64{m.AtWorst.SecretFraction: 0.4038, m.AtBest.SecretFraction: 0.7019, m.Nominal.SecretFraction: 0.5604} {
		if math.Abs(got-want) > 5e-5 {
			t.Errorf("%v, want %v", got, want)
		}
	}
	s = describe(sources.FromFidelity(0.95))
	if s.Conversions != "fidelity 0.95: concurrence at least 0.9, tangle at least 0.81" || s.Tangle.Value != nil || s.FidelityRange != nil {
		t.Errorf("%+v", s)
	}
	s = describe(sources.FromVisibilities(0.97, 0.93))
	if s.Known != Visibilities || *s.QBERAligned.Key.Value >= *s.QBERAligned.Check.Value || !strings.Contains(s.Conversions, "fidelity at least 0.95,") {
		t.Errorf("%+v", s)
	}
	if describe(sources.State{}) != nil {
		t.Error("a description of nothing")
	}
}

// TestAligning says what it is worth.
func TestAligning(t *testing.T) {
	turned := sources.Werner(0.94).Rotated(sources.Rotation{Axis: [3]float64{1}, AngleDeg: 90}, sources.Rotation{Axis: [3]float64{1}})
	for want, rho := range map[string]sources.DensityMatrix{
		"They are aligned already.":                              sources.Werner(0.94),
		"Aligning them is worth 0.611 secret bits":               turned,
		"no key either way, but aligning them lowers the errors": sources.Werner(0.5).Rotated(sources.Rotation{Axis: [3]float64{1}, AngleDeg: 40}, sources.Rotation{Axis: [3]float64{1}}),
	} {
		if got := stateOf(rho, nil).Aligning; !strings.Contains(got, want) {
			t.Errorf("%s\nlacks %s", got, want)
		}
	}
}

// TestFigureText: the value ends where its deviation's second digit does.
func TestFigureText(t *testing.T) {
	of := func(value, sd float64) Figure { return Figure{&value, &sd} }
	for want, f := range map[string]Figure{
		"0.861 +- 0.012":       of(0.86123, 0.0123),
		"0.86 +- 0.10":         of(0.86123, 0.0996),
		"1230 +- 12":           of(1229.8, 12.3),
		"(1.230 +- 0.123)e3":   {},
		"(3.1469 +- 0.0031)e5": of(314690, 310),
		"(1.00 +- 0.20)e7":     of(1e7, 2e6),
		"0.000 +- 0.012":       of(0, 0.0123),
		"-0.10 +- 0.12":        of(-0.1, 0.123),
		"(1.00 +- 0.12)e-5":    of(1e-5, 1.2e-6),
		"12.3":                 of(12.345, 0),
		"10.0 +- 1.0":          of(10, 0.999),
		"99.95 +- 0.10":        of(99.95, 0.0999),
	} {
		if f.Value == nil {
			want = "not known"
		}
		if got := f.Text(); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
	if got := of(0.0157, 0.0044).PerCent(); got != "1.57 +- 0.44 %" {
		t.Error(got)
	}
}
