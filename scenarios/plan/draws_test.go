package plan

import (
	"math"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/sources"
)

// drawn makes the first draw of a scenario with changes.
func drawn(t *testing.T, changes ...set) (*draws, *drawer) {
	t.Helper()
	s := read(t, changes...)
	d := newDraws(newAsker(s), inputs(s))
	w := d.drawer()
	w.draw(0)
	return d, w
}

// wide are deviations as wide as their entries, some at the end of the range.
var wide = []set{
	{"source.state.tangle", "1 +- 0.4"},
	{"source.pair_rate_hz", "2.0e+6 +- 1.0e+7"},
	{"detectors.free_running.efficiency", "0.2 +- 0.9"},
	{"detectors.free_running.dark_counts_hz", "0 +- 500"},
	{"detectors.free_running.afterpulsing", "0.02 +- 0.9"},
	{"arms.bob.length_km", "6.2 +- 100"},
	{"arms.bob.fixed_loss_db", "0 +- 2"},
	{"arms.bob.misalignment_error", "0.005 +- 0.3"},
	{"error_correction_f", "1 +- 0.1"},
	{"duty_cycle", "1 +- 0.2"},
}

// TestDrawsStayInRange draws from deviations far wider than the ranges.
func TestDrawsStayInRange(t *testing.T) {
	d, w := drawn(t, wide...)
	if len(d.inputs) != len(wide) {
		t.Fatalf("%d inputs of %d", len(d.inputs), len(wide))
	}
	for i := range 2000 {
		w.draw(i)
		for j, in := range d.inputs {
			if x := *w.at[j]; !(x >= in.Lo && x <= in.Hi) {
				t.Fatalf("draw %d: %s is %v, outside %v to %v", i, in.entry, x, in.Lo, in.Hi)
			}
		}
		if r := w.rate(w.own.DistanceKm(), d.hold(6.2, judged)[0]); !(r.UsableBps >= 0) || math.IsInf(r.UsableBps, 0) {
			t.Fatalf("draw %d: %v bit/s", i, r.UsableBps)
		}
	}
}

// TestTruncatedNormal integrates the normal density between the ends of the
// range by the trapezium rule: below at(u) lies the share u of it.
func TestTruncatedNormal(t *testing.T) {
	for _, row := range []struct{ value, sd float64 }{{0.5, 0.01}, {0.5, 0.5}, {1, 0.2}, {0, 3}, {0.98, 0.02}} {
		in, err := newInput("source.state.tangle", row.value, row.sd)
		if err != nil {
			t.Fatal(err)
		}
		area := func(to float64) (sum float64) {
			from := max(0, row.value-9*row.sd)
			to = min(to, row.value+9*row.sd)
			const steps = 20000
			for k := range steps + 1 {
				z := (from + (to-from)*float64(k)/steps - row.value) / row.sd
				weight := 1.0
				if k == 0 || k == steps {
					weight = 0.5
				}
				sum += weight * math.Exp(-z*z/2)
			}
			return sum * (to - from) / steps
		}
		for _, u := range []float64{0.001, 0.05, 0.5, 0.95, 0.999} {
			if got := area(in.at(u)) / area(1); math.Abs(got-u) > 1e-6 {
				t.Errorf("%v +- %v: below the quantile of %v lies %v", row.value, row.sd, u, got)
			}
		}
	}
}

// TestRandomNumbersOfDraws: the first two numbers of consecutive draws are
// uniform and uncorrelated, within five standard errors.
func TestRandomNumbersOfDraws(t *testing.T) {
	const n = 100_000
	_, w := drawn(t)
	var first, second, square, product, lag, last float64
	for i := range n {
		w.draw(i)
		u, v := w.uniform()-0.5, w.uniform()-0.5
		first, second, square, product, lag = first+u, second+v, square+u*u, product+u*v, lag+u*last
		last = u
	}
	const (
		sd       = 0.28867513459481287 // 1/√12
		sdSquare = 0.07453559924999299 // √(1/80 - 1/144)
	)
	for _, row := range []struct {
		name    string
		sum, sd float64
	}{
		{"first", first, sd},
		{"second", second, sd},
		{"variance", square - n*sd*sd, sdSquare},
		{"correlation", product, sd * sd},
		{"correlation of draws", lag, sd * sd},
	} {
		if z := row.sum / (row.sd * math.Sqrt(n)); math.Abs(z) > 5 {
			t.Errorf("%s: %v standard errors off", row.name, z)
		}
	}
}

// TestDetectorOfBothArmsIsOneDraw.
func TestDetectorOfBothArmsIsOneDraw(t *testing.T) {
	_, w := drawn(t, set{"detectors.free_running.efficiency", "0.2 +- 0.02"})
	l := w.own.Link(6.2, sources.AtWorst)
	alice, bob := l.Arms[keyrate.Alice].Detector, l.Arms[keyrate.Bob].Detector
	if alice != bob || alice.Efficiency == 0.2 {
		t.Errorf("%v and %v", alice, bob)
	}
}

