package scenarios

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
)

// form says what kind of value an entry takes.
type form int

const (
	numberForm   form = iota
	textForm          // a line of text
	choiceForm        // one of the row's words
	detectorForm      // the name of a detector of this scenario
	fileForm          // a file beside the scenario
	ownForm           // read by a reader of its own
)

// What some entries are limited to: a kind of emission, or a form of the need.
const (
	pulsed     = "a pulsed source"
	continuous = "a continuous source"
	renewing   = "a need with aes256_renewal_s"
)

// row is one entry of a scenario file: everything that reading, errors,
// defaults, the starting file, draws and questions know about it. In its
// name {alice,bob} stands for either arm and NAME for any detector.
type row struct {
	name     string
	form     form
	unit     string
	lo, hi   float64
	above    bool // lo itself is outside
	below    bool // hi itself is outside
	whole    bool // whole numbers only
	fraction bool
	exact    bool   // a setting or a wish: takes no standard deviation
	only     string // pulsed or continuous
	required bool   // wherever the group that it stands in is stated

	def, source string                                      // the default and where it comes from
	asSaid      bool                                        // the default is in words: the number stays unstated
	unless      string                                      // an entry beside it that makes its default idle
	derive      func(*Scenario, int) (value, source string) // a default that follows from other entries; "" where none
	meaning     string                                      // one sentence
	hint        string                                      // for a value outside the range
	words       []string                                    // of a choice, or accepted instead of a number
	at          func(*Scenario, int) *float64               // where a number lives; nil where the scenario has no such number
	set         func(s *Scenario, i int, text string)       // stores what is not a number
	example     string                                      // for the starting file
	bob         string                                      // the example of Bob's arm where it differs
	active      bool                                        // stands in the starting file without #
}

const (
	eitherArm   = "{alice,bob}"
	anyDetector = "NAME"
)

// table is every entry, in the order of a scenario file.
var table = slices.Concat(titleRows, sourceRows, armRows, detectorRows, linkRows, planRows)

// groups are the names that entries stand in, patterns as in the table.
var groups = groupsOf(table)

// requiredGroups must be stated wherever their own group is.
var requiredGroups = []string{
	"source", "source.wavelength_nm",
	"source.counted.singles_hz", "source.counted.background_hz", "source.counted.detector",
	"source.delays.detector", "arms", "arms.alice", "arms.bob", "detectors",
}

// byName finds a row by its pattern.
var byName = rowsByName(table)

func rowsByName(rows []row) map[string]*row {
	m := make(map[string]*row, len(rows))
	for i := range rows {
		m[rows[i].name] = &rows[i]
	}
	return m
}

func groupsOf(rows []row) map[string]bool {
	m := map[string]bool{}
	for _, r := range rows {
		for name := parent(r.name); name != ""; name = parent(name) {
			m[name] = true
		}
	}
	return m
}

// parent returns the group that a name stands in, "" at the top.
func parent(name string) string { return name[:max(0, strings.LastIndexByte(name, '.'))] }

// leaf returns the last word of a name.
func leaf(name string) string { return name[strings.LastIndexByte(name, '.')+1:] }

func join(group, word string) string {
	if group == "" {
		return word
	}
	return group + "." + word
}

var word = regexp.MustCompile(`^[a-z][a-z0-9_-]*$`)

// pattern turns a dotted name into the table's form, with the arm that it
// speaks of and the detector; it is "" for a name that cannot be an entry's.
func pattern(name string) (p string, arm int, detector string) {
	parts := strings.Split(name, ".")
	for i, part := range parts {
		switch {
		case !word.MatchString(part):
			return "", 0, ""
		case i == 1 && parts[0] == "detectors":
			parts[i], detector = anyDetector, part
		case part == armNames[Alice]:
			parts[i], arm = eitherArm, Alice
		case part == armNames[Bob]:
			parts[i], arm = eitherArm, Bob
		}
	}
	return strings.Join(parts, "."), arm, detector
}

// lookup returns the row of a dotted name, nil if there is none, and which
// arm or detector of s it speaks of; -1 for a detector that s does not have.
func lookup(s *Scenario, name string) (r *row, i int) {
	p, arm, detector := pattern(name)
	if detector != "" {
		arm = slices.IndexFunc(s.Detectors, func(d Detector) bool { return d.Name == detector })
	}
	return byName[p], arm
}

