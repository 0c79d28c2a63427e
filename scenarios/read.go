package scenarios

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// reader turns one tree into a scenario, collecting every error on the way.
type reader struct {
	files  *folder
	s      *Scenario
	stated map[string]*node // entries and groups that the file states, wrong or not
	keys   map[string]place // of their keys
	meant  map[string]bool  // names that unknown ones probably meant
	wrong  map[string]bool  // groups that hold nothing to read
	leaves []stated         // in file order
	errs   Errors
}

// stated is an entry with its value in the file.
type stated struct {
	row  *row
	i    int // the arm or detector
	name string
	node *node
}

// maxDetectors bounds what every entry and every case is looked up in.
const maxDetectors = 100

// read reads a whole tree; compared cases are left to the document.
func (d *Document) read(root *node) *reader {
	names := detectorNames(root)
	r := &reader{
		files: d.files, s: blank(names[:min(len(names), maxDetectors)]),
		stated: map[string]*node{"": root}, keys: map[string]place{"": {1, 1}},
		meant: map[string]bool{}, wrong: map[string]bool{},
	}
	r.s.document = &Document{root, d.files, d.text}
	r.s.Inputs = []Input{{Name: d.files.scenario, Text: d.text}}
	if len(names) > maxDetectors {
		r.fail("detectors", root.get("detectors").at, fmt.Sprintf("%d detectors, and at most %d can stand", len(names), maxDetectors), "keep those that this link may use")
		return r
	}
	r.sortOut(root, "")
	r.prepare()
	for _, l := range r.leaves {
		r.value(l)
	}
	r.readLaboratory()
	r.missing()
	r.useDefaults()
	r.check()
	return r
}

// detectorNames lists the detectors of a tree, so that entries can refer to
// one that the file describes further down.
func detectorNames(root *node) []string {
	var names []string
	if m := root.get("detectors"); m != nil {
		for _, d := range m.value.members {
			if word.MatchString(d.key) {
				names = append(names, d.key)
			}
		}
	}
	return names
}

func (r *reader) fail(name string, at place, problem, hint string) {
	r.errs = append(r.errs, Error{r.files.scenario, at.line, at.column, name, problem, hint})
}

// sortOut finds the row of everything in a group.
func (r *reader) sortOut(group *node, name string) {
	for _, m := range group.members {
		full := join(name, m.key)
		e, i := lookup(r.s, full)
		if strings.Contains(m.key, ".") || e == nil && !isGroup(full) {
			r.unknown(name, m)
			continue
		}
		r.stated[full], r.keys[full] = m.value, m.at
		switch {
		case e != nil && (e.form == ownForm || m.value.kind == scalar):
			r.leaves = append(r.leaves, stated{e, i, full, m.value})
		case isGroup(full):
			r.group(full, m)
		default:
			r.fail(full, m.value.at, m.value.kind.String()+" where a single value belongs", "write "+leaf(full)+": VALUE")
		}
	}
}

// group sorts out what stands under a name that entries stand under.
func (r *reader) group(full string, m member) {
	switch n := m.value; {
	case n.kind == mapping && len(n.members) > 0:
		r.sortOut(n, full)
		return
	case n.kind == mapping || n.kind == scalar && !n.quoted && isNull(n.text):
		r.fail(full, m.at, "empty", "state "+someOf(full)+", or leave it out")
	default:
		r.fail(full, n.at, "a group of entries belongs here, not "+n.kind.String(), "it takes "+someOf(full))
	}
	r.wrong[full] = true
}

// someOf names a few entries of a group.
func someOf(group string) string {
	names := children(group)
	if len(names) > 4 {
		names = append(names[:4:4], "...")
	}
	return strings.Join(names, ", ")
}

// children returns the names that may stand in a group, in file order.
func children(group string) []string {
	p, _, _ := pattern(group)
	var names []string
	for _, e := range table {
		rest, is := strings.CutPrefix(e.name, p+".")
		if group == "" {
			rest, is = e.name, true
		}
		first, _, _ := strings.Cut(rest, ".")
		switch {
		case !is || slices.Contains(names, first):
		case first == eitherArm:
			if !slices.Contains(names, "alice") {
				names = append(names, armNames[:]...)
			}
		default:
			names = append(names, first)
		}
	}
	return names
}

