package plan

import (
	"context"
	"testing"
	"testing/fstest"

	"pairspan/scenarios"
)

// base is an invented campus link that meets its need.
const base = `title: An invented link
source:
  pair_rate_hz: 2.0e+6
  max_pair_rate_hz: 2.0e+7
  state: { tangle: 0.86 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice: { length_km: 0.05, fixed_loss_db: 4.2, detector: free_running, misalignment_error: 0.005 }
  bob: { length_km: 6.2, fixed_loss_db: 4.2, detector: free_running, misalignment_error: 0.005, connector_pairs: 4 }
detectors:
  free_running: { efficiency: 0.2, dark_counts_hz: 1200, jitter_fwhm_ps: 180, dead_time_ns: 10000 }
  nanowire: { efficiency: 0.85, dark_counts_hz: 100, jitter_fwhm_ps: 50, dead_time_ns: 50 }
window_ps: auto
need: { secret_rate_bps: 100 }
distance: { points: 21 }
`

// set is one change of base.
type set struct{ Entry, Value string }

// read returns base with changes.
func read(t testing.TB, changes ...set) *scenarios.Scenario {
	t.Helper()
	return parse(t, base, changes...)
}

func planned(t testing.TB, changes ...set) *Plan {
	t.Helper()
	p, err := New(context.Background(), read(t, changes...), "test", nil)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// filed is the answer's case of base with changes.
func filed(t testing.TB, changes ...set) *Case {
	t.Helper()
	return &planned(t, changes...).Cases[0]
}

// parse reads a text with changes.
func parse(t testing.TB, text string, changes ...set) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read(fstest.MapFS{}, "base.yaml", []byte(text))
	if err == nil && len(changes) > 0 {
		var all []scenarios.Change
		for _, c := range changes {
			all = append(all, scenarios.Change(c))
		}
		s, err = s.With(all...)
	}
	if err != nil {
		t.Fatal(err)
	}
	return s
}
