package plan

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"os"
	"runtime"
	"strconv"
	"strings"
	"testing"

	"pairspan/scenarios"
)

var update = flag.Bool("update", false, "pin the golden files anew")

// pinned compares with a golden file.
func pinned(t *testing.T, name, got string) {
	t.Helper()
	file := "testdata/" + name
	if *update {
		if err := os.WriteFile(file, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s is pinned as:\n%s\nbut it is:\n%s", name, want, got)
	}
}

func figure(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// asked are scenarios that between them have every outcome.
var asked = []struct {
	name    string
	outcome Outcome
	changes []set
	edit    [2]string // of the text, for what no change can do
}{
	{"met", Met, nil, [2]string{}},
	{"met, given", Met, []set{{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}}, [2]string{}},
	{"met, finite", Met, []set{{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}}, [2]string{}},
	{"met if nominal", MetIfNominal, nil, [2]string{"secret_rate_bps: 100", "secret_rate_bps: 900"}},
	{"met if best", MetIfBest, nil, [2]string{"secret_rate_bps: 100", "secret_rate_bps: 1000"}},
	{"not met", NotMet, nil, [2]string{"secret_rate_bps: 100", "secret_rate_bps: 1200"}},
	{"not met, given", NotMet, []set{{"source.state", "{ visibility: { hv: 0.9, da: 0.9 } }"}}, [2]string{"secret_rate_bps: 100", "secret_rate_bps: 1200"}},
	{"not met, out of reach", NotMet, nil, [2]string{"secret_rate_bps: 100", "secret_rate_bps: 1.0e+9"}},
	{"no key, noise", NoKey, []set{{"arms.bob.length_km", "110"}}, [2]string{}},
	{"no key, block", NoKey, []set{{"finite_key", "{ sifted_bits_per_block: 1000, epsilon_total: 1.0e-10 }"}}, [2]string{}},
	{"no key, bases apart", NoKey, []set{{"source.state", "{ visibility: { hv: 0.9, da: 0.2 } }"}}, [2]string{}},
	{"no need", NoNeed, nil, [2]string{"need: { secret_rate_bps: 100 }\n", ""}},
	{"no need, not for sure", NoNeed, []set{{"source.state.tangle", "0.5"}}, [2]string{"need: { secret_rate_bps: 100 }\n", ""}},
	{"unknown", StateUnknown, nil, [2]string{"  state: { tangle: 0.86 }\n", ""}},
	{"unknown, no need", StateUnknown, []set{}, [2]string{"  state: { tangle: 0.86 }\n", ""}},
	{"unknown, out of reach", StateUnknown, []set{{"arms.bob.length_km", "200"}}, [2]string{"  state: { tangle: 0.86 }\n", ""}},
}

// TestOutcomes holds every outcome, and pins the sentences that say them.
func TestOutcomes(t *testing.T) {
	var b strings.Builder
	seen := map[Outcome]bool{}
	for _, a := range asked {
		s := parse(t, strings.Replace(base, a.edit[0], a.edit[1], 1), a.changes...)
		c := answeredCase(s)
		if c.Answer.Outcome != a.outcome {
			t.Errorf("%s: %s, want %s", a.name, c.Answer.Outcome, a.outcome)
		}
		seen[c.Answer.Outcome] = true
		fmt.Fprintf(&b, "%s: %s\n    %s\n    %s\n", a.name, c.Answer.Outcome, c.Answer.Sentence, c.Answer.RestsOn)
	}
	if len(seen) != 7 {
		t.Errorf("outcomes seen: %v", seen)
	}
	pinned(t, "sentences.txt", b.String())
}

// answeredCase answers a scenario without its curve.
func answeredCase(s *scenarios.Scenario) Case {
	return named{scenarios.FiledName, nil, newAsker(s)}.answered()
}

// TestMarginPutBack adds the margin as a loss: the need is just met with it,
// and no longer with a thousandth of a dB more.
func TestMarginPutBack(t *testing.T) {
	for _, changes := range [][]set{
		nil,
		{{"arms.alice.detector", "nanowire"}, {"arms.bob.detector", "nanowire"}},
		{{"distance.lengthen", "both"}},
		{{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}},
		{{"arms.bob.length_km", "45"}}, // not met: negative
	} {
		s := parse(t, base, dropDistance(changes)...)
		s.Lengthen = scenarios.LengthenBob
		if len(changes) == 1 && changes[0].Entry == "distance.lengthen" {
			s.Lengthen = scenarios.LengthenBoth
		}
		margin := *answeredCase(s).Answer.MarginDB
		for _, step := range []struct {
			db  float64
			met bool
		}{{margin, true}, {margin + 1e-3, false}} {
			c := s.Clone()
			for i, share := range s.Shares() {
				c.Arms[i].FixedLossDB += share * step.db
			}
			if a := newAsker(c); a.meets(a.at(c.DistanceKm(), judged, nil)) != step.met {
				t.Errorf("%v: a loss of %v dB added: met is %v", changes, step.db, !step.met)
			}
		}
	}
}

func dropDistance(changes []set) (kept []set) {
	for _, c := range changes {
		if !strings.HasPrefix(c.Entry, "distance.") {
			kept = append(kept, c)
		}
	}
	return kept
}

// TestReachPutBack plans the link at its own reach, from nearer and from beyond.
func TestReachPutBack(t *testing.T) {
	for _, km := range []float64{6.2, 80} {
		s := read(t, set{Entry: "arms.bob.length_km", Value: figure(km)})
		reach := *answeredCase(s).Answer.ReachKm
		for _, step := range []struct {
			km  float64
			met bool
		}{{reach, true}, {reach + 1e-3, false}} {
			at := read(t, set{Entry: "arms.bob.length_km", Value: figure(step.km)})
			if got := answeredCase(at).Answer.Outcome == Met; got != step.met {
				t.Errorf("reach %v from %v km: at %v km met is %v", reach, km, step.km, got)
			}
		}
	}
}

// TestLeastTangle puts the least tangles back: the need is met at worst, and
// at best, from there on.
func TestLeastTangle(t *testing.T) {
	a := answeredCase(parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1))).Answer
	for _, row := range []struct {
		tangle float64
		want   map[Outcome]bool
	}{
		{*a.LeastTangle + 1e-6, map[Outcome]bool{Met: true}},
		{*a.LeastTangle - 1e-6, map[Outcome]bool{MetIfNominal: true}},
		{*a.LeastTangleAtBest + 1e-6, map[Outcome]bool{MetIfBest: true}},
		{*a.LeastTangleAtBest - 1e-6, map[Outcome]bool{NotMet: true, NoKey: true}},
	} {
		if got := filed(t, set{Entry: "source.state.tangle", Value: figure(row.tangle)}).Answer.Outcome; !row.want[got] {
			t.Errorf("a tangle of %v: %s", row.tangle, got)
		}
	}
}

