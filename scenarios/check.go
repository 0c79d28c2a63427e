package scenarios

import (
	"cmp"
	"fmt"
	"slices"

	"pairspan/sources"
)

// prepare sets what the table needs to know before it takes values.
func (r *reader) prepare() {
	for _, k := range stateKinds {
		if r.stated[k.name] != nil {
			r.s.Source.State.Kind = k.kind
			break
		}
	}
	r.s.Source.Counted.Used = r.stated["source.counted"] != nil
	r.s.Source.PowerScan.Used = r.stated[powerScanEntry] != nil
	r.s.Source.Delays.Used = r.stated[delaysEntry] != nil
	r.s.Source.SpectralMap.Used = r.stated[spectralEntry] != nil
}

// stateKinds are the descriptions of a state, of which one can stand.
var stateKinds = []struct {
	name string
	kind sources.Kind
}{
	{"source.state.tangle", sources.TangleKind},
	{"source.state.concurrence", sources.ConcurrenceKind},
	{"source.state.fidelity", sources.FidelityKind},
	{"source.state.visibility", sources.VisibilityKind},
	{"source.state.density_matrix", sources.DensityMatrixKind},
	{"source.state.counts", sources.DensityMatrixKind},
}

// missing finds the required entries and groups that are not stated.
func (r *reader) missing() {
	for _, name := range requiredGroups {
		hint := "it takes " + someOf(name)
		if name == "detectors" {
			hint = "write detectors: { NAME: { efficiency: 0.2, ... } }, and the name in the arms"
		}
		r.need(name, hint)
	}
	each(r.s, func(e *row, _ int, name string) {
		if e.required {
			hint := e.subject()
			if e.unit != "" {
				hint += ", in " + e.unit
			}
			r.need(name, hint+": "+e.meaning)
		}
	})
	if n := r.stated["source.bandwidth_fwhm_nm"]; n != nil && n.kind == mapping {
		r.need("source.bandwidth_fwhm_nm.alice", "Bob's bandwidth follows from Alice's, not the other way round")
	}
}

// need reports a name that is not stated though its group is.
func (r *reader) need(name, hint string) {
	if r.told(name) {
		return
	}
	if group := parent(name); r.stated[name] == nil && r.stated[group] != nil && !r.wrong[group] && !r.meant[name] {
		r.fail(name, r.keys[group], "required, but missing", hint)
	}
}

// check finds what does not fit together.
func (r *reader) check() {
	r.checkEmission()
	r.checkState()
	r.checkCounted()
	r.checkScan()
	r.checkSpectralMap()
	r.checkDelays()
	r.checkArms()
	r.checkWindow()
	r.checkNeed()
	if len(r.errs) > 0 {
		return
	}
	r.takeOutAccidentals()
	if _, err := r.s.Emission(); err != nil {
		problem, hint := cutHint(err)
		entry := "source.counted"
		if r.s.Source.PowerScan.Used {
			entry = powerScanEntry
		}
		r.fail(entry, r.keys[entry], problem, cmp.Or(hint, "check what was counted, and with which detectors"))
		return
	}
	r.checkSpread()
}

// checkSpread refuses to search a window without anything that spreads the
// arrivals: the shortest would always be the best.
func (r *reader) checkSpread() {
	if !r.s.WindowAuto || r.s.Spread(r.s.DistanceKm()) > 0 {
		return
	}
	at, stated := r.keys["window_ps"]
	if !stated {
		at = r.keys["source"]
	}
	r.fail("window_ps", at, "auto, though nothing spreads the arrivals",
		"state a width in ps, or the detectors' jitter_fwhm_ps, clock_jitter_fwhm_ps or pump_pulse_fwhm_ps")
}

// exclude reports all but the first of several entries of which one can stand.
func (r *reader) exclude(hint string, names ...string) {
	names = slices.DeleteFunc(names, func(name string) bool { return r.stated[name] == nil })
	slices.SortStableFunc(names, func(a, b string) int { return r.keys[a].compare(r.keys[b]) })
	for _, name := range names[min(1, len(names)):] {
		r.fail(name, r.keys[name], fmt.Sprintf("cannot stand beside %s in line %d", names[0], r.keys[names[0]].line), hint)
	}
}

func (r *reader) checkEmission() {
	if r.stated["source"] == nil || r.wrong["source"] {
		return
	}
	is := func(leaf string) bool { return r.stated["source."+leaf] != nil }
	const choice = "an emission is pair_rate_hz, pulse_rate_hz with pairs_per_pulse, counted or power_scan (the last two with pulse_rate_hz if pulsed)"
	before := len(r.errs)
	r.exclude(choice, "source.pair_rate_hz", "source.pulse_rate_hz")
	r.exclude(choice, "source.pair_rate_hz", "source.pairs_per_pulse")
	r.exclude(choice, "source.pair_rate_hz", "source.counted")
	r.exclude(choice, "source.pairs_per_pulse", "source.counted")
	for _, other := range []string{"source.pair_rate_hz", "source.pairs_per_pulse", "source.counted"} {
		r.exclude(choice, other, powerScanEntry)
	}
	measured := is("counted") || is("power_scan")
	switch at := r.keys["source"]; {
	case len(r.errs) > before:
		return
	case !is("pair_rate_hz") && !is("pulse_rate_hz") && !is("pairs_per_pulse") && !measured:
		r.fail("source", at, "no emission is stated", choice)
		return
	case is("pairs_per_pulse") && !is("pulse_rate_hz"):
		r.fail("source.pulse_rate_hz", at, "required, but missing", "pairs_per_pulse is of a pulsed source")
		return
	case is("pulse_rate_hz") && !is("pairs_per_pulse") && !measured:
		r.fail("source.pairs_per_pulse", at, "required, but missing", "a pulsed source is pulse_rate_hz with pairs_per_pulse, counted or power_scan")
	}
	for _, l := range r.leaves {
		if !r.applies(l.row) {
			hint := "leave it out; a source with pulse_rate_hz is pulsed, one without is continuous"
			if l.row.only == renewing {
				hint = "state aes256_renewal_s beside it, or leave it out"
			}
			r.fail(l.name, r.keys[l.name], "only "+l.row.only+" has it", hint)
		}
	}
	r.atMost("source.pair_rate_hz", "source.max_pair_rate_hz")
	r.atMost("source.pairs_per_pulse", "source.max_pairs_per_pulse")
	r.checkPump("source.pair_rate_hz", "source.max_pair_rate_hz")
	r.checkPump("source.pairs_per_pulse", "source.max_pairs_per_pulse")
}

