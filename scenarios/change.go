package scenarios

import (
	"bytes"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"
)

// edit is a change of one entry or group of a tree.
type edit struct {
	entry string
	at    place // where the change stands
	value *node
}

// edits parses changes that do not stand in the file.
func (d *Document) edits(changes []Change) ([]edit, Errors) {
	var edits []edit
	var errs Errors
	for _, c := range changes {
		at := d.root.nearestPlace(c.Entry)
		value, problem, hint := parseValue(c.Value, at)
		if problem == "" {
			problem, hint = d.changeable(c.Entry)
		}
		if problem != "" {
			errs = append(errs, Error{d.files.scenario, at.line, at.column, escape(shorten(c.Entry)), problem, hint})
		}
		edits = append(edits, edit{c.Entry, at, value})
	}
	return edits, errs
}

// changeable says why an entry cannot be changed, "" if it can.
func (d *Document) changeable(entry string) (problem, hint string) {
	if isEntry(entry) {
		return "", ""
	}
	return asking(d.root).known(entry)
}

// asking returns a reader of a tree that only answers what names may mean.
func asking(root *node) *reader {
	names := detectorNames(root)
	r := &reader{s: blank(names[:min(len(names), maxDetectors)]), stated: map[string]*node{}, meant: map[string]bool{}}
	if arms := root.get("arms"); arms != nil {
		r.stated["arms"] = arms.value
	}
	return r
}

// parseValue reads a value as it would stand in the file.
func parseValue(text string, at place) (value *node, problem, hint string) {
	const write = "write a value as in the file"
	plain, trouble := plainText([]byte(text))
	if trouble != nil {
		return nil, trouble.problem, trouble.hint
	}
	if len(text) > maxFileBytes {
		return nil, tooLarge.problem, write
	}
	decoder := yaml.NewDecoder(bytes.NewReader(plain))
	document, err := decode(decoder)
	if _, after := decode(decoder); err != nil || after == nil {
		if strings.TrimSpace(text) == "" {
			return nil, "empty", "state a value"
		}
		return nil, show(text) + " is not a value", write
	}
	g := grower{open: map[*yaml.Node]bool{}}
	value = g.grow(document.Content[0], from{at: &at})
	if len(g.errs) > 0 {
		return nil, g.errs[0].Problem, g.errs[0].Hint
	}
	return value, "", ""
}

// nearestPlace returns where an entry stands, or the innermost of its groups
// that the tree has.
func (n *node) nearestPlace(entry string) place {
	at := place{1, 1}
	for _, key := range strings.Split(entry, ".") {
		m := n.get(key)
		if m == nil {
			break
		}
		at, n = m.at, m.value
	}
	return at
}

// rivals are the entries that go when another is set, since only one of them
// can stand.
var rivals = rivalsOf()

func rivalsOf() map[string][]string {
	m := map[string][]string{
		"source.pair_rate_hz": {
			"source.pulse_rate_hz", "source.pairs_per_pulse", "source.counted", powerScanEntry,
			"source.schmidt_number", "source.max_pairs_per_pulse", "source.pump_pulse_fwhm_ps",
		},
		"source.pulse_rate_hz":   {"source.pair_rate_hz", "source.max_pair_rate_hz", delaysEntry},
		"source.pairs_per_pulse": {"source.pair_rate_hz", "source.max_pair_rate_hz", "source.counted", powerScanEntry, delaysEntry},
		"source.counted":         {"source.pair_rate_hz", "source.pairs_per_pulse", powerScanEntry},
		powerScanEntry: {
			"source.pair_rate_hz", "source.pairs_per_pulse", "source.counted", "source.unpaired_photons_hz",
			"source.max_pair_rate_hz", "source.max_pairs_per_pulse",
		},
		spectralEntry: {"source.state", "source.wavelength_nm", bandwidthEntry},

		"need.secret_rate_bps":  {"need.aes256_renewal_s", "need.encrypted_connections", "need.key_bits_per_day"},
		"need.aes256_renewal_s": {"need.secret_rate_bps", "need.key_bits_per_day"},
		"need.key_bits_per_day": {"need.secret_rate_bps", "need.aes256_renewal_s", "need.encrypted_connections"},
	}
	for _, k := range stateKinds {
		m[k.name] = append(m[k.name], spectralEntry)
		for _, other := range stateKinds {
			if other.name != k.name {
				m[k.name] = append(m[k.name], other.name)
			}
		}
	}
	for _, arm := range armNames {
		run := "arms." + arm + ".measured_loss_db"
		for _, item := range itemised {
			m[run] = append(m[run], "arms."+arm+"."+item)
			m["arms."+arm+"."+item] = []string{run}
		}
	}
	return m
}

// edited returns a tree with edits made; what they do not touch is shared
// with the tree given.
func (d *Document) edited(root *node, edits []edit) (*node, Errors) {
	for _, e := range edits {
		for name := e.entry; name != ""; name = parent(name) {
			for _, rival := range rivals[name] {
				root = root.without(strings.Split(rival, "."))
			}
		}
	}
	var errs Errors
	fail := func(e edit, problem, hint string) {
		errs = append(errs, Error{d.files.scenario, e.at.line, e.at.column, e.entry, problem, hint})
	}
	for _, e := range edits {
		path := strings.Split(e.entry, ".")
		switch {
		case len(path) == 3 && path[0] == "detectors" && !slices.Contains(detectorNames(root), path[1]):
			problem, hint := asking(root).known(e.entry)
			fail(e, problem, hint)
			continue
		case len(path) == 3 && path[2] == "length_km" && stale(root, path[1], edits):
			fail(e, "the arm's measured_loss_db is of another length", "change measured_loss_db too, or lengthen the arm along the curve")
		}
		root = root.with(path, e)
	}
	return root, errs
}

// stale reports whether an arm keeps a measured loss that no edit states.
func stale(root *node, arm string, edits []edit) bool {
	const measured = "measured_loss_db"
	arms := root.get("arms")
	if arms == nil || arms.value.get(arm) == nil || arms.value.get(arm).value.get(measured) == nil {
		return false
	}
	return !slices.ContainsFunc(edits, func(e edit) bool {
		return e.entry == "arms" || e.entry == "arms."+arm || e.entry == "arms."+arm+"."+measured
	})
}

// with returns a copy of a mapping in which the entry at a path is e's value.
func (n *node) with(path []string, e edit) *node {
	c := *n
	c.members = slices.Clone(n.members)
	m := c.get(path[0])
	if m == nil {
		c.members = append(c.members, member{path[0], e.at, &node{kind: mapping, at: e.at}})
		m = &c.members[len(c.members)-1]
	}
	if len(path) == 1 {
		m.at, m.value = e.at, e.value
		return &c
	}
	inner := m.value
	if inner.kind != mapping {
		inner = &node{kind: mapping, at: e.at}
		if path[0] == "bandwidth_fwhm_nm" { // a single value is Alice's
			inner.members = []member{{armNames[Alice], m.at, m.value}}
		}
	}
	m.value = inner.with(path[1:], e)
	return &c
}

// without returns a copy of a mapping in which nothing stands at a path.
func (n *node) without(path []string) *node {
	m := n.get(path[0])
	if m == nil || len(path) > 1 && m.value.kind != mapping {
		return n
	}
	c := *n
	c.members = slices.Clone(n.members)
	if len(path) == 1 {
		c.members = slices.DeleteFunc(c.members, func(m member) bool { return m.key == path[0] })
		return &c
	}
	c.get(path[0]).value = m.value.without(path[1:])
	return &c
}
