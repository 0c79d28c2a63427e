package plan

import (
	"fmt"
	"math"
	"runtime"
	"strings"
	"testing"
)

// market has detectors on offer: a cheap and noisy one, a quiet one
// that sees less, and one that needs a cryostat.
const market = `title: An invented market
source:
  pair_rate_hz: 4.0e+6
  state: { tangle: 0.9 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice: { length_km: 0.05, fixed_loss_db: 4.2, detector: noisy, misalignment_error: 0.005 }
  bob: { length_km: 6.2, fixed_loss_db: 4.2, detector: noisy, misalignment_error: 0.005 }
detectors:
  noisy: { efficiency: 0.25, dark_counts_hz: 6000, jitter_fwhm_ps: 200, dead_time_ns: 5000, price: 3000 }
  quiet: { efficiency: 0.15, dark_counts_hz: 60, jitter_fwhm_ps: 200, dead_time_ns: 5000, price: 4500.5 }
  cold: { efficiency: 0.85, dark_counts_hz: 100, jitter_fwhm_ps: 50, dead_time_ns: 50, price: 9000, site_price: 30000 }
window_ps: auto
need: { secret_rate_bps: 400, budget: 80000 }
distance: { points: 31, to_km: 150 }
compare:
  - { name: quiet, change: { arms.alice.detector: quiet, arms.bob.detector: quiet } }
  - { name: cold-bob, change: { arms.bob.detector: cold } }
  - { name: cold, change: { arms.alice.detector: cold, arms.bob.detector: cold } }
  - { name: switched, change: { arms.alice.basis_choice: active, arms.bob.basis_choice: active } }
`

// bought plans market with replacements of its text.
func bought(t testing.TB, replace ...string) (*Plan, []named) {
	t.Helper()
	s := parse(t, strings.NewReplacer(replace...).Replace(market))
	p, err := New(t.Context(), s, "test", nil)
	if err != nil {
		t.Fatal(err)
	}
	asked := []named{{"as filed", nil, newAsker(s)}}
	for _, c := range s.Compare {
		asked = append(asked, named{c.Name, c.Changes, newAsker(c.Scenario)})
	}
	return p, asked
}

// TestPiecesAndPrices by hand: four detectors an arm where the choice is
// passive, two where it is active, the site price once per end.
func TestPiecesAndPrices(t *testing.T) {
	p, _ := bought(t)
	for i, row := range []struct {
		name   string
		pieces PerArmCount
		price  float64
		within bool
	}{
		{"as filed", PerArmCount{4, 4}, 8 * 3000, true},
		{"quiet", PerArmCount{4, 4}, 8 * 4500.5, true},
		{"cold-bob", PerArmCount{4, 4}, 4*3000 + 4*9000 + 30000, true},
		{"cold", PerArmCount{4, 4}, 8*9000 + 2*30000, false},
		{"switched", PerArmCount{2, 2}, 4 * 3000, true},
	} {
		c := p.Buying.Costs[i]
		if c.Case != row.name || c.Pieces != row.pieces || *c.Price != row.price || *c.WithinBudget != row.within {
			t.Errorf("%s: %+v, price %v", row.name, c, *c.Price)
		}
		if ans := p.Cases[i].Answer; c.MeetsNeed != (ans.Outcome == Met) || *c.MarginDB != *ans.MarginDB {
			t.Errorf("%s: %+v of %s", row.name, c, ans.Outcome)
		}
	}
}

