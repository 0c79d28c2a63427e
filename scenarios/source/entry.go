package source

import (
	"fmt"
	"regexp"
	"strconv"

	"pairspan/scenarios"
	"pairspan/sources"
)

// The lines that put a file into a scenario, beside it in one folder.

// plainName is a file name that YAML takes without quotes.
var plainName = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9_.-]*$`)

// fileName is the file's name as YAML has it.
func (t *task) fileName() string {
	if plainName.MatchString(t.Title) {
		return t.Title
	}
	return strconv.Quote(t.Title)
}

func (t *task) inScenario(format string, values ...any) {
	line := fmt.Sprintf(format, values...)
	t.InScenario = &line
}

// stateInScenario is that of a state, by the entry that takes such a file.
func (t *task) stateInScenario(entry string) {
	t.inScenario("state: { %s: %s }", entry, t.fileName())
}

// scanInScenario is that of a power scan, at the power that is best for the
// link, else at the greatest that was measured.
func (t *task) scanInScenario(scan sources.PowerScan) {
	_, power := scan.Range()
	if t.Link != nil && t.Link.Pump != nil {
		power = t.Link.Pump.PowerMW
	}
	more, o := "", &t.Options
	if a, b := o.LinearNoiseHzPerMW[0], o.LinearNoiseHzPerMW[1]; a != nil && b != nil {
		more += fmt.Sprintf(", linear_noise_hz_per_mw: { alice: %g, bob: %g }", *a, *b)
	}
	if o.WindowShare != 0 {
		more += fmt.Sprintf(", window_share: %g", o.WindowShare)
	}
	t.inScenario("power_scan: { file: %s, power_mw: %.4g, order: %d%s }", t.fileName(), power, o.Order, more)
}

// delaysInScenario is that of a delay histogram, taken for one of the link's
// own detectors.
func (t *task) delaysInScenario(link *scenarios.Scenario) {
	t.inScenario("delays: { file: %s, detector: { alice: %s, bob: %s } }", t.fileName(), link.Arms[0].Detector, link.Arms[1].Detector)
}

// mapInScenario is that of a spectral map with a pair of pass bands, nil for
// the whole map.
func (t *task) mapInScenario(bands *SpectralBand) {
	if bands == nil {
		t.inScenario("spectral_map: { file: %s }", t.fileName())
		return
	}
	a, b := bands.Alice, bands.Bob
	edge := func(of *float64, single float64) float64 {
		if of == nil {
			return single
		}
		return *of
	}
	t.inScenario("spectral_map: { file: %s, from_nm: { alice: %.9g, bob: %.9g }, to_nm: { alice: %.9g, bob: %.9g } }", t.fileName(),
		edge(a.FromNm, a.CentreNm), edge(b.FromNm, b.CentreNm), edge(a.ToNm, a.CentreNm), edge(b.ToNm, b.CentreNm))
}