// TestHeldSettings: what the plan searched stays in every draw, what the file
// states is what the draw makes of it.
func TestHeldSettings(t *testing.T) {
	at := func(w *drawer) keyrate.Rate { return w.rate(6.2, w.hold(6.2, judged)[0]) }
	searched := read(t)
	p := newAsker(searched).hold(6.2, judged)[0].setting

	_, w := drawn(t, set{"source.pair_rate_hz", "2.0e+6 +- 2.0e+5"})
	r := at(w)
	if math.Abs(r.SlotsHz*p.WindowS-1) > 1e-12 {
		t.Errorf("the window was searched again: %v slots/s", r.SlotsHz)
	}
	if pairs := r.PairsPerSlot * r.SlotsHz; math.Abs(pairs/w.own.Source.PairRateHz-1) > 1e-12 || w.own.Source.PairRateHz == 2e6 {
		t.Errorf("%v pairs/s of the %v drawn", pairs, w.own.Source.PairRateHz)
	}

	_, w = drawn(t, set{"source.pair_rate_hz", "auto"}, set{"source.max_pair_rate_hz", "2.0e+7 +- 2.0e+6"})
	held := w.hold(6.2, judged)[0].setting.PairRateHz
	if r := at(w); math.Abs(r.PairsPerSlot*r.SlotsHz/held-1) > 1e-12 {
		t.Errorf("a searched pump of %v was not held: %v pairs/s", held, r.PairsPerSlot*r.SlotsHz)
	}

	_, w = drawn(t, set{"source.pulse_rate_hz", "1.0e+8 +- 1.0e+6"}, set{"source.pairs_per_pulse", "auto"}, set{"source.max_pairs_per_pulse", "0.1"})
	held = w.hold(6.2, judged)[0].setting.PairRateHz / 1e8
	if r := at(w); math.Abs(r.PairsPerSlot/held-1) > 1e-12 || r.SlotsHz == 1e8 {
		t.Errorf("%v pairs per pulse, %v held", r.PairsPerSlot, held)
	}

	_, w = drawn(t, set{"key_basis_share", "0.7 +- 0.05"})
	if w.stated.KeyShare == 0.7 || w.stated.KeyShare != w.own.KeyBasisShare {
		t.Errorf("a share of %v was drawn as %v", w.own.KeyBasisShare, w.stated.KeyShare)
	}
}

const countedSource = `  pair_rate_hz: 2.0e+6
  max_pair_rate_hz: 2.0e+7
`

// TestCountsThatCannotBeAreDrawnAgain: deviations so wide that many counts
// would need better detectors than there are.
func TestCountsThatCannotBeAreDrawnAgain(t *testing.T) {
	counted := `  counted:
    singles_hz: { alice: 40000 +- 10000, bob: 40000 +- 10000 }
    coincidences_hz: 3000 +- 3000
    window_ps: 1000
    background_hz: { alice: 1200, bob: 1200 }
    detector: { alice: free_running, bob: free_running }
`
	s := parse(t, strings.Replace(base, countedSource, counted, 1))
	d := newDraws(newAsker(s), inputs(s))
	w := d.drawer()
	again := 0
	for i := range 500 {
		w.draw(i)
		if e, err := w.own.Emission(); err != nil || e.PairRateHz != w.stated.PairRateHz {
			t.Fatalf("draw %d: %v pairs/s, %v", i, w.stated.PairRateHz, err)
		}
		first := d.drawer()
		first.random.Seed(1, uint64(i))
		if *w.at[0] != d.inputs[0].at(first.uniform()) {
			again++
		}
	}
	if again < 50 || again > 450 {
		t.Errorf("%d of 500 were drawn again", again)
	}
	w.restore()
	if want := newAsker(s).setting; w.stated != want {
		t.Errorf("restored to %v, stated %v", w.stated, want)
	}
}

// TestWavelengthBeyondTheBand: a class's attenuation has no figure beyond its
// bands, and must not fall to nothing there.
func TestWavelengthBeyondTheBand(t *testing.T) {
	_, w := drawn(t, set{"source.wavelength_nm", "{ alice: 1550, bob: 1564 +- 20 }"}, set{"arms.bob.length_km", "50"})
	want := w.s.Link(50, sources.AtWorst).Arms[keyrate.Bob].Transmittance
	beyond := 0
	for i := range 100 {
		w.draw(i)
		if w.own.Source.WavelengthNm[keyrate.Bob] > 1565 {
			beyond++
		}
		if got := w.own.Link(50, sources.AtWorst).Arms[keyrate.Bob].Transmittance; got != want {
			t.Fatalf("at %v nm a transmittance of %v", w.own.Source.WavelengthNm[keyrate.Bob], got)
		}
	}
	if beyond == 0 {
		t.Error("no draw went beyond the band")
	}
}

// TestQuantile by hand.
func TestQuantile(t *testing.T) {
	sorted := []float64{0, 10, 20, 40, 80}
	for _, row := range []struct{ p, want float64 }{{0, 0}, {0.25, 10}, {0.5, 20}, {0.05, 2}, {0.95, 72}, {1, 80}} {
		if got := quantile(sorted, row.p); math.Abs(got-row.want) > 1e-12 {
			t.Errorf("quantile %v: %v, want %v", row.p, got, row.want)
		}
	}
	inf := math.Inf(1)
	if q := reaches([]float64{inf, 3, 5, -inf, 4}); q == nil || q.P05 != nil || *q.P50 != 4 || q.P95 != nil {
		t.Errorf("reaches without some: %+v", q)
	}
	if q := reaches([]float64{inf, inf}); q != nil {
		t.Errorf("no reach: %+v", q)
	}
}
