package plan

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"pairspan/sources"
)

// Odd cases, each of which once was, or could be, a division by zero, a false
// peak or a wrong answer.

func TestZeroLengthArm(t *testing.T) {
	c := filed(t, set{"arms.bob.length_km", "0"}, set{"arms.bob.connector_pairs", "0"}, set{"arms.alice.length_km", "0"})
	if c.Answer.Outcome != Met || c.Installed.DistanceKm != 0 || c.Installed.LossDB.Bob != 4.2 {
		t.Errorf("%s at %v km with %v dB", c.Answer.Outcome, c.Installed.DistanceKm, c.Installed.LossDB.Bob)
	}
}

func TestLengthenBoth(t *testing.T) {
	for _, row := range []struct{ alice, bob, shareAlice float64 }{{2, 6, 0.25}, {0, 0, 0.5}} {
		s := read(t, set{"arms.alice.length_km", figure(row.alice)}, set{"arms.bob.length_km", figure(row.bob)})
		s.Lengthen = "both"
		a := newAsker(s)
		if p := a.point(s.DistanceKm()); p.LengthKm != (PerArm{row.alice, row.bob}) || p.DistanceKm != row.alice+row.bob {
			t.Errorf("installed: %v at %v km", p.LengthKm, p.DistanceKm)
		}
		p := a.point(40)
		if math.Abs(p.LengthKm.Alice-40*row.shareAlice) > 1e-12 || math.Abs(p.LengthKm.Alice+p.LengthKm.Bob-40) > 1e-12 {
			t.Errorf("%v and %v km lengthened to 40: %v", row.alice, row.bob, p.LengthKm)
		}
	}
}

func TestTangleOfOne(t *testing.T) {
	c := filed(t, set{"source.state.tangle", "1"})
	b := c.Installed.Bounds
	if b.AtWorst.UsableRateBps != b.AtBest.UsableRateBps || c.Answer.Outcome != Met || c.QBERParts.State != 0 {
		t.Errorf("a perfect state is open: %+v", *b)
	}
}

func TestTangleOfZero(t *testing.T) {
	c := filed(t, set{"source.state.tangle", "0"})
	if c.Answer.Outcome != NoKey || *c.Answer.UsableRateBps != 0 || c.Answer.FirstInTheWay.Part != "state" {
		t.Errorf("%+v", c.Answer)
	}
}

func TestBrightestSource(t *testing.T) {
	c := filed(t, set{"source.max_pair_rate_hz", "1.0e+12"}, set{"source.pair_rate_hz", "1.0e+12"})
	if c.Answer.Outcome != NoKey || c.Installed.QBER.Key > 0.5 || !(c.Installed.LiveShare.Alice < 1e-3) {
		t.Errorf("%s, %+v", c.Answer.Outcome, c.Installed)
	}
}

// TestNoJitter: the coherence time is left, some 4.4 ps at 0.8 nm.
func TestNoJitter(t *testing.T) {
	c := filed(t, set{"detectors.free_running.jitter_fwhm_ps", "0"}, set{"arms.alice.length_km", "0"},
		set{"arms.bob.length_km", "0"})
	if w := *c.Installed.WindowPs; !(w > 4 && w < 27) {
		t.Errorf("a window of %v ps", w)
	}
}

// TestMixedArms: an active arm keeps its light together, and needs two detectors.
func TestMixedArms(t *testing.T) {
	active := set{"arms.alice.basis_choice", "active"}
	mixed, passive := filed(t, active, set{"arms.alice.detector", "nanowire"}), filed(t, set{"arms.alice.detector", "nanowire"})
	if mixed.Installed.DetectorsNeeded != (PerArmCount{2, 4}) || passive.Installed.DetectorsNeeded != (PerArmCount{4, 4}) {
		t.Errorf("detectors: %v", mixed.Installed.DetectorsNeeded)
	}
	// The same sifted rate but for dead time and accidentals, which are small here.
	if r := *mixed.Installed.SiftedBps / *passive.Installed.SiftedBps; math.Abs(r-1) > 0.02 {
		t.Errorf("sifted rates differ by a factor of %v", r)
	}
}

