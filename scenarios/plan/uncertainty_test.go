package plan

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"strings"
	"sync/atomic"
	"testing"

	"pairspan/scenarios"
)

// uncertainFigures are deviations as they are stated in practice.
var uncertainFigures = []set{
	{"source.state.tangle", "0.86 +- 0.02"},
	{"arms.bob.fixed_loss_db", "4.2 +- 0.2"},
	{"detectors.free_running.efficiency", "0.2 +- 0.01"},
	{"detectors.free_running.dark_counts_hz", "1200 +- 400"},
	{"distance.to_km", "60"},
}

// uncertain is the uncertainty of a scenario up to 60 km.
func uncertain(t testing.TB, s *scenarios.Scenario) *Uncertainty {
	t.Helper()
	c := answeredCase(s)
	u, err := newAsker(s).uncertainty(t.Context(), &c, 60, func() {})
	if err != nil {
		t.Fatal(err)
	}
	return u
}

// TestFirstOrderAgreesWithDraws for small deviations: the squared correlation
// of n draws is within four standard errors, 2r(1-r²)/√n (+1/n), of the share.
func TestFirstOrderAgreesWithDraws(t *testing.T) {
	u := uncertain(t, read(t,
		set{"source.state.tangle", "0.86 +- 0.002"},
		set{"source.pair_rate_hz", "2.0e+6 +- 2.0e+4"},
		set{"arms.bob.fixed_loss_db", "4.2 +- 0.04"},
		set{"detectors.free_running.efficiency", "0.2 +- 0.001"},
		set{"detectors.free_running.dark_counts_hz", "1200 +- 120"},
		set{"uncertainty.draws", "20000"}))
	sum := 0.0
	for _, s := range u.Shares {
		sum += s.FirstOrder
		r, n := math.Sqrt(s.ByDraws), 20000.0
		if tolerance := 4*(2*r*(1-r*r)/math.Sqrt(n)+1/n) + 1e-3; math.Abs(s.FirstOrder-s.ByDraws) > tolerance {
			t.Errorf("%s: first order %v, by draws %v, tolerance %v", s.Entry, s.FirstOrder, s.ByDraws, tolerance)
		}
		if s.FirstOrder < 0.01 {
			t.Errorf("%s: a share of %v tests nothing", s.Entry, s.FirstOrder)
		}
	}
	if math.Abs(sum-1) > 1e-12 {
		t.Errorf("the shares add up to %v", sum)
	}
	if !slices.IsSortedFunc(u.Shares, func(x, y Share) int { return int(math.Copysign(1, y.FirstOrder-x.FirstOrder)) }) {
		t.Errorf("not the greatest first: %v", u.Shares)
	}
}

// TestFirstOrderIsElasticity holds the share of two inputs against (elasticity
// x relative deviation)² from quotients of rates.
func TestFirstOrderIsElasticity(t *testing.T) {
	s := read(t, set{"window_ps", "400"}, set{"detectors.free_running.efficiency", "0.2 +- 0.002"}, set{"source.state.tangle", "0.86 +- 0.003"})
	at := func(efficiency, tangle float64) float64 {
		c := s.Clone()
		c.Detectors[0].Efficiency, c.Source.State.Figure = efficiency, tangle
		return newAsker(c).at(6.2, judged, nil).rate.UsableBps
	}
	elasticity := func(up, down float64) float64 { return math.Log(up/down) / math.Log(1.001/0.999) }
	e := elasticity(at(0.2*1.001, 0.86), at(0.2*0.999, 0.86)) * 0.002 / 0.2
	c := elasticity(at(0.2, 0.86*1.001), at(0.2, 0.86*0.999)) * 0.003 / 0.86
	want := map[string]float64{"detectors.free_running.efficiency": e * e / (e*e + c*c), "source.state.tangle": c * c / (e*e + c*c)}
	for _, share := range uncertain(t, s).Shares {
		if math.Abs(share.FirstOrder-want[share.Entry]) > 1e-4 {
			t.Errorf("%s: %v, want %v", share.Entry, share.FirstOrder, want[share.Entry])
		}
	}
}

