package report

import (
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
)

// hostileTexts are what a scenario file of bad intent would say everywhere.
var hostileTexts = []string{
	`</script><script>window.x=1</script><img src=x onerror=window.x=1>`,
	`__f__(window.x=1)__f__`,
}

// A scenario whose title, names, notes, origins and file name are hostile is
// planned and shown like any other: as text, and nothing of it runs.
func TestBrowserHostileScenario(t *testing.T) {
	lib := needCharts(t)
	for i, text := range hostileTexts {
		file := strings.ReplaceAll(hostileScenario, "TEXT", text)
		s, err := scenarios.Read(fstest.MapFS{}, text+".yaml", []byte(file))
		if err != nil {
			t.Fatal(err)
		}
		p, err := plan.New(t.Context(), s, "0.1.0", nil)
		if err != nil {
			t.Fatal(err)
		}
		b := open(t, p, lib, desktop)
		if ran := ask[bool](b, `"x" in window`); ran {
			t.Errorf("text %d ran as script", i)
		}
		for what, where := range map[string]string{
			"title": "h1", "case": "#compared", "origin": "#scenario", "file": "#inputs h3", "note": "#inputs pre", "legend": "#figure-rate .legend",
		} {
			if shown := ask[string](b, `document.querySelector("`+where+`").textContent`); !strings.Contains(shown, text) {
				t.Errorf("text %d is not shown as the %s: %.200s", i, what, shown)
			}
		}
		if n := ask[int](b, `document.images.length`); n != 0 {
			t.Errorf("text %d made %d images", i, n)
		}
		b.quiet()
	}
}

const hostileScenario = `title: 'TEXT'
source: # TEXT
  pair_rate_hz: 2.0e+6
  state: { tangle: 0.86 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice: { length_km: 0, fixed_loss_db: 4, detector: a }
  bob: { length_km: 6, fixed_loss_db: 4, detector: a }
detectors:
  a: { efficiency: 0.2, dark_counts_hz: 1000, jitter_fwhm_ps: 200, dead_time_ns: 1000 }
window_ps: 500
distance: { to_km: 40, points: 21 }
compare: [ { name: 'TEXT case', change: { arms.bob.fixed_loss_db: 5 } } ]
origins: { source.pair_rate_hz: 'TEXT' }
`