// TestSearchesThatFindNothing names the reasons.
func TestSearchesThatFindNothing(t *testing.T) {
	reason := func(s *string) string {
		if s == nil {
			return ""
		}
		return *s
	}
	near := filed(t, set{Entry: "arms.bob.loss_db_per_km", Value: "0"}, set{Entry: "arms.bob.dispersion_ps_per_nm_km", Value: "0"},
		set{Entry: "arms.bob.pmd_ps_per_sqrt_km", Value: "0"}).Answer
	if near.ReachKm != nil || reason(near.ReachReason) != beyondSearch || near.MarginAs.Km != nil {
		t.Errorf("fibre without loss: reach %v, %v, %v", near.ReachKm, near.ReachReason, near.MarginAs)
	}
	far := answeredCase(parse(t, strings.Replace(base, "secret_rate_bps: 100", "secret_rate_bps: 1.0e+9", 1))).Answer
	if reason(far.MarginReason) != noLossHelps || reason(far.ReachReason) != notAtZeroKm || far.MarginAs != nil {
		t.Errorf("a need out of reach: %v, %v", far.MarginReason, far.ReachReason)
	}
}

// TestCancellingDispersion: where the wavelengths lie on both sides of the
// zero, the spread shrinks with Bob's length at first and the reach is found
// beyond it.
func TestCancellingDispersion(t *testing.T) {
	s := read(t,
		set{Entry: "source.wavelength_nm", Value: "{ alice: 1550, bob: 1550 }"},
		set{Entry: "arms.alice.length_km", Value: "10"},
		set{Entry: "arms.alice.dispersion_ps_per_nm_km", Value: "-170"},
		set{Entry: "arms.bob.dispersion_ps_per_nm_km", Value: "170"},
		set{Entry: "arms.bob.detector", Value: "nanowire"}, set{Entry: "arms.alice.detector", Value: "nanowire"})
	at := func(km float64) float64 { return s.Spread(km) }
	if !(at(10) < at(6.2)/3 && at(10) < at(14)/3) {
		t.Fatalf("spreads %v, %v, %v: nothing cancels", at(6.2), at(10), at(14))
	}
	if step := s.SearchStepKm(); step > 0.5 {
		t.Errorf("steps of %v km may pass over the place where dispersion cancels", step)
	}
}

