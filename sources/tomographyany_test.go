package sources

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// Whatever was counted, be it far from any state, at whatever angles, times and
// accidentals, the maximum is found in a few dozen steps.
func TestAnyCountsAreFitted(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	upTo := func(decades float64) float64 { return math.Pow(10, decades*r.Float64()) }
	analyser := func() Analyser { return Plates{HWPDeg: 180 * r.Float64(), QWPDeg: 180 * r.Float64()}.Analyser() }
	for n := range 600 {
		decades := []float64{1, 4, 7}[n%3]
		var counts Counts
		for range 16 + r.IntN(30) {
			s := Setting{Alice: analyser(), Bob: analyser(), Exposure: upTo(float64(n % 4))}
			if r.IntN(3) > 0 {
				s.Counts = math.Floor(upTo(decades))
			}
			if r.IntN(2) > 0 {
				s.Accidentals = upTo(decades) / 2
			}
			counts.Settings = append(counts.Settings, s)
		}
		fit, err := counts.MaximumLikelihood()
		if err == error(noPairs) {
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		if checkFit(t, counts, fit); t.Failed() || fit.Iterations > 60 {
			t.Fatalf("case %d: %d steps", n, fit.Iterations)
		}
	}
}

// Where X = 0 is the maximum there is no state; a single count more than the
// accidentals let expect, and there is one.
func TestPairsBeginAboveAccidentals(t *testing.T) {
	counts := combinations("HVDARL")
	for i := range counts.Settings {
		counts.Settings[i].Counts, counts.Settings[i].Accidentals = 10, 10
	}
	_, err := counts.MaximumLikelihood()
	expect(t, fmt.Sprint(err), noPairs.Error())
	counts.Settings[0].Counts = 100
	fit := fitOf(t, counts)
	checkFit(t, counts, fit)
	if share := counts.Settings[0].chance(fit.Rho); share < 0.9 {
		t.Errorf("excess at HH alone gives %g of HH", share)
	}
}

// A direction that leads too far is cut short: what is maximised grows all the
// same.
func TestLongStepsAreCut(t *testing.T) {
	counts := normalDrawer(94).varied(combinations("HVDR"), 3).simulated(Dephased(0.9), 50, 1)
	w := counts.likelihood().start()
	w.look()
	worth := func() float64 {
		back := dagger(w.c)
		values, _ := eigenHermitian(product(&w.c, &back))
		sum := w.barrier * math.Log(values[0]*values[1]*values[2]*values[3])
		for i := range w.p {
			v := apply(&back, &w.p[i])
			mu := norm2(&v) + w.a[i]
			sum += w.n[i]*math.Log(mu) - mu
		}
		return sum
	}
	before := worth()
	d, slope := w.direction()
	for i := range d {
		d[i] *= 100
	}
	for i := range w.change {
		w.change[i] *= 100
	}
	w.step(&d, 100*slope)
	if after := worth(); !(after > before) {
		t.Errorf("from %g to %g", before, after)
	}
}

// Numbers that no file holds end in an error, not in a state.
func TestUnusableNumbers(t *testing.T) {
	for name, spoil := range map[string]func(s *Setting){
		"no time":              func(s *Setting) { s.Exposure = math.NaN() },
		"endless":              func(s *Setting) { s.Exposure = math.Inf(1) },
		"counts":               func(s *Setting) { s.Counts = math.NaN() },
		"endless counts":       func(s *Setting) { s.Counts = math.Inf(1) },
		"accidentals":          func(s *Setting) { s.Accidentals = math.NaN() },
		"negative counts":      func(s *Setting) { s.Counts = -1e9 },
		"negative accidentals": func(s *Setting) { s.Accidentals = -1e9 },
		"analyser":             func(s *Setting) { s.Alice[0] = complex(math.NaN(), 0) },
		"zero analyser":        func(s *Setting) { s.Bob = Analyser{} },
	} {
		counts := combinations("HVDR").exact(Werner(0.5), 100)
		spoil(&counts.Settings[3])
		if fit, err := counts.MaximumLikelihood(); err == nil {
			t.Errorf("%s: %+v", name, fit)
		}
	}
	counts := combinations("HVDR").exact(Werner(0), 100)
	counts.Settings[3].Exposure = -1
	_, err := counts.LinearInversion()
	expect(t, fmt.Sprint(err), "the setting H, R has numbers that cannot be: counts 25, accidentals 0, exposure -1; counts and accidentals are 0 or more, exposures above 0")
}