// TestChanceMet is sure where the need is far off, and a half where the link
// as stated meets it exactly and the deviation is small.
func TestChanceMet(t *testing.T) {
	s := read(t, set{"arms.bob.fixed_loss_db", "4.2 +- 0.02"})
	rate := newAsker(s).at(6.2, judged, nil).rate.UsableBps
	for _, row := range []struct{ need, from, to float64 }{
		{rate / 2, 1, 1}, {rate * 2, 0, 0}, {rate, 0.5 - 4*0.5/math.Sqrt(2000), 0.5 + 4*0.5/math.Sqrt(2000)},
	} {
		s.NeedBps = row.need
		if got := *uncertain(t, s).ChanceMet; got < row.from || got > row.to {
			t.Errorf("a need of %v where %v is made: chance %v", row.need, rate, got)
		}
	}
	s.NeedBps = math.NaN()
	if u := uncertain(t, s); u.ChanceMet != nil || u.ReachKm == nil {
		t.Errorf("without a need: chance %v, reach %v", u.ChanceMet, u.ReachKm)
	}
}

// TestStateAndStatisticsStayApart: the draws are all at worst, so that their
// median is the rate at worst and no band reaches the best state.
func TestStateAndStatisticsStayApart(t *testing.T) {
	s := read(t, set{"arms.bob.fixed_loss_db", "4.2 +- 0.02"})
	c := answeredCase(s)
	u := uncertain(t, s)
	if worst := *c.Answer.UsableRateBps; math.Abs(u.UsableRate.P50/worst-1) > 1e-3 || u.UsableRate.P95 >= c.Answer.AtBest.UsableRateBps {
		t.Errorf("draws %+v, at worst %v, at best %v", u.UsableRate, worst, c.Answer.AtBest.UsableRateBps)
	}
	if math.Abs(u.QBERKey.P50/c.Installed.QBER.Key-1) > 1e-3 || math.Abs(*u.ReachKm.P50/(*c.Answer.ReachKm)-1) > 1e-2 {
		t.Errorf("QBER %+v of %v, reach %v of %v", u.QBERKey, c.Installed.QBER.Key, *u.ReachKm.P50, *c.Answer.ReachKm)
	}
}

// TestWithoutDeviations: a tangle leaves an interval, a state that is given or
// unknown nothing to say.
func TestWithoutDeviations(t *testing.T) {
	u := uncertain(t, read(t))
	if u.Draws != 0 || u.ChanceMet != nil || len(u.Bands)+len(u.Shares) != 0 || u.UsableRate.P05 != u.UsableRate.P95 || len(u.MeasureNext) == 0 {
		t.Errorf("%+v", u)
	}
	if u := uncertain(t, read(t, set{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"})); u != nil {
		t.Errorf("a given state: %+v", u)
	}
	if u := uncertain(t, parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1), uncertainFigures[1:]...)); u != nil {
		t.Errorf("an unknown state: %+v", u)
	}
}

// TestUncertaintySentences: what the figures beside them say, never rounded to
// all or none.
func TestUncertaintySentences(t *testing.T) {
	given := set{"source.state", "{ visibility: { hv: 0.97 +- 0.01, da: 0.94 } }"}
	free := parse(t, strings.Replace(base, "need: { secret_rate_bps: 100 }\n", "", 1), uncertainFigures...)
	for _, row := range []struct {
		u      *Uncertainty
		prefix string
	}{
		{uncertain(t, read(t)), "No standard deviation is stated; what a tangle of 0.86 leaves open is "},
		{uncertain(t, read(t, uncertainFigures...)), "With the deviations stated the need is met in all 2000 draws (seed 1), each judged at worst; most of the doubt comes from source.state.tangle ("},
		{uncertain(t, read(t, given)), "With the deviations stated the need is met in all 2000 draws (seed 1); most of the doubt comes from source.state.visibility.hv (100 %)."},
		{uncertain(t, free), "With the deviations stated 90 % of 2000 draws (seed 1), each judged at worst, lie between "},
		{uncertain(t, read(t, append(uncertainFigures, set{"arms.bob.length_km", "200"})...)), "With the deviations stated the need is met in none of 2000 draws (seed 1), each judged at worst."},
	} {
		if !strings.HasPrefix(row.u.Sentence, row.prefix) {
			t.Errorf("%q\nwant %q", row.u.Sentence, row.prefix)
		}
	}
	for share, want := range map[float64]string{0.9996: "more than 99.9 % of 2000 draws", 0.0004: "less than 0.1 % of 2000 draws", 0.9325: "93.2 % of 2000 draws"} {
		if got := ofDraws(share, 2000); got != want {
			t.Errorf("%v: %q", share, got)
		}
	}
}

