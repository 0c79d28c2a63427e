package plan

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// TestServesOnRandomLinks: whatever the link, the answers are numbers or
// reasons, each value serves when it is put back, and nothing is NaN or
// infinite, which JSON would refuse.
func TestServesOnRandomLinks(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		number := func(label string, lo, hi float64) string {
			return figure(math.Exp(rapid.Float64Range(math.Log(lo), math.Log(hi)).Draw(rt, label)))
		}
		changes := []set{
			{"source.pair_rate_hz", number("pairs", 1e3, 1e10)},
			{"source.state", rapid.SampledFrom([]string{
				"{ tangle: 0.9 }", "{ tangle: 0.7, measured_car: 30 }", "{ tangle: 0.4 }", "{ tangle: 1 }", "{ fidelity: 0.97 }", "{ visibility: { hv: 0.98, da: 0.95 } }",
			}).Draw(rt, "state")},
			{"arms.bob.length_km", number("length", 0.01, 200)},
			{"arms.bob.fixed_loss_db", number("loss", 0.1, 30)},
			{"detectors.free_running.efficiency", number("efficiency", 0.01, 1)},
			{"detectors.free_running.dark_counts_hz", number("dark", 0.1, 1e5)},
			{"detectors.free_running.dead_time_ns", number("dead", 0.1, 1e5)},
			{"detectors.free_running.afterpulsing", rapid.SampledFrom([]string{"0", "0.05", "0.5"}).Draw(rt, "afterpulsing")},
			{"key_basis_share", rapid.SampledFrom([]string{"0.5", "0.8"}).Draw(rt, "share")},
			{"window_ps", rapid.SampledFrom([]string{"400", "auto"}).Draw(rt, "window")},
		}
		if rapid.Bool().Draw(rt, "pulsed") {
			changes[0] = set{"source.pulse_rate_hz", number("pulses", 1e6, 1e9)}
			changes = append(changes, set{"source.pairs_per_pulse", number("per pulse", 1e-4, 1)})
		}
		if rapid.IntRange(0, 3).Draw(rt, "finite") == 0 {
			changes = append(changes, set{"finite_key", "{ sifted_bits_per_block: " + number("block", 1e4, 1e9) + ", epsilon_total: 1.0e-10 }"})
		}
		text := strings.Replace(base, "  max_pair_rate_hz: 2.0e+7\n", "", 1)
		text = strings.Replace(text, "secret_rate_bps: 100", "secret_rate_bps: "+number("need", 0.01, 1e4), 1)
		a := newAsker(parse(t, text, changes...))
		c := Case{}
		if err := a.addServes(t.Context(), &c, 80); err != nil {
			rt.Fatal(err)
		}
		if _, err := json.Marshal(c); err != nil {
			rt.Fatal(err)
		}
		for _, v := range c.Serves {
			if (v.Value == nil) == (v.Reason == nil) {
				rt.Errorf("%s: %v, %v", v.Entry, v.Value, v.Reason)
			}
			stated := a.meets(a.judged())
			if v.Reason != nil && (*v.Reason == everyValueDoes && !stated || *v.Reason == noValueDoes && stated) {
				rt.Errorf("%s: %s, and yet as described the need is met: %v", v.Entry, *v.Reason, stated)
			}
			if v.Value == nil {
				continue
			}
			trial := a.trialOf(v.Entry)
			if got := trial.with(*v.Value, judged); !trial.meets(got) {
				rt.Errorf("%s: %v gives %v", v.Entry, *v.Value, got.rate.UsableBps)
			}
			if stated && (v.Bound == least && *v.Value > *v.Stated || v.Bound == most && *v.Value < *v.Stated) {
				rt.Errorf("%s %s: %v, and yet %v serves", v.Bound, v.Entry, *v.Value, *v.Stated)
			}
		}
		for _, n := range c.TangleNeeded {
			if n.AtWorst != nil && !(*n.AtBest <= *n.Nominal+1e-6 && *n.Nominal <= *n.AtWorst+1e-6) {
				rt.Errorf("at %v km: %v, %v, %v", n.DistanceKm, *n.AtBest, *n.Nominal, *n.AtWorst)
			}
		}
	})
}