// TestInTheWay exaggerates one part after the other of a link that is good
// in all of them, with its pump at the ceiling.
func TestInTheWay(t *testing.T) {
	good := []set{
		{"arms.alice.detector", "nanowire"},
		{"arms.bob.detector", "nanowire"},
		{"arms.alice.fixed_loss_db", "1"},
		{"arms.bob.fixed_loss_db", "1"},
		{"source.state.tangle", "0.98"},
		{"source.max_pair_rate_hz", "2.0e+6"},
	}
	for _, row := range []struct {
		part    string
		changes []set
	}{
		{"state", []set{{"source.state.tangle", "0.65"}}},
		{"alignment", []set{{"arms.alice.misalignment_error", "0.04"}, {"arms.bob.misalignment_error", "0.03"}}},
		{"coupling", []set{{"arms.alice.fixed_loss_db", "20"}}},
		{"detectors", []set{{"detectors.nanowire.dead_time_ns", "100000"}}},
		{"dark_counts", []set{{"detectors.nanowire.dark_counts_hz", "2.0e+7"}, {"detectors.nanowire.dead_time_ns", "0"}}},
		{"outside_light", []set{{"arms.bob.background_counts_hz", "1.0e+8"}, {"detectors.nanowire.dead_time_ns", "0"}}},
		{"timing", []set{{"clock_jitter_fwhm_ps", "50000"}}},
		{"pump", []set{{"source.max_pair_rate_hz", "2.0e+8"}}},
	} {
		a := filed(t, append(good, row.changes...)...).Answer
		if a.FirstInTheWay == nil || a.FirstInTheWay.Part != row.part {
			t.Errorf("%s: first in the way is %v of %v", row.part, a.FirstInTheWay, factors(a.Parts))
		}
	}
}

func factors(parts []PartFactor) string {
	var b strings.Builder
	for _, p := range parts {
		fmt.Fprintf(&b, " %s %v", p.Part, *p.Factor)
	}
	return b.String()
}

// TestFibreInTheWay: the fibre is named only where it alone meets the need.
func TestFibreInTheWay(t *testing.T) {
	long := []set{{"arms.bob.length_km", "400"}, {"detectors.free_running.dead_time_ns", "0"}, {"detectors.free_running.dark_counts_hz", "100"}}
	if a := filed(t, long...).Answer; a.FirstInTheWay == nil || a.FirstInTheWay.Part != "fibre" || a.FirstInTheWay.Factor != nil {
		t.Errorf("at 400 km: %v", a.FirstInTheWay)
	}
	if a := filed(t).Answer; strings.Contains(fmt.Sprint(a.Parts), "fibre") {
		t.Errorf("the need is met, and yet %v", a.Parts)
	}
}

// TestQBERPartsAddUp to the nominal QBER of the key basis.
func TestQBERPartsAddUp(t *testing.T) {
	c := filed(t, set{Entry: "arms.bob.background_counts_hz", Value: "500"}, set{Entry: "detectors.free_running.afterpulsing", Value: "0.02"})
	p := c.QBERParts
	sum := p.State + p.Alignment + p.MultiPair + p.DetectorNoise + p.OutsideLight
	if math.Abs(sum-c.Installed.QBER.Key) > 1e-15 || p.OutsideLight <= 0 || p.DetectorNoise <= 0 {
		t.Errorf("%+v add up to %v, the QBER is %v", *p, sum, c.Installed.QBER.Key)
	}
}

// TestSameBytesOnOneCoreAndTwo.
func TestSameBytesOnOneCoreAndTwo(t *testing.T) {
	var texts [2][]byte
	for i := range texts {
		before := runtime.GOMAXPROCS(i + 1)
		b, err := json.Marshal(planned(t, set{Entry: "distance.points", Value: "61"}))
		runtime.GOMAXPROCS(before)
		if err != nil {
			t.Fatal(err)
		}
		texts[i] = b
	}
	if !bytes.Equal(texts[0], texts[1]) {
		t.Error("the number of cores changes the plan")
	}
}