// TestSameDrawsOnOneCoreAndTwo.
func TestSameDrawsOnOneCoreAndTwo(t *testing.T) {
	var texts [2][]byte
	for i := range texts {
		before := runtime.GOMAXPROCS(i + 1)
		fromCounts, err := New(t.Context(), counted(t), "", nil)
		if err != nil {
			t.Fatal(err)
		}
		texts[i], _ = json.Marshal([]*Plan{planned(t, uncertainFigures...), fromCounts})
		runtime.GOMAXPROCS(before)
	}
	if string(texts[0]) != string(texts[1]) || len(texts[0]) == 0 {
		t.Error("one core and two make different plans")
	}
	one, other := uncertain(t, read(t, uncertainFigures...)), uncertain(t, read(t, append(uncertainFigures, set{"uncertainty.seed", "2"})...))
	if one.UsableRate == other.UsableRate {
		t.Error("the seed changes nothing")
	}
}

// TestInterruptedDraws ends with the context.
func TestInterruptedDraws(t *testing.T) {
	s := read(t, append(uncertainFigures, set{"uncertainty.draws", "100000"})...)
	ctx, cancel := context.WithCancel(t.Context())
	var most atomic.Int64
	_, err := New(ctx, s, "test", func(done, _ int) {
		if most.Store(int64(done)); done > 200 {
			cancel()
		}
	})
	if !errors.Is(err, context.Canceled) || most.Load() > 50_000 {
		t.Errorf("%v after %d", err, most.Load())
	}
}

// TestProgressOfDraws: one total from the first to the last, and it is reached.
func TestProgressOfDraws(t *testing.T) {
	s := read(t, append(uncertainFigures, set{"uncertainty.draws", "100"})...)
	const want = 21 + 100 + 21 // distances, draws, distances of the limits
	var told [want + 1]atomic.Int64
	_, err := New(t.Context(), s, "test", func(done, total int) {
		if total != want || done < 1 || done > want {
			t.Errorf("%d of %d", done, total)
			return
		}
		told[done].Add(1)
	})
	for done := 1; done <= want; done++ {
		if told[done].Load() != 1 || err != nil {
			t.Fatalf("%d was told %d times, %v", done, told[done].Load(), err)
		}
	}
}

// TestUncertaintyIsWhole holds on random links: the quantiles are in order,
// shares lie in 0 to 1, and JSON takes every figure.
func TestUncertaintyIsWhole(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	between := func(lo, hi float64) float64 { return lo + (hi-lo)*random.Float64() }
	uncertainly := func(value float64) string {
		return figure(value) + " +- " + figure(value*math.Exp(between(-6, -0.5)))
	}
	kinds := [][]set{
		{{"finite_key", "{ sifted_bits_per_block: 1.0e+5, epsilon_total: 1.0e-10 }"}, {"window_ps", "500"}},
		{{"source.pair_rate_hz", "auto"}, {"window_ps", "500"}},
		{{"key_basis_share", "0.6 +- 0.1"}},
		{{"source.pulse_rate_hz", "1.0e+8"}, {"source.pairs_per_pulse", "0.02 +- 0.01"}},
	}
	for i := range 32 {
		checkUncertainty(t, uncertain(t, read(t, append(kinds[i%len(kinds)],
			set{"source.state.tangle", uncertainly(between(0.3, 1))},
			set{"arms.bob.length_km", uncertainly(math.Exp(between(-3, 6)))},
			set{"detectors.free_running.efficiency", uncertainly(between(0.01, 0.7))},
			set{"detectors.free_running.dead_time_ns", uncertainly(math.Exp(between(0, 10)))},
			set{"uncertainty.draws", "100"})...)))
	}
}

func checkUncertainty(t *testing.T, u *Uncertainty) {
	t.Helper()
	if _, err := json.Marshal(u); err != nil {
		t.Error(err)
	}
	for _, q := range []Quantiles{u.UsableRate, u.QBERKey, u.Bands[30].UsableRate} {
		if !(q.P05 >= 0 && q.P05 <= q.P50 && q.P50 <= q.P95) {
			t.Errorf("%+v", q)
		}
	}
	for _, s := range u.Shares {
		if !(s.FirstOrder >= 0 && s.FirstOrder <= 1 && s.ByDraws >= 0 && s.ByDraws <= 1+1e-12) {
			t.Errorf("%+v", s)
		}
	}
	for _, m := range u.MeasureNext {
		if !(m.SpreadThen < m.SpreadNow) {
			t.Errorf("%+v", m)
		}
	}
	if strings.Contains(u.Sentence, "NaN") || strings.Contains(u.Sentence, "Inf") {
		t.Errorf("%q", u.Sentence)
	}
}

// BenchmarkUncertainty is 2000 draws of 61 distances, and what to measure next.
func BenchmarkUncertainty(b *testing.B) {
	s := read(b, uncertainFigures...)
	a, c := newAsker(s), answeredCase(s)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.uncertainty(b.Context(), &c, 60, func() {}); err != nil {
			b.Fatal(err)
		}
	}
}