// TestCARTakenOut raises the rate, since several pairs count once.
func TestCARTakenOut(t *testing.T) {
	with, without := filed(t, set{"source.state.measured_car", "38"}), filed(t)
	if *with.Answer.UsableRateBps <= *without.Answer.UsableRateBps {
		t.Errorf("%v with, %v without", *with.Answer.UsableRateBps, *without.Answer.UsableRateBps)
	}
	e1, _ := sources.FromTangle(0.86).Errors(sources.Nominal)
	want := (e1 - 1.0/(2*39)) * 39 / 38 // e -> (e - 1/(2(CAR+1))) (CAR+1)/CAR
	if got := with.QBERParts.State; math.Abs(got-want) > 1e-15 {
		t.Errorf("state error %v, want %v", got, want)
	}
}

// TestPlanIsWhole holds on random links: the interval is in order, nothing is
// NaN or infinite (JSON would refuse), the answer agrees with its figures.
func TestPlanIsWhole(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		number := func(label string, lo, hi float64) string {
			return figure(math.Exp(rapid.Float64Range(math.Log(lo), math.Log(hi)).Draw(rt, label)))
		}
		changes := []set{
			{"source.pair_rate_hz", number("pairs", 1e3, 1e10)},
			{"source.state.tangle", figure(rapid.Float64Range(0, 1).Draw(rt, "tangle"))},
			{"arms.bob.length_km", number("length", 0.01, 400)},
			{"arms.bob.fixed_loss_db", number("loss", 0.1, 30)},
			{"detectors.free_running.efficiency", number("efficiency", 0.001, 1)},
			{"detectors.free_running.dark_counts_hz", number("dark", 0.1, 1e6)},
			{"detectors.free_running.dead_time_ns", number("dead", 0.1, 1e5)},
			{"key_basis_share", figure(rapid.Float64Range(0.5, 0.99).Draw(rt, "share"))},
			{"arms.alice.basis_choice", rapid.SampledFrom([]string{"active", "passive"}).Draw(rt, "choice")},
		}
		if rapid.Bool().Draw(rt, "pulsed") {
			changes[0] = set{"source.pulse_rate_hz", number("pulses", 1e6, 1e9)}
			changes = append(changes, set{"source.pairs_per_pulse", number("per pulse", 1e-5, 1)}, set{"source.schmidt_number", number("modes", 1, 20)})
		}
		if rapid.Bool().Draw(rt, "finite") {
			changes = append(changes, set{"finite_key", "{ sifted_bits_per_block: " + number("block", 1e4, 1e9) + ", epsilon_total: 1.0e-10 }"})
		}
		text := strings.Replace(base, "  max_pair_rate_hz: 2.0e+7\n", "", 1)
		c := answeredCase(parse(t, text, changes...))
		if _, err := json.Marshal(c); err != nil {
			rt.Fatal(err)
		}
		checkAnswer(rt, &c)
	})
}

func checkAnswer(t *rapid.T, c *Case) {
	a, b := &c.Answer, c.Installed.Bounds
	// 1e-4: each member has a window of its own, rounded to three digits
	if b.AtWorst.UsableRateBps > b.AtBest.UsableRateBps*(1+1e-4) || *c.Installed.UsableRateBps > b.AtBest.UsableRateBps*(1+1e-4) {
		t.Errorf("worst %v, nominal %v, best %v", b.AtWorst.UsableRateBps, *c.Installed.UsableRateBps, b.AtBest.UsableRateBps)
	}
	if b.AtWorst.UsableRateBps != *a.UsableRateBps {
		t.Errorf("judged %v, at worst %v", *a.UsableRateBps, b.AtWorst.UsableRateBps)
	}
	if (a.Outcome == Met) != (*a.UsableRateBps >= *a.NeedBps) || (a.Outcome == NoKey) != (b.AtBest.UsableRateBps == 0) {
		t.Errorf("%s with %v of %v, at best %v", a.Outcome, *a.UsableRateBps, *a.NeedBps, b.AtBest.UsableRateBps)
	}
	if a.MarginDB != nil && (*a.MarginDB >= 0) != (a.Outcome == Met) {
		t.Errorf("%s with a margin of %v dB", a.Outcome, *a.MarginDB)
	}
	if a.Sentence == "" || strings.Contains(a.Sentence, "NaN") || strings.Contains(a.Sentence, "Inf") {
		t.Errorf("%q", a.Sentence)
	}
}
