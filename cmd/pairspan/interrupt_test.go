package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// TestInterrupt stops a long plan: status 130 and nothing written.
func TestInterrupt(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "long.yaml")
	if err := os.WriteFile(file, []byte(longScenario()), 0o600); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "out")
	interrupted(t, out, "plan", file, "--out", out)
}

// interrupted runs the program, stops it at work, and holds its status and
// that the output folder is not there. A program that was stopped before it
// listened is given longer: a loaded machine starts slowly.
func interrupted(t *testing.T, out string, args ...string) {
	t.Helper()
	const patience = 5 * time.Second
	for wait := 300 * time.Millisecond; ; wait *= 2 {
		cmd := program(t, args...)
		var said strings.Builder
		cmd.Stderr = &said
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		time.Sleep(wait)
		if err := cmd.Process.Signal(os.Interrupt); err != nil {
			t.Fatal(err)
		}
		_ = cmd.Wait()
		got := cmd.ProcessState.ExitCode()
		if got == -1 && wait < patience {
			continue
		}
		if got != statusInterrupted {
			t.Fatalf("exit status %d, want %d; it said %q", got, statusInterrupted, said.String())
		}
		if _, err := os.Stat(out); !os.IsNotExist(err) {
			t.Errorf("the output folder is there: %v", err)
		}
		return
	}
}

// longScenario plans every pair of many detectors at many distances.
func longScenario() string {
	var b strings.Builder
	b.WriteString(strings.Replace(strings.Replace(plainScenario, "points: 5", "points: 2001", 1),
		"window_ps: 500", "window_ps: auto", 1))
	for _, name := range strings.Fields("b c d e f g h i j k l m n") {
		b.WriteString("  " + name + ": { efficiency: 0.2, dark_counts_hz: 1000, jitter_fwhm_ps: 200, dead_time_ns: 1000 }\n")
	}
	b.WriteString("compare: [ { every_detector: true } ]\n")
	return b.String()
}

// plainScenario is invented; detectors come last, so that more can be added.
const plainScenario = `title: An invented link
source:
  pair_rate_hz: 2.0e+6
  state: { tangle: 0.86 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice: { length_km: 0, fixed_loss_db: 4, detector: a }
  bob: { length_km: 6, fixed_loss_db: 4, detector: a }
window_ps: 500
finite_key: { sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }
need: { secret_rate_bps: 100 }
distance: { to_km: 40, points: 5 }
detectors:
  a: { efficiency: 0.2, dark_counts_hz: 1000, jitter_fwhm_ps: 200, dead_time_ns: 1000 }
`