// value reads the value of one entry.
func (r *reader) value(l stated) {
	n := l.node
	switch l.row.name {
	case "origins":
		r.origins(l)
		return
	case "compare": // read by the document, case by case
		return
	}
	if !n.quoted && isNull(n.text) || strings.TrimSpace(n.text) == "" {
		hint := "state it"
		if !l.row.required {
			hint += ", or leave the entry out"
		}
		r.fail(l.name, n.at, "empty", hint)
		return
	}
	switch l.row.form {
	case numberForm:
		r.number(l)
	case textForm:
		r.text(l)
	case choiceForm:
		r.choice(l, l.row.words)
	case detectorForm:
		r.detector(l)
	}
}

// number reads a number, or one of the words that may stand for it.
func (r *reader) number(l stated) {
	n, e := l.node, l.row
	if slices.Contains(e.words, n.text) {
		e.set(r.s, l.i, n.text)
		return
	}
	x, problem, hint := parseNumber(n.text, e.unit)
	switch {
	case n.quoted && problem == "":
		problem, hint = show(n.text)+" is in quotes, which make it a text", "write it without: "+n.text
	case problem == "":
		problem, hint = e.judge(x, n.text)
	case len(e.words) > 0:
		hint += ", or " + oneOf(e.words)
	}
	if problem != "" {
		r.fail(l.name, n.at, problem, hint)
		return
	}
	at := e.at(r.s, l.i)
	if at == nil { // a second description of the state, refused elsewhere
		return
	}
	*at = x.value
	if Stated(x.sd) {
		r.s.Deviations = append(r.s.Deviations, Deviation{l.name, x.sd})
	}
}

// judge says what is wrong with a number for this entry.
func (e *row) judge(x number, text string) (problem, hint string) {
	value, _, _ := cutDeviation(text)
	switch {
	case !e.contains(x.value):
		return show(value) + e.outside(x.value), e.rangeHint(x.value)
	case e.whole && x.value != math.Trunc(x.value):
		return show(value) + " is not a whole number", e.subject() + " counts things"
	case !Stated(x.sd):
		return "", ""
	case e.exact:
		return "a standard deviation has no meaning here", "write the number alone: " + value
	case x.sd > e.hi-e.lo:
		return "the standard deviation " + figure(x.sd) + " is wider than the range, " + e.numbers(), "write it in the unit of the number, not in per cent"
	}
	return "", ""
}

// subject is the row's name as a sentence uses it.
func (e *row) subject() string {
	return leaf(strings.TrimSuffix(e.name, "."+eitherArm))
}

// outside says which end of the range a number lies beyond.
func (e *row) outside(x float64) string {
	switch {
	case x == e.lo:
		return " is not above " + figure(e.lo)
	case x == e.hi:
		return " is not below " + figure(e.hi)
	}
	return " is outside " + e.numbers()
}

// numbers is the range without regard to its very ends.
func (e *row) numbers() string { return figure(e.lo) + " to " + figure(e.hi) }

// nearOne is up to where a fraction above 1 may be a slip rather than per cent.
const nearOne = 2

// rangeHint guesses what a number outside the range was meant to be.
func (e *row) rangeHint(x float64) string {
	name := e.subject()
	switch {
	case e.fraction && x > 1 && x <= nearOne:
		return name + " is a fraction, at most 1; in per cent it would be " + brief(x/100)
	case e.fraction && x > 1 && x <= 100 && e.contains(x/100):
		return name + " is a fraction: " + brief(x/100)
	case e.hint == lengthHint && x > e.hi:
		return fmt.Sprintf("%s %s m are %s km", lengthHint, figure(x), brief(x/1000))
	case e.hint == lengthHint:
		return "a length is 0 km or more"
	case e.hint == lossHint && x > 0:
		return "a loss in dB: 10 times the logarithm of power in over power out"
	case e.unit == "nm" && x > 0 && e.contains(x*1000):
		return "nanometres, not micrometres? " + brief(x*1000)
	case e.hint != "":
		return e.hint
	case e.unit != "":
		return name + " is in " + e.unit
	}
	return name + ": " + e.meaning
}
