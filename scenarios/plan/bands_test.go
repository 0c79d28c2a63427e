package plan

import (
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// reference draws a scenario with the deviations of uncertainFigures by a generator
// and a method of its own, normal numbers that are thrown again outside the
// range, and writes them into the fields by hand.
func reference(s *scenarios.Scenario, n int, use func(*scenarios.Scenario)) {
	random := rand.New(rand.NewPCG(77, 78))
	normal := func(value, sd, lo, hi float64) float64 {
		for {
			if x := value + sd*random.NormFloat64(); x >= lo && x <= hi {
				return x
			}
		}
	}
	c := s.Clone()
	for range n {
		c.Source.State.Figure = normal(0.86, 0.02, 0, 1)
		c.Arms[scenarios.Bob].FixedLossDB = normal(4.2, 0.2, 0, 300)
		c.Detectors[0].Efficiency = normal(0.2, 0.01, 1e-9, 1)
		c.Detectors[0].DarkCountsHz = normal(1200, 400, 0, 1e9)
		use(c)
	}
}

// TestBandsAgainstManyDraws holds every quantile against independent draws:
// below a quantile p of n draws lies a share of N others that differs from p by
// less than four standard errors, √(p(1-p)(1/n + 1/N)). With PAIRSPAN_SLOW=1
// there are 100,000 of them.
func TestBandsAgainstManyDraws(t *testing.T) {
	many := 4000
	if os.Getenv("PAIRSPAN_SLOW") == "1" {
		many = 100_000
	}
	s := read(t, uncertainFigures...)
	u := uncertain(t, s)
	a := newAsker(s)
	var worst, qber []float64
	bands := make([][]float64, bandPoints)
	kms := []int{0, 7, 20, 35, 50}
	held := map[int]keyrate.OperatingPoint{}
	for _, k := range kms {
		held[k] = a.at(float64(k), judged, nil).setting
	}
	atWorst, usual := a.at(6.2, judged, nil).setting, a.at(6.2, nominal, nil).setting
	reference(s, many, func(c *scenarios.Scenario) {
		ask := func(km float64, r role, p keyrate.OperatingPoint) keyrate.Rate {
			l := c.Link(km, a.members(r)[0])
			return l.Key(p)
		}
		worst = append(worst, ask(6.2, judged, atWorst).UsableBps)
		qber = append(qber, ask(6.2, nominal, usual).QBER[keyrate.KeyBasis])
		for _, k := range kms {
			bands[k] = append(bands[k], ask(float64(k), judged, held[k]).UsableBps)
		}
	})
	check := func(name string, q Quantiles, others []float64) {
		for _, row := range []struct{ p, at float64 }{{0.05, q.P05}, {0.5, q.P50}, {0.95, q.P95}} {
			below := 0.0
			for _, x := range others {
				if x < row.at {
					below++
				}
			}
			n := float64(len(others))
			if z := (below/n - row.p) / math.Sqrt(row.p*(1-row.p)*(1/n+1.0/2000)); math.Abs(z) > 4 {
				t.Errorf("%s: below quantile %v, %v, lies %v of the other draws: %.1f standard errors", name, row.p, row.at, below/n, z)
			}
		}
	}
	check("rate", u.UsableRate, worst)
	check("QBER", u.QBERKey, qber)
	for _, k := range kms {
		if u.Bands[k].DistanceKm != float64(k) {
			t.Fatalf("band %d stands at %v km", k, u.Bands[k].DistanceKm)
		}
		check("band", u.Bands[k].UsableRate, bands[k])
	}
}

// TestReachOfADraw: with window and pump stated, a draw's reach is that of the
// drawn scenario's own answer, to the last of ten halvings; also where the
// curve was asked to end before, and where the need is not met as installed.
func TestReachOfADraw(t *testing.T) {
	for _, row := range []struct {
		toKm    float64
		changes []set
	}{
		{60, nil},
		{5, nil},
		{60, []set{{"arms.bob.length_km", "45"}}},
		{60, []set{{"arms.bob.length_km", "6.2 +- 2"}, {"arms.bob.measured_loss_db", "2.9 +- 0.2"}}},
	} {
		s := read(t, append(slices.Concat(uncertainFigures, row.changes), set{"window_ps", "400"})...)
		a := newAsker(s)
		reachKm, _ := a.reach(judged, a.meets(a.at(s.DistanceKm(), judged, nil)))
		d := newDraws(a, inputs(s))
		way, err := a.newAlong(t.Context(), row.toKm, &reachKm)
		if err != nil {
			t.Fatal(err)
		}
		step := max(row.toKm/(bandPoints-1), (way.held[len(way.held)-1].km-row.toKm)/farPoints) / (1 << halvings)
		w, seen := d.drawer(), 0
		for i := range 20 {
			w.draw(i)
			got := way.reach(w, w.most([]held{way.installed}), func(k int) float64 {
				r := w.rate(way.held[k].km, way.held[k])
				return r.UsableBps
			})
			own := newAsker(w.own)
			want, reason := own.reach(judged, own.meets(own.at(w.own.DistanceKm(), judged, nil)))
			if math.IsInf(got, 0) {
				continue // beyond the curve, or a single place between two of its distances
			}
			seen++
			if reason != "" || got > want+1e-6 || got < want-step-1e-6 {
				t.Errorf("to %v km, draw %d: %v km, the answer %v km %s", row.toKm, i, got, want, reason)
			}
		}
		if seen < 15 {
			t.Errorf("to %v km only %d draws of 20 have a reach", row.toKm, seen)
		}
	}
}
