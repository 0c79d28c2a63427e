package plan

import (
	"cmp"
	"slices"
	"strings"

	"pairspan/scenarios"
)

// What is not an entry of the link: it heads the plan, or is shown elsewhere.
var notListed = []string{"title", "compare", "origins"}

// entries lists what the scenario states and what it leaves to a default,
// arm by arm and detector by detector.
func entries(s *scenarios.Scenario) []Entry {
	l := entryLister{s: s, words: wordsOf(s)}
	out := []Entry{}
	for _, e := range scenarios.Entries() {
		for _, name := range namesOf(e.Name, s) {
			value, source := l.value(name)
			if value == "" || slices.Contains(notListed, name) || l.idle(name) {
				continue
			}
			at := Entry{Entry: name, Value: value, Unit: e.Unit, Meaning: e.Meaning, DefaultSource: source}
			at.SD, at.Origin = l.deviation(name), l.origin(name)
			at.KnownBy = knownBy(&at)
			out = append(out, at)
		}
	}
	order := map[string]int{}
	for _, e := range out {
		if _, seen := order[groupOf(e.Entry)]; !seen {
			order[groupOf(e.Entry)] = len(order)
		}
	}
	slices.SortStableFunc(out, func(a, b Entry) int { return cmp.Compare(order[groupOf(a.Entry)], order[groupOf(b.Entry)]) })
	return out
}

// namesOf returns the entries of this scenario that a row of the table of
// entries stands for.
func namesOf(row string, s *scenarios.Scenario) []string {
	const eitherArm, anyDetector = "{alice,bob}", ".NAME."
	if row == wholeBandwidth || row == eachBandwidth {
		return bandwidthNames(row, s)
	}
	if strings.Contains(row, eitherArm) {
		return []string{strings.Replace(row, eitherArm, "alice", 1), strings.Replace(row, eitherArm, "bob", 1)}
	}
	if !strings.Contains(row, anyDetector) {
		return []string{row}
	}
	var names []string
	for i := range s.Detectors {
		names = append(names, strings.Replace(row, anyDetector, "."+s.Detectors[i].Name+".", 1))
	}
	return names
}

// The bandwidth is one entry for Alice's photon or a group of both: two names
// for one number.
const (
	wholeBandwidth = "source.bandwidth_fwhm_nm"
	eachBandwidth  = wholeBandwidth + ".{alice,bob}"
)

// bandwidthNames gives Alice's bandwidth the one name under which it stands:
// a group is used where Bob's is stated too, or something is said of it by
// its long name.
func bandwidthNames(row string, s *scenarios.Scenario) []string {
	alice, bob := wholeBandwidth+".alice", wholeBandwidth+".bob"
	grouped := scenarios.Stated(s.Source.BandwidthFWHMNm[scenarios.Bob]) ||
		slices.ContainsFunc(s.Deviations, func(d scenarios.Deviation) bool { return d.Entry == alice })
	switch {
	case row == wholeBandwidth && grouped:
		return nil
	case row == wholeBandwidth:
		return []string{wholeBandwidth}
	case grouped:
		return []string{alice, bob}
	}
	return []string{bob}
}

// groupOf is what an entry is shown under: an arm, a detector, or the first
// word of its name.
func groupOf(entry string) string {
	parts := strings.SplitN(entry, ".", 3)
	if len(parts) == 3 && (parts[0] == "arms" || parts[0] == "detectors") {
		return parts[0] + "." + parts[1]
	}
	return parts[0]
}

// entryLister looks up what a scenario says of one entry.
type entryLister struct {
	s     *scenarios.Scenario
	words map[string]string
}

// value returns an entry's value as a file would have it, "" where it has
// none, and the source of a default.
func (l *entryLister) value(name string) (value string, source *string) {
	for _, d := range l.s.DefaultsUsed {
		if d.Entry == name {
			return d.Value, &d.Source
		}
	}
	if at, err := l.s.Number(name); err == nil && scenarios.Stated(*at) {
		return plain(*at), nil
	}
	return l.words[name], nil
}

// idle reports whether an entry plays no part, since the arm's run was
// measured as a whole.
func (l *entryLister) idle(name string) bool {
	for i, arm := range [2]string{"alice", "bob"} {
		item, is := strings.CutPrefix(name, "arms."+arm+".")
		if is && scenarios.Stated(l.s.Arms[i].MeasuredLossDB) {
			return item == "connector_pairs" || item == "splices"
		}
	}
	return false
}

func (l *entryLister) deviation(name string) *float64 {
	for _, d := range l.s.Deviations {
		if d.Entry == name {
			return &d.SD
		}
	}
	return nil
}

// origin returns the text that stands nearest to an entry: its own, or that
// of a group around it.
func (l *entryLister) origin(name string) *string {
	for at := name; at != ""; at = at[:max(0, strings.LastIndexByte(at, '.'))] {
		for _, o := range l.s.Origins {
			if o.Entry == at {
				return &o.Text
			}
		}
	}
	return nil
}

// wordsOf lists the entries whose value is not a number.
func wordsOf(s *scenarios.Scenario) map[string]string {
	words := map[string]string{"distance.lengthen": string(s.Lengthen)}
	put := func(name, word string, holds bool) {
		if holds {
			words[name] = word
		}
	}
	put("source.pair_rate_hz", "auto", s.Source.PumpAuto && !s.Pulsed())
	put("source.pairs_per_pulse", "auto", s.Source.PumpAuto && s.Pulsed())
	put("window_ps", "auto", s.WindowAuto)
	put("uncertainty.tomography", "as_fitted", s.Source.Counts != nil)
	put("uncertainty.tomography", "repeated", s.TomographyRepeated)
	put("key_basis_share", "auto", s.KeyShareAuto)
	for _, in := range s.Inputs {
		put(in.Entry, in.Name, in.Entry != "")
	}
	for i, arm := range [2]string{"alice", "bob"} {
		a, at := &s.Arms[i], "arms."+arm+"."
		words[at+"fibre"], words[at+"detector"] = a.Fibre, a.Detector
		words[at+"basis_choice"] = "active"
		put(at+"basis_choice", "passive", a.Passive)
		put(at+"fixed_loss_db", "from_counts", a.FixedLossFromCounts)
		put("source.counted.detector."+arm, s.Source.Counted.Detector[i], s.Source.Counted.Used)
		put("source.delays.detector."+arm, s.Source.Delays.Detector[i], s.Source.Delays.Used)
		put("source.power_scan.detector."+arm, s.Source.PowerScan.Detector[i], s.Source.PowerScan.Detector[i] != "")
	}
	for i := range s.Detectors {
		d := &s.Detectors[i]
		put("detectors."+d.Name+".class", d.Class, d.Class != "")
	}
	return words
}
