package scenarios

import (
	"fmt"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

const threeDetectors = `  a: { efficiency: 0.3, dark_counts_hz: 1, jitter_fwhm_ps: 50, dead_time_ns: 30 }
  b: { efficiency: 0.6, dark_counts_hz: 1, jitter_fwhm_ps: 50, dead_time_ns: 30 }
`

func names(s *Scenario) string {
	var names []string
	for _, c := range s.Compare {
		names = append(names, c.Name)
	}
	return strings.Join(names, "|")
}

// Three detectors make nine pairs: one is as filed, one is listed before.
func TestEveryDetector(t *testing.T) {
	s := mustRead(t, errBase+threeDetectors+`compare:
  - { change: { arms.bob.detector: b } }
  - { name: better, change: { arms.bob.detector: b, duty_cycle: 0.5 } }
  - { every_detector: true }
  - { name: last, change: { arms: { alice: { length_km: 0, fixed_loss_db: 1, detector: a }, bob: { length_km: 1, fixed_loss_db: 1, detector: b } } } }
`)
	want := "arms.bob.detector=b|better|gated+a|a+gated|a+a|a+b|b+gated|b+a|b+b|last"
	if got := names(s); got != want {
		t.Errorf("got %s", got)
	}
	for _, c := range s.Compare[2:9] {
		if pair := c.Scenario.Arms[Alice].Detector + "+" + c.Scenario.Arms[Bob].Detector; pair != c.Name {
			t.Errorf("%s has %s", c.Name, pair)
		}
		if diff := cmp.Diff([]Change{{"arms.alice.detector", c.Scenario.Arms[Alice].Detector}, {"arms.bob.detector", c.Scenario.Arms[Bob].Detector}}, c.Changes); diff != "" {
			t.Error(diff)
		}
	}
}

// A compared case is the scenario that With makes of the same changes; what
// it does not change stays, and it compares nothing itself.
func TestCasesAreChanges(t *testing.T) {
	filed := replaced(t, "tangle: 0.86", "tangle: 0.86 +- 0.02") + threeDetectors + "need: { secret_rate_bps: 100 }\norigins: { arms.bob.length_km: as built }\n"
	plain := mustRead(t, filed)
	s := mustRead(t, filed+`compare:
  - name: one
    change: { arms.bob.length_km: 12 +- 1, source.state: { visibility: { hv: 0.9, da: 0.8 } } }
  - name: two
    change:
      source.pulse_rate_hz: 1.0e+8
      source.pairs_per_pulse: 0.01
`)
	for i, c := range s.Compare {
		want, err := plain.With(c.Changes...)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(want, c.Scenario, sameScenario, cmpopts.IgnoreFields(Scenario{}, "Inputs")); diff != "" {
			t.Errorf("case %d: %s", i, diff)
		}
		if len(c.Scenario.Compare) > 0 || c.Scenario.NeedBps != 100 || len(c.Scenario.Origins) != 1 {
			t.Errorf("case %d: %+v", i, c.Scenario)
		}
	}
	want := []Change{{"arms.bob.length_km", "12 +- 1"}, {"source.state", "{ visibility: { hv: 0.9, da: 0.8 } }"}}
	if diff := cmp.Diff(want, s.Compare[0].Changes); diff != "" {
		t.Error(diff)
	}
}

func TestNumberOfCasesIsBounded(t *testing.T) {
	cases := func(n int) string {
		var b strings.Builder
		b.WriteString(errBase + "compare:\n")
		for i := range n {
			fmt.Fprintf(&b, "  - { change: { arms.bob.length_km: %d } }\n", i+1)
		}
		return b.String()
	}
	if s := mustRead(t, cases(maxCases)); len(s.Compare) != maxCases {
		t.Errorf("%d cases", len(s.Compare))
	}
	if _, err := Read(noFiles, "x.yaml", []byte(cases(maxCases+1))); err == nil || !strings.Contains(err.Error(), "more than 200 cases") {
		t.Error(err)
	}
}

// An error in a case is placed in the case and names it; an error of the
// scenario as filed is not repeated by its cases.
func TestErrorsOfCases(t *testing.T) {
	_, err := Read(noFiles, "x.yaml", []byte(replaced(t, "efficiency: 0.2", "efficiency: 85")+`compare:
  - { name: one, change: { duty_cycle: 0.5 } }
  - { name: two, change: { duty_cycle: 5, window_ps: 1 km } }
`))
	want := `x.yaml:19:17: detectors.gated.efficiency: 85 is outside 0 to 1
        hint: efficiency is a fraction: 0.85
x.yaml:25:40: duty_cycle: in case two: 5 is outside 0 to 1
        hint: duty_cycle is a fraction: 0.05
x.yaml:25:54: window_ps: in case two: "1 km" has a unit
        hint: write the number alone, in ps, or auto`
	if diff := cmp.Diff(want, fmt.Sprint(err)); diff != "" {
		t.Error(diff)
	}
}

// A laboratory file that is wrong is wrong once, however many cases use it;
// one that only a case uses is the case's.
func TestErrorsOfLaboratoryFiles(t *testing.T) {
	files := fstest.MapFS{"bad.csv": {Data: []byte("row,col,re,im\n0,9,0,0\n")}}
	_, err := Read(files, "x.yaml", []byte(replaced(t, "tangle: 0.86", "density_matrix: bad.csv")+
		"compare:\n  - { name: one, change: { duty_cycle: 0.5 } }\n"))
	if errs, _ := err.(Errors); len(errs) != 1 || errs[0].File != "bad.csv" || errs[0].Line != 2 || errs[0].Column != 3 {
		t.Errorf("got %v", err)
	}
	_, err = Read(files, "lab/x.yaml", []byte(errBase+"compare:\n  - { name: one, change: { source.state.density_matrix: bad.csv } }\n"))
	if errs, _ := err.(Errors); len(errs) != 1 || errs[0].File != "lab/bad.csv" || !strings.HasPrefix(errs[0].Problem, "in case one: ") {
		t.Errorf("got %v", err)
	}
}