// checkPump refuses to search a pump whose ceiling is not known.
func (r *reader) checkPump(name, ceiling string) {
	if n := r.stated[name]; n != nil && n.text == "auto" && r.stated[ceiling] == nil {
		r.fail(name, n.at, "auto, though its ceiling is not known", "state "+ceiling+": what the pump can reach")
	}
}

// needs are the forms of a need, of which one can stand.
var needs = []string{"need.secret_rate_bps", "need.aes256_renewal_s", "need.key_bits_per_day"}

func (r *reader) checkNeed() {
	r.exclude("state the need in one form", slices.Clone(needs)...)
	if r.stated["need"] == nil || r.wrong["need"] {
		return
	}
	for _, name := range needs {
		if r.stated[name] != nil {
			return
		}
	}
	r.fail("need", r.keys["need"], "nothing is needed", "state one of "+oneOf(needs)+", or leave need out")
}

// atMost reports a number above another that bounds it; one that is not
// stated, or was refused, is NaN and above nothing.
func (r *reader) atMost(name, bound string) {
	x, err := r.s.Number(name)
	most, errs := r.s.Number(bound)
	if err == nil && errs == nil && *x > *most {
		r.fail(name, r.stated[name].at, fmt.Sprintf("%s is above %s, %s", r.stated[name].text, bound, r.stated[bound].text), "one of the two is wrong")
	}
}

func (r *reader) checkState() {
	var names []string
	for _, k := range stateKinds {
		names = append(names, k.name)
	}
	r.exclude("state the best known of them alone", slices.Clone(names)...)
	car := r.stated["source.state.measured_car"]
	if car != nil && !slices.ContainsFunc(names, func(name string) bool { return r.stated[name] != nil }) {
		r.fail("source.state.measured_car", r.keys["source.state.measured_car"], "no state stands beside it",
			"state what was measured: tangle, concurrence, fidelity, visibility or density_matrix")
	}
}

func (r *reader) checkCounted() {
	for _, arm := range armNames {
		singles := "source.counted.singles_hz." + arm
		r.atMost("source.counted.coincidences_hz", singles)
		r.atMost("source.counted.background_hz."+arm, singles)
	}
}

// checkArms finds what does not fit together in an arm.
func (r *reader) checkArms() {
	for i, arm := range armNames {
		group := "arms." + arm
		if r.stated[group] == nil || r.wrong[group] {
			continue
		}
		for _, item := range itemised {
			r.exclude("measured_loss_db holds connectors and splices already", group+".measured_loss_db", group+"."+item)
		}
		if r.s.Arms[i].FixedLossFromCounts && !r.s.Source.EmissionMeasured() {
			name := group + ".fixed_loss_db"
			r.fail(name, r.stated[name].at, "from_counts, but nothing was counted", "state source.counted or source.power_scan, or the loss in dB")
		}
		r.checkAttenuation(i, group)
	}
}

// itemised are the entries that a measured loss of the run holds already.
var itemised = []string{"connector_pairs", "connector_pair_loss_db", "splices", "splice_loss_db"}

// checkAttenuation reports an arm whose fibre has no known attenuation.
func (r *reader) checkAttenuation(i int, group string) {
	a, nm := &r.s.Arms[i], r.s.Source.WavelengthNm[i]
	noFibre := a.LengthKm == 0 && r.s.Shares()[i] == 0 // and never will be
	if noFibre || r.stated[group+".loss_db_per_km"] != nil || a.Fibre == "" || !Stated(nm) || !Stated(a.LengthKm) {
		return
	}
	if value, _ := defaultAttenuation(r.s, i); value == "" {
		r.fail(group+".loss_db_per_km", r.keys[group], fmt.Sprintf("required at %s nm, but missing", figure(nm)),
			fmt.Sprintf("%s has no figure at this wavelength: state loss_db_per_km, or measured_loss_db over the installed length", a.Fibre))
	}
}

// checkWindow reports windows that hold more than one pulse.
func (r *reader) checkWindow() {
	period := psPerSecond / r.s.Source.PulseRateHz
	for _, name := range []string{"window_ps", "source.counted.window_ps"} {
		if ps, err := r.s.Number(name); err == nil && *ps > period {
			r.fail(name, r.stated[name].at, fmt.Sprintf("%s is longer than the %s ps from pulse to pulse", r.stated[name].text, brief(period)),
				"a window holds one pulse at most")
		}
	}
}