// TestCheapest holds the choice against the rates themselves.
func TestCheapest(t *testing.T) {
	for _, row := range []struct {
		need            string
		cheapest, spare string
		says            string
	}{
		{"400", "switched", "switched", "The cheapest case that meets the need is switched for 12000 (within the budget of 80000); it has 3 dB to spare."},
		{"1500", "switched", "as filed", "; with 3 dB to spare, as filed for 24000 (within the budget of 80000)."},
		{"20000", "cold", "cold", "is cold for 132000 (above the budget of 80000); it has"},
		{"1.0e+8", "", "", "No case that has a price meets the need."},
	} {
		p, _ := bought(t, "secret_rate_bps: 400", "secret_rate_bps: "+row.need)
		b := p.Buying
		if got := or(b.Cheapest) + "|" + or(b.CheapestSpare); got != row.cheapest+"|"+row.spare || !strings.Contains(b.Sentence, row.says) {
			var rates []string
			for _, c := range p.Cases {
				rates = append(rates, fmt.Sprint(c.Name, *c.Answer.UsableRateBps, *c.Answer.MarginDB))
			}
			t.Errorf("a need of %s: %s, %q; %v", row.need, got, b.Sentence, rates)
		}
	}
}

func or(s *string) string {
	if s == nil {
		return ""
	}
	return *s
}

// TestPricesMissing: no sum without every price, no buying without any.
func TestPricesMissing(t *testing.T) {
	p, _ := bought(t, ", price: 4500.5", "", ", budget: 80000", "")
	for i, c := range p.Buying.Costs {
		if (c.Price == nil) != (i == 1) || c.WithinBudget != nil {
			t.Errorf("%+v", c)
		}
	}
	if !strings.HasSuffix(p.Buying.Sentence, " Without a price: 1 of 5 cases.") {
		t.Errorf("%q", p.Buying.Sentence)
	}
	p, _ = bought(t, ", price: 3000", "", ", price: 4500.5", "", ", price: 9000, site_price: 30000", "")
	if p.Buying != nil {
		t.Errorf("%+v", p.Buying)
	}
}

// TestOvertakesPutBack: at the distance both cases make the same key; a little
// before, the one that is overtaken makes more, and a little beyond, the other.
func TestOvertakesPutBack(t *testing.T) {
	p, asked := bought(t)
	of := map[string]*asker{}
	for _, n := range asked {
		of[n.name] = n.asker
	}
	rate := func(name string, km float64) float64 { return of[name].at(km, judged, nil).rate.UsableBps }
	found := map[string]bool{}
	for _, o := range p.Buying.Overtakes {
		found[o.Case+" "+o.Overtakes] = true
		if x, y := rate(o.Case, o.DistanceKm), rate(o.Overtakes, o.DistanceKm); !(math.Abs(x/y-1) < 1e-4) {
			t.Errorf("%+v: %v and %v there", o, x, y)
		}
		if km := o.DistanceKm - 0.05; rate(o.Case, km) >= rate(o.Overtakes, km) {
			t.Errorf("%+v is ahead at %v km", o, km)
		}
		if km := o.DistanceKm + 0.05; rate(o.Case, km) <= rate(o.Overtakes, km) {
			t.Errorf("%+v is behind at %v km", o, km)
		}
	}
	if !found["quiet as filed"] {
		t.Errorf("quiet detectors never overtake noisy ones: %+v", p.Buying.Overtakes)
	}
}

// TestEveryCrossingIsFound walks along the curves of the pairs compared: where
// the order of two points differs, an overtaking stands between them.
func TestEveryCrossingIsFound(t *testing.T) {
	p, _ := bought(t)
	want := 0
	for _, pair := range pairings(p.Cases) {
		x, y := p.Cases[pair.one].Curve, p.Cases[pair.other].Curve
		for i := 1; i < len(x); i++ {
			before, after := judgedBps(&x[i-1])-judgedBps(&y[i-1]), judgedBps(&x[i])-judgedBps(&y[i])
			if before*after < 0 {
				want++
			}
		}
	}
	if got := len(p.Buying.Overtakes); got != want || want == 0 {
		t.Errorf("%d found, %d on the curves", got, want)
	}
}

