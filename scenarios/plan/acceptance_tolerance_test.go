package plan

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"pairspan/keyrate"
)

// TestCountingTolerance counts for a minute with dice: CAR and QBER scatter as
// the sheet says.
func TestCountingTolerance(t *testing.T) {
	s := read(t, set{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}, set{"window_ps", "9000"}, set{"source.pair_rate_hz", "2.0e+7"})
	d := newAsker(s).firstDay()
	src := rand.NewPCG(1, 2)
	count := func(hz float64) float64 { return distuv.Poisson{Lambda: hz * 60, Src: src}.Rand() }
	const runs = 20_000
	var sums, squares sheet
	for range runs {
		var x sheet
		for _, r := range []reading{singles, coincidences, accidentals, sifted} {
			x[r] = count(d.expected[r]) / 60
		}
		x[car] = x[coincidences]/x[accidentals] - 1
		for b, r := range basisReading {
			wrong, right := count(d.rate.SiftedHz[b]*d.expected[r]), count(d.rate.SiftedHz[b]*(1-d.expected[r]))
			x[r] = wrong / (wrong + right)
		}
		for r := range x {
			sums[r], squares[r] = sums[r]+x[r], squares[r]+x[r]*x[r]
		}
	}
	for _, r := range []reading{singles, coincidences, accidentals, sifted, car, qberKey, qberCheck} {
		mean := sums[r] / runs
		want := 3 * math.Sqrt(squares[r]/runs-mean*mean)
		if got := (d.to[r] - d.from[r]) / 2; math.Abs(got-want) > 0.03*want {
			t.Errorf("%s: tolerance %v, counted %v", r.row().figure, got, want)
		}
	}
}

// TestStatedTolerance: singles without noise and dead time are proportional to
// the pair rate, and fall by 10^(-x/10) with loss. One of two efficiencies is
// one draw for both arms.
func TestStatedTolerance(t *testing.T) {
	still := []set{{"detectors.free_running.dark_counts_hz", "0"}, {"detectors.free_running.dead_time_ns", "0"}, {"window_ps", "600"}}
	rel := func(changes ...set) (alice, bob, pairs float64) {
		d := newAsker(read(t, append(changes, still...)...)).firstDay()
		sd := d.statedSD()
		return sd[singles] / d.expected[singles], sd[singles.of(keyrate.Bob)] / d.expected[singles.of(keyrate.Bob)],
			sd[coincidences] / d.expected[coincidences]
	}
	near := func(got, want float64) bool { return math.Abs(got-want) < 2e-3*want+1e-9 }
	a, b, c := rel(set{"source.pair_rate_hz", "2.0e+6 +- 1.0e+5"})
	if !near(a, 0.05) || !near(b, 0.05) || !near(c, 0.05) {
		t.Errorf("5 %% of the pair rate: %v, %v, %v", a, b, c)
	}
	ln := math.Ln10 / 10
	a, b, c = rel(set{"arms.alice.fixed_loss_db", "4.2 +- 0.3"}, set{"arms.bob.fixed_loss_db", "4.2 +- 0.4"})
	if !near(a, 0.3*ln) || !near(b, 0.4*ln) || !near(c, 0.5*ln) {
		t.Errorf("losses of 0.3 and 0.4 dB: %v, %v, %v", a, b, c)
	}
	a, _, c = rel(set{"detectors.free_running.efficiency", "0.2 +- 0.01"})
	if !near(a, 0.05) || !near(c, 0.1) {
		t.Errorf("5 %% of the efficiency of both: %v, %v", a, c)
	}
}

// TestToleranceAtTheEdge: a figure at the end of its range has a derivative
// from one side.
func TestToleranceAtTheEdge(t *testing.T) {
	d := newAsker(read(t, set{"source.state", "{ visibility: { hv: 1 +- 0.02, da: 0.95 } }"}, set{"window_ps", "600"})).firstDay()
	if sd := d.statedSD()[qberKey]; math.Abs(sd-0.01) > 1e-3 {
		t.Errorf("the visibility moves the QBER by %v, want half of 0.02", sd)
	}
}

// TestMembersTolerance: a tangle alone leaves the QBER open from at best to at
// worst; the tolerance holds all of that.
func TestMembersTolerance(t *testing.T) {
	s := read(t, set{"window_ps", "600"})
	a := newAsker(s)
	out := a.acceptance()
	for _, m := range allMembers {
		l := s.Link(s.DistanceKm(), m)
		rate := l.Key(a.setting)
		for b, figure := range []string{"qber_key", "qber_check"} {
			if r := sheetRowOf(t, out, figure); rate.QBER[b] <= r.From && r.From > 0 || rate.QBER[b] >= r.To {
				t.Errorf("member %v: %s %v is outside %v to %v", m, figure, rate.QBER[b], r.From, r.To)
			}
		}
	}
}

// TestToleranceMoves with what is to be expected: a hundredth of the counts
// scatters by a tenth; error rates keep theirs.
func TestToleranceMoves(t *testing.T) {
	d := newAsker(read(t, set{"window_ps", "600"}, set{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"})).firstDay()
	for _, r := range []reading{singles, coincidences} {
		from, to := d.tolerated(r, d.expected[r]/100)
		if got, want := (to-from)/2, 3*math.Sqrt(d.expected[r]/60)/10; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s: %v, want %v", r.row().figure, got, want)
		}
	}
	if from, to := d.tolerated(qberKey, 0.01); math.Abs(to-from-(d.to[qberKey]-d.from[qberKey])) > 1e-15 {
		t.Errorf("QBER: %v to %v", from, to)
	}
}
