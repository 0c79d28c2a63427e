package plan

import (
	"math"
	"slices"
	"strings"
	"testing"
)

func names(all []Measurement) (n []string) {
	for _, m := range all {
		n = append(n, m.Name)
	}
	return n
}

// TestMeasureNext makes one doubt after the other the greatest: what settles it
// ranks first.
func TestMeasureNext(t *testing.T) {
	for _, row := range []struct {
		first   string
		entry   string
		changes []set
	}{
		{twoBases, "source.state.tangle", []set{{"arms.bob.fixed_loss_db", "4.2 +- 0.1"}}},
		{lossThere, "arms.bob.measured_loss_db", []set{{"source.state.tangle", "0.99"}, {"arms.bob.measured_loss_db", "2.9 +- 1.5"}, {"detectors.free_running.efficiency", "0.2 +- 0.005"}}},
		{calibration, "detectors.free_running.efficiency", []set{{"source.state.tangle", "0.99"}, {"arms.bob.fixed_loss_db", "4.2 +- 0.1"}, {"detectors.free_running.efficiency", "0.2 +- 0.05"}}},
		{atSource, "source.pair_rate_hz", []set{{"source.state.tangle", "0.99"}, {"source.pair_rate_hz", "2.0e+6 +- 8.0e+5"}, {"arms.bob.fixed_loss_db", "4.2 +- 0.1"}}},
	} {
		all := uncertain(t, read(t, row.changes...)).MeasureNext
		if len(all) == 0 || all[0].Name != row.first || !slices.Contains(all[0].Entries, row.entry) {
			t.Errorf("want %s first: %v", row.first, names(all))
			continue
		}
		if !slices.IsSortedFunc(all, func(x, y Measurement) int { return int(math.Copysign(1, x.SpreadThen-y.SpreadThen)) }) {
			t.Errorf("not in order: %+v", all)
		}
		if !strings.Contains(all[0].Sentence, bare(all[0].SpreadThen)) {
			t.Errorf("%q", all[0].Sentence)
		}
	}
}

// TestTwoVisibilitiesCloseTheInterval: without any deviation the spread is that
// of the interval, and what two visibilities leave is their counting alone:
// elasticities of the rate in either visibility times √((1-V²)/10000), 3.29 of
// them from 5 to 95 % of a normal distribution.
func TestTwoVisibilitiesCloseTheInterval(t *testing.T) {
	c := answeredCase(read(t))
	m := uncertain(t, read(t)).MeasureNext[0]
	if want := c.Answer.AtBest.UsableRateBps - *c.Answer.UsableRateBps; m.Name != twoBases || m.SpreadNow != want {
		t.Errorf("%s narrows %v; the interval is %v", m.Name, m.SpreadNow, want)
	}
	v := 1 - 2*(1-math.Sqrt(0.86))/3 // Werner's state: e = (1-C)/3
	rate := func(hv, da float64) float64 {
		s := read(t, set{"source.state", "{ visibility: { hv: " + figure(hv) + ", da: " + figure(da) + " } }"})
		return newAsker(s).at(6.2, judged, nil).rate.UsableBps
	}
	const step = 1e-3
	slopeHV := (rate(v+step, v) - rate(v-step, v)) / (2 * step)
	slopeDA := (rate(v, v+step) - rate(v, v-step)) / (2 * step)
	want := 2 * 1.6449 * math.Hypot(slopeHV, slopeDA) * math.Sqrt((1-v*v)/10000)
	// a quantile of 2000 draws is good to some 0.047 standard deviations
	if tolerance := 4 * 1.5 * 0.047 / (2 * 1.6449); math.Abs(m.SpreadThen/want-1) > tolerance {
		t.Errorf("%v remain, want %v within %v", m.SpreadThen, want, tolerance)
	}
}

// TestSettledIsAsStated: what a calibration leaves is what the same scenario
// has without that deviation. The deviation settled is the last in file order,
// so that the others keep their random numbers.
func TestSettledIsAsStated(t *testing.T) {
	with := []set{{"source.state.tangle", "0.86 +- 0.02"}, {"arms.bob.fixed_loss_db", "4.2 +- 0.2"}, {"detectors.free_running.efficiency", "0.2 +- 0.02"}}
	s := read(t, with[:2]...)
	d := newDraws(newAsker(s), inputs(s))
	want, err := d.spread(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range uncertain(t, read(t, with...)).MeasureNext {
		if m.Name == calibration && m.SpreadThen != want {
			t.Errorf("%v, want %v", m.SpreadThen, want)
		}
	}
}

// TestNothingToMeasure: doubt that no measurement settles, and detectors that
// no arm uses, are not listed.
func TestNothingToMeasure(t *testing.T) {
	given := set{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}
	if all := uncertain(t, read(t, given, set{"duty_cycle", "0.9 +- 0.05"}, set{"detectors.nanowire.efficiency", "0.85 +- 0.05"})).MeasureNext; len(all) != 0 {
		t.Errorf("%v", names(all))
	}
	precise := set{"source.state", "{ visibility: { hv: 0.97 +- 0.0001, da: 0.94 +- 0.0001 } }"}
	if all := uncertain(t, read(t, precise)).MeasureNext; len(all) != 0 {
		t.Errorf("better known than by counting: %+v", all)
	}
}

// TestVisibilityDeviation is that of a binomial: the sum over all counts of
// (2k/N - 1 - v)² with the chance of each.
func TestVisibilityDeviation(t *testing.T) {
	for _, v := range []float64{0, 0.5, 0.95} {
		const n = float64(countsPerBasis)
		p, sum := (1+v)/2, 0.0
		lnAll, _ := math.Lgamma(n + 1)
		for k := range countsPerBasis + 1 {
			x := float64(k)
			a, _ := math.Lgamma(x + 1)
			b, _ := math.Lgamma(n - x + 1)
			off := 2*x/n - 1 - v
			sum += off * off * math.Exp(lnAll-a-b+x*math.Log(p)+(n-x)*math.Log(1-p))
		}
		if got := visibilitySD(v); math.Abs(got/math.Sqrt(sum)-1) > 1e-6 {
			t.Errorf("v = %v: %v, want %v", v, got, math.Sqrt(sum))
		}
	}
	if got := visibilitySD(1); !(got > 0 && got < visibilitySD(0.999)) {
		t.Errorf("v = 1: %v", got)
	}
}