// TestTurnsPutBack: with the figure in the file both cases make the same key,
// and beyond it, away from the one stated, the other case makes more.
func TestTurnsPutBack(t *testing.T) {
	seen := map[string]bool{}
	for _, replace := range [][]string{
		nil,
		{"arms.bob.detector: cold }", "arms.bob.detector: quiet }", "{ name: cold,", "{ name: dim,", "arms.alice.detector: cold, arms.bob.detector: cold", "arms.alice.detector: quiet"},
	} {
		p, asked := bought(t, replace...)
		of := map[string]named{}
		for _, n := range asked {
			of[n.name] = n
		}
		for _, turn := range p.Buying.Turns {
			seen[turn.Entry] = true
			rates := func(value float64) (ahead, other float64) {
				var r [2]float64
				for i, name := range []string{turn.Case, turn.Other} {
					s := of[name].s.Clone()
					at, err := s.Number(turn.Entry)
					if err != nil || *at != turn.Stated {
						t.Fatalf("%+v: %v", turn, err)
					}
					*at = value // every detector is the same in all cases here
					r[i] = newAsker(s).at(6.2, judged, nil).rate.UsableBps
				}
				return r[0], r[1]
			}
			if x, y := rates(turn.Stated); x <= y {
				t.Errorf("%+v: %v and %v as stated", turn, x, y)
			}
			if x, y := rates(turn.Value); !(math.Abs(x/y-1) < 1e-4) {
				t.Errorf("%+v: %v and %v there", turn, x, y)
			}
			if x, y := rates(turn.Value + (turn.Value-turn.Stated)*0.01); x >= y {
				t.Errorf("%+v: %v and %v beyond", turn, x, y)
			}
		}
	}
	for _, entry := range []string{"detectors.cold.efficiency", "detectors.cold.dead_time_ns", "detectors.cold.dark_counts_hz", "detectors.noisy.dark_counts_hz"} {
		if !seen[entry] {
			t.Errorf("no turn of %s among %v", entry, seen)
		}
	}
}

// TestFewPairsOfManyCases: 200 cases are not compared each with each.
func TestFewPairsOfManyCases(t *testing.T) {
	if n := len(pairings(make([]Case, 200))); n < 199 || n > 199+rankedPairs {
		t.Errorf("%d pairs of 200 cases", n)
	}
	if n := len(pairings(make([]Case, 1))); n != 0 {
		t.Errorf("%d pairs of one case", n)
	}
}

// TestTurning finds the places of functions that are known, in few steps.
func TestTurning(t *testing.T) {
	for _, row := range []struct {
		name     string
		from, to float64
		f        func(float64) float64
		want     float64
		most     int
	}{
		{"line", 0, 10, func(x float64) float64 { return x - 3 }, 3, 8},
		{"curve", 0, 10, func(x float64) float64 { return math.Expm1(x - 3) }, 3, 25},
		{"downwards", 10, 0, func(x float64) float64 { return 3 - x }, 3, 8},
		{"end of the key", 0, 10, func(x float64) float64 { return math.Log(1 / max(0, 3-x)) }, 2, 40},
		{"jump", 0, 10, func(x float64) float64 { return math.Copysign(1, x-3) }, 3, 80},
	} {
		calls := 0
		got := turning(row.from, row.to, 1e-6, func(x float64) float64 { calls++; return row.f(x) })
		if math.Abs(got-row.want) > 1e-6 || row.f(got) <= 0 || calls > row.most {
			t.Errorf("%s: %v after %d calls", row.name, got, calls)
		}
	}
}

// TestSameBuyingOnOneCoreAndTwo.
func TestSameBuyingOnOneCoreAndTwo(t *testing.T) {
	var texts [2]string
	for i := range texts {
		before := runtime.GOMAXPROCS(i + 1)
		p, _ := bought(t)
		texts[i] = fmt.Sprintf("%+v %+v %s", p.Buying.Overtakes, p.Buying.Turns, p.Buying.Sentence)
		runtime.GOMAXPROCS(before)
	}
	if texts[0] != texts[1] {
		t.Errorf("one core: %s\ntwo: %s", texts[0], texts[1])
	}
}

// BenchmarkBuying is five cases: prices, overtakes and turns.
func BenchmarkBuying(b *testing.B) {
	p, asked := bought(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := buying(b.Context(), asked, p.Cases); err != nil {
			b.Fatal(err)
		}
	}
}