// isGroup reports whether entries stand under a dotted name.
func isGroup(name string) bool {
	p, _, _ := pattern(name)
	return groups[p]
}

// isEntry reports whether a dotted name is an entry's or a group's, whatever
// the detectors are.
func isEntry(name string) bool {
	p, _, _ := pattern(name)
	return byName[p] != nil || groups[p]
}

// Number returns the place in s of a number by its entry's dotted name, such
// as arms.bob.length_km. Resolve once and write through it often. A number
// that the scenario leaves out is NaN there. It is an error if there is no
// such entry or detector, if the entry is not a number, or if the figure is
// not one that the scenario's state is known by.
func (s *Scenario) Number(entry string) (*float64, error) {
	r, i := lookup(s, entry)
	switch {
	case r == nil:
		return nil, fmt.Errorf("%s: unknown entry", escape(entry))
	case r.form != numberForm:
		return nil, fmt.Errorf("%s: not a number", entry)
	case i < 0:
		return nil, fmt.Errorf("%s: the scenario has no such detector", entry)
	}
	if at := r.at(s, i); at != nil {
		return at, nil
	}
	return nil, fmt.Errorf("%s: the state is not known by it", entry)
}

// Entry describes one entry of a scenario file to people.
type Entry struct {
	Name          string // {alice,bob} stands for either arm, NAME for a detector's name
	Meaning       string
	Unit          string // "" for a pure number or a word
	Range         string
	Required      bool   // wherever the group that it stands in is stated
	Default       string // "" where there is none
	DefaultSource string
}

// Entries describes every entry, in the order of a scenario file.
func Entries() []Entry {
	out := make([]Entry, len(table))
	for i, r := range table {
		out[i] = Entry{r.name, r.meaning, r.unit, r.rangeText(), r.required, r.def, r.source}
	}
	return out
}

// rangeText says in words which values an entry takes.
func (r *row) rangeText() string {
	var text string
	switch r.form {
	case textForm:
		return "a line of text"
	case choiceForm:
		return oneOf(r.words)
	case detectorForm:
		return "a name under detectors"
	case fileForm:
		return "a file in the scenario's folder"
	case ownForm:
		return r.words[0]
	}
	switch {
	case r.above:
		text = "above " + figure(r.lo) + ", up to " + figure(r.hi)
	case r.below:
		text = figure(r.lo) + " to below " + figure(r.hi)
	default:
		text = figure(r.lo) + " to " + figure(r.hi)
	}
	if r.whole {
		text += ", whole"
	}
	if len(r.words) > 0 {
		text += ", or " + oneOf(r.words)
	}
	return text
}

// contains reports whether a number lies in the row's range.
func (r *row) contains(x float64) bool {
	return x >= r.lo && x <= r.hi && !(r.above && x == r.lo) && !(r.below && x == r.hi)
}

// oneOf lists words as a choice.
func oneOf(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}

// each calls f for every entry that s has, in the order of the table: Alice's
// arm before Bob's, one detector after the other.
func each(s *Scenario, f func(r *row, i int, name string)) {
	for from := 0; from < len(table); {
		head, mark := splitPattern(table[from].name)
		to := from + 1
		for to < len(table) && mark != "" && strings.HasPrefix(table[to].name, head+mark) {
			to++
		}
		for i, stand := range standsFor(s, mark) {
			for k := from; k < to; k++ {
				f(&table[k], i, strings.Replace(table[k].name, mark, stand, 1))
			}
		}
		from = to
	}
}

// splitPattern returns what comes before a row's mark, and the mark.
func splitPattern(name string) (head, mark string) {
	for _, mark := range []string{eitherArm, anyDetector} {
		if head, _, found := strings.Cut(name, mark); found {
			return head, mark
		}
	}
	return name, ""
}

func standsFor(s *Scenario, mark string) []string {
	switch mark {
	case eitherArm:
		return armNames[:]
	case anyDetector:
		names := make([]string, len(s.Detectors))
		for i, d := range s.Detectors {
			names[i] = d.Name
		}
		return names
	}
	return []string{""}
}
