package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// ground is one way of knowing an input, and the inputs known so.
type ground struct {
	Name   string
	Inputs string // named in words
}

// groundKinds are the ways in which an input is known, the surest first.
var groundKinds = []struct{ kind, name, short string }{
	{plan.Measured, "Measured", "measured"},
	{plan.FromPaper, "From a data sheet or document", "document"},
	{plan.Assumed, "Assumed, as the file says", "assumed"},
	{plan.Unreferred, "Assumed: stated without an origin", "no origin"},
	{plan.ByDefault, "Assumed: a default", "default"},
}

// groundRule says by which rule inputs are sorted.
const groundRule = "Measured: its origin in the file says so, or a standard deviation is stated without an origin, or the entry holds a measurement by its meaning. " +
	"Document: any other origin, such as a data sheet. All else counts as assumed: what its origin calls an assumption, what the file states without an origin, and defaults."

// grounds sorts the inputs that the answer rests on: those of the case as
// filed, with the detectors that it uses.
func grounds(p *plan.Plan) []ground {
	used := usedDetectors(p)
	all := map[string]int{}
	var inputs []input
	for i := range p.Entries {
		e := &p.Entries[i]
		if e.KnownBy == nil || idleDetector(e.Entry, used) {
			continue
		}
		in := inputOf(e)
		all[in.words]++
		inputs = append(inputs, in)
	}
	var out []ground
	for _, k := range groundKinds {
		g := ground{Name: k.name}
		var names []string
		for _, in := range inputs {
			if in.knownBy == k.kind {
				names = addInput(names, in, inputs, all)
			}
		}
		if len(names) > 0 {
			g.Inputs = strings.Join(names, ", ")
			out = append(out, g)
		}
	}
	return out
}

// input is an entry as people call it.
type input struct{ words, who, knownBy string }

// addInput names an input once where all of its kind are known the same way,
// else with the arm or detector that it belongs to.
func addInput(names []string, in input, inputs []input, all map[string]int) []string {
	same := 0
	for _, other := range inputs {
		if other.words == in.words && other.knownBy == in.knownBy {
			same++
		}
	}
	name := in.words
	if same < all[in.words] && in.who != "" {
		name += " (" + in.who + ")"
	}
	for _, n := range names {
		if n == name {
			return names
		}
	}
	return append(names, name)
}

// usedDetectors are the names that the arms as filed give.
func usedDetectors(p *plan.Plan) map[string]bool {
	used := map[string]bool{}
	for _, e := range p.Entries {
		if strings.HasPrefix(e.Entry, "arms.") && strings.HasSuffix(e.Entry, ".detector") {
			used[e.Value] = true
		}
	}
	return used
}

func idleDetector(entry string, used map[string]bool) bool {
	parts := strings.SplitN(entry, ".", 3)
	return parts[0] == "detectors" && len(parts) == 3 && !used[parts[1]]
}

// unitEndings end an entry's name and are no part of what it is called.
var unitEndings = []struct{ ending, words string }{
	{"_db_per_km", " per km"},
	{"_ps_per_nm_km", ""},
	{"_ps_per_sqrt_km", ""},
	{"_fwhm_nm", ""},
	{"_fwhm_ps", ""},
	{"_hz", ""},
	{"_bps", ""},
	{"_db", ""},
	{"_km", ""},
	{"_nm", ""},
	{"_ps", ""},
	{"_ns", ""},
}

// inputOf turns arms.bob.fixed_loss_db into "fixed loss" of Bob.
func inputOf(e *plan.Entry) input {
	in := input{knownBy: *e.KnownBy}
	parts := strings.Split(e.Entry, ".")
	if parts[0] == "detectors" && len(parts) > 2 {
		in.who, parts = parts[1], parts[2:]
	}
	var words []string
	for i, part := range parts {
		switch {
		case i == 0 && (part == "source" || part == "arms"), part == "state":
		case part == "alice":
			in.who = "Alice"
		case part == "bob":
			in.who = "Bob"
		default:
			words = append(words, inputWords(part))
		}
	}
	in.words = strings.Join(words, " ")
	return in
}

func inputWords(name string) string {
	for _, u := range unitEndings {
		if stem, is := strings.CutSuffix(name, u.ending); is {
			name = stem + u.words
			break
		}
	}
	switch name = spaced(name); name {
	case "pmd":
		return "PMD"
	case "measured car":
		return "CAR"
	case "hv", "da":
		return strings.ToUpper(name)
	case "error correction f":
		return "error correction"
	}
	return name
}
