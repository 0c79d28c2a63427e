package plan

import (
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/scenarios"
	"pairspan/sources"
)

// counted is base with a state from counts whose errors are drawn, and changes.
func counted(t *testing.T, changes ...set) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read(scenarios.Examples, "x.yaml", []byte(strings.Replace(base, "state: { tangle: 0.86 }", "state: { counts: tomography.csv }", 1)+"uncertainty: { tomography: repeated }\n"))
	if err != nil {
		t.Fatal(err)
	}
	var all []scenarios.Change
	for _, c := range changes {
		all = append(all, scenarios.Change(c))
	}
	if len(all) == 0 {
		return s
	}
	if s, err = s.With(all...); err != nil {
		t.Fatal(err)
	}
	return s
}

// TestCountsAreDrawn: the usable rate scatters as it does when the tomography
// itself is repeated and each fitted matrix is put into the link, with other
// random numbers.
func TestCountsAreDrawn(t *testing.T) {
	s := counted(t)
	p, err := New(t.Context(), s, "", nil)
	if err != nil {
		t.Fatal(err)
	}
	filed := &p.Cases[0]
	u := filed.Uncertainty
	if u == nil || u.Draws != 2000 || len(u.Shares) != 1 || u.Shares[0].Entry != "source.state.counts" || u.Shares[0].FirstOrder != 1 || u.Shares[0].ByDraws < 0.99 {
		t.Fatalf("%+v", u)
	}
	a := newAsker(s)
	setting := a.at(s.DistanceKm(), judged, nil).setting
	fit, err := s.Source.Counts.MaximumLikelihood()
	if err != nil {
		t.Fatal(err)
	}
	sd, err := s.Source.Counts.Bootstrap(t.Context(), fit, 600, 99, func(rho sources.DensityMatrix) []float64 {
		c := s.Clone()
		c.Source.State = sources.FromDensityMatrix(rho)
		l := c.Link(c.DistanceKm(), sources.Nominal)
		r := l.Key(setting)
		return []float64{r.UsableBps}
	}, nil)
	if err != nil {
		t.Fatal(err)
	}
	// 5 to 95 % of a normal distribution are 3.29 standard deviations wide; 200
	// repetitions tell them to 10 %.
	const width = 3.29
	if got := (u.UsableRate.P95 - u.UsableRate.P05) / width; math.Abs(got/sd[0]-1) > 0.15 {
		t.Errorf("the draws scatter by %v bit/s, repeated tomographies by %v", got, sd[0])
	}
	if off := u.UsableRate.P50 - *filed.Answer.UsableRateBps; math.Abs(off) > 0.4*sd[0] {
		t.Errorf("the middle of the draws is %v bit/s off the answer, of a deviation of %v", off, sd[0])
	}
}

// TestCountsBesideDeviations: each takes its share, and both add up.
func TestCountsBesideDeviations(t *testing.T) {
	s := counted(t, set{"arms.bob.fixed_loss_db", "4.2 +- 0.3"})
	p, err := New(t.Context(), s, "", nil)
	if err != nil {
		t.Fatal(err)
	}
	u, first, draws := p.Cases[0].Uncertainty, 0.0, 0.0
	for _, share := range u.Shares {
		if share.FirstOrder < 0.05 {
			t.Errorf("%+v", share)
		}
		first, draws = first+share.FirstOrder, draws+share.ByDraws
	}
	if len(u.Shares) != 2 || math.Abs(first-1) > 1e-12 || math.Abs(draws-1) > 0.1 {
		t.Errorf("%+v", u.Shares)
	}
	if !strings.Contains(u.Sentence, "deviations stated and the counting errors of the tomography") {
		t.Error(u.Sentence)
	}
}

// TestFirstDayOfCounts: what the QBER may be on the first day is wider where
// the state is known by counts than where it is the same without error.
func TestFirstDayOfCounts(t *testing.T) {
	width := func(s *scenarios.Scenario) float64 {
		p, err := New(t.Context(), s, "", nil)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range p.Cases[0].Acceptance.Rows {
			if r.Figure == "qber_key" {
				return r.To - r.From
			}
		}
		t.Fatal("no QBER")
		return 0
	}
	s := counted(t)
	exact := s.Clone()
	exact.Source.Counts = nil
	if with, without := width(s), width(exact); !(with > 1.2*without) {
		t.Errorf("%v with the counting errors, %v without", with, without)
	}
}

// TestCountsAsFitted: unless the scenario asks for it nothing is drawn.
func TestCountsAsFitted(t *testing.T) {
	p, err := New(t.Context(), counted(t, set{"uncertainty.tomography", "as_fitted"}), "", nil)
	if err != nil || p.Cases[0].Uncertainty != nil {
		t.Errorf("%v, %+v", err, p.Cases[0].Uncertainty)
	}
}

// TestFewCounts cannot be repeated: then nothing is known of their error, and
// that is said.
func TestFewCounts(t *testing.T) {
	var text strings.Builder
	text.WriteString("alice,bob,counts\n")
	for _, a := range "HVDR" {
		for _, b := range "HVDR" {
			n := "0"
			if a == b && a != 'R' {
				n = "1"
			}
			text.WriteString(string(a) + "," + string(b) + "," + n + "\n")
		}
	}
	s, err := scenarios.Read(fstest.MapFS{"few.csv": {Data: []byte(text.String())}}, "x.yaml",
		[]byte(strings.Replace(base, "state: { tangle: 0.86 }", "state: { counts: few.csv }", 1)+"uncertainty: { tomography: repeated }\n"))
	if err != nil {
		t.Fatal(err)
	}
	p, err := New(t.Context(), s, "", nil)
	if err != nil {
		t.Fatal(err)
	}
	if w := warningOf(p, "tomography-not-repeated", "uncertainty.tomography"); w == nil || p.Cases[0].Uncertainty != nil {
		t.Errorf("%+v, %+v", p.Warnings, p.Cases[0].Uncertainty)
	}
}
