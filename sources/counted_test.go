package sources

import (
	"math"
	"strings"
	"testing"
)

// counts returns what a source of b pairs per second gives.
func counts(b, etaA, etaB, w, ua, ub float64) Counted {
	return Counted{
		SinglesHz: [2]float64{etaA * (b + ua), etaB * (b + ub)}, UnpairedHz: [2]float64{ua, ub},
		CoincidencesHz: etaA * etaB * w * b, WindowShare: w,
	}
}

// The source that made the counts is found again, as long as pairs outnumber
// the unpaired light.
func TestCountedFindsTheSource(t *testing.T) {
	d := normalDrawer(50)
	for range 2000 {
		b := math.Pow(10, 3+5*d.share())
		ua := b * 2 * d.share()
		ub := b * min(0.95*b/ua, 2) * d.share() // ua ub < b²
		etaA, etaB, w := 0.001+0.99*d.share(), 0.001+0.99*d.share(), 0.1+0.9*d.share()
		if d() > 0 {
			ua, ub = 0, 0
		}
		c := counts(b, etaA, etaB, w, ua, ub)
		rate, err := c.PairRateHz()
		if err != nil {
			t.Fatal(err)
		}
		near(t, "pair rate over the true one", rate/b, 1, 1e-11)
		gotA, gotB, err := c.ArmEfficiencies()
		if err != nil {
			t.Fatal(err)
		}
		near(t, "Alice's efficiency over the true one", gotA/etaA, 1, 1e-11)
		near(t, "Bob's efficiency over the true one", gotB/etaB, 1, 1e-11)
	}
}

// 1e5 and 2e5 singles with 1e4 coincidences, all in the window: 2e6 pairs,
// 0.05 and 0.1.
func TestCountedByHand(t *testing.T) {
	c := Counted{SinglesHz: [2]float64{1e5, 2e5}, CoincidencesHz: 1e4, WindowShare: 1}
	b, err := c.PairRateHz()
	alice, bob, err2 := c.ArmEfficiencies()
	if err != nil || err2 != nil {
		t.Fatal(err, err2)
	}
	near(t, "pair rate", b, 2e6, 1e-6)
	near(t, "Alice", alice, 0.05, 1e-16)
	near(t, "Bob", bob, 0.1, 1e-16)
	c.WindowShare = 0.5 // half of the pairs missed: half the rate, twice the efficiency
	b, _ = c.PairRateHz()
	alice, _, _ = c.ArmEfficiencies()
	near(t, "pair rate with half a window", b, 1e6, 1e-6)
	near(t, "Alice with half a window", alice, 0.1, 1e-16)
}

func TestCountedErrors(t *testing.T) {
	good := Counted{SinglesHz: [2]float64{1e5, 2e5}, CoincidencesHz: 1e4, WindowShare: 0.8}
	for _, row := range []struct {
		name string
		edit func(c *Counted)
		want string
	}{
		{"no singles", func(c *Counted) { c.SinglesHz[0] = -20 }, "Alice's singles come to -20 per second once dead time and noise are taken out; they must be above 0"},
		{"NaN singles", func(c *Counted) { c.SinglesHz[1] = math.NaN() }, "Bob's singles come to NaN"},
		{"no coincidences", func(c *Counted) { c.CoincidencesHz = 0 }, "the coincidences come to 0 per second once accidentals are taken out; they must be above 0"},
		{"window", func(c *Counted) { c.WindowShare = 1.2 }, "the window holds a share of 1.2 of the pairs; it must be above 0 and at most 1"},
		{"no window", func(c *Counted) { c.WindowShare = 0 }, "the window holds a share of 0 of the pairs"},
		{"unpaired", func(c *Counted) { c.UnpairedHz[1] = -1 }, "Bob's unpaired light is -1 per second; it must be 0 or more"},
		{"all unpaired", func(c *Counted) { c.UnpairedHz[0] = 1.7e6 }, "no pair rate fits the counts with 1.7e+06 and 0 unpaired photons per second (Alice, Bob): singles, coincidences and window share allow up to 1.6e+06 per second in one arm alone"},
		{"all unpaired in one arm", func(c *Counted) { c.UnpairedHz[0] = 1.6e6 }, "no pair rate fits"},
		{"unpaired in both arms", func(c *Counted) { c.UnpairedHz = [2]float64{5e5, 5e5} }, "no pair rate fits"},
	} {
		c := good
		row.edit(&c)
		_, err := c.PairRateHz()
		_, _, err2 := c.ArmEfficiencies()
		if err == nil || err2 == nil || !strings.Contains(err.Error(), row.want) {
			t.Errorf("%s: %v, %v\nwant %s", row.name, err, err2, row.want)
		}
	}
	c := good
	c.SinglesHz = [2]float64{1e5, 1e4}
	_, _, err := c.ArmEfficiencies()
	if err == nil || !strings.HasPrefix(err.Error(), "the efficiency of Alice's arm comes to 1.25, above 1 by 0.25: the coincidences are too many for Bob's singles") {
		t.Errorf("efficiency above 1: %v", err)
	}
}
