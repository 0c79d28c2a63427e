package scenarios

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// text reads a line of text.
func (r *reader) text(l stated) {
	if text, ok := r.line(l.name, l.node); ok {
		l.row.set(r.s, l.i, text)
	}
}

const maxLine = 200 // characters of a title, a name or an origin

// line returns a text on one line, white space tidied.
func (r *reader) line(name string, n *node) (string, bool) {
	text := strings.Join(strings.Fields(n.text), " ")
	i := strings.IndexFunc(text, func(c rune) bool { return !strconv.IsPrint(c) && c != '\u200c' && c != '\u200d' })
	switch {
	case n.kind != scalar:
		r.fail(name, n.at, n.kind.String()+" where a line of text belongs", "put a text that begins with a bracket in quotes")
	case text == "" || !n.quoted && isNull(text):
		r.fail(name, n.at, "empty", "write a line of text")
	case i >= 0:
		r.fail(name, n.at, fmt.Sprintf("%s holds a control character", show(text)), "remove it")
	case len([]rune(text)) > maxLine:
		r.fail(name, n.at, fmt.Sprintf("longer than %d characters", maxLine), "shorten it")
	default:
		return text, true
	}
	return "", false
}

// choice reads one of a few words.
func (r *reader) choice(l stated, words []string) {
	if slices.Contains(words, l.node.text) {
		l.row.set(r.s, l.i, l.node.text)
		return
	}
	r.fail(l.name, l.node.at, show(l.node.text)+" is none of "+oneOf(words), cmp.Or(didYouMean(l.node.text, words), l.row.subject()+": "+l.row.meaning))
}

// detector reads the name of one of the scenario's detectors.
func (r *reader) detector(l stated) {
	name := l.node.text
	switch {
	case r.s.Detector(name) != nil:
		l.row.set(r.s, l.i, name)
		return
	case len(r.s.Detectors) == 0: // which is an error of its own
		return
	}
	r.fail(l.name, l.node.at, show(name)+" is not among the detectors", r.detectorHint(name))
}

// detectorHint says which detectors there are.
func (r *reader) detectorHint(name string) string {
	var names []string
	for _, d := range r.s.Detectors {
		names = append(names, d.Name)
	}
	if len(names) == 0 {
		return "describe it under detectors"
	}
	return cmp.Or(didYouMean(name, names), "there are: "+shortList(names))
}

// origins reads where figures come from: a text for each entry.
func (r *reader) origins(l stated) {
	if l.node.kind != mapping || len(l.node.members) == 0 {
		r.fail(l.name, l.node.at, "it takes a mapping of entries to texts", "write origins: { arms.bob.length_km: \"as built\" }")
		return
	}
	for _, m := range l.node.members {
		name := join(l.name, escape(shorten(m.key)))
		if problem, hint := r.known(m.key); problem != "" {
			r.fail(name, m.at, problem, hint)
		} else if text, ok := r.line(name, m.value); ok {
			r.s.Origins = append(r.s.Origins, Origin{m.key, text})
		}
	}
}

// known says what is wrong with a dotted name, "" for an entry or a group
// that this scenario can have.
func (r *reader) known(name string) (problem, hint string) {
	e, i := lookup(r.s, name)
	_, _, detector := pattern(name)
	switch {
	case e != nil && e.form == ownForm:
		return "not an entry of the link", "name an entry such as arms.bob.length_km"
	case isEntry(name) && (detector == "" || i >= 0):
		return "", ""
	case isEntry(name):
		return show(detector) + " is not among the detectors", r.detectorHint(detector)
	}
	group, key := "", name
	for isGroup(join(group, before(key, "."))) && strings.Contains(key, ".") {
		first, rest, _ := strings.Cut(key, ".")
		group, key = join(group, first), rest
	}
	return "unknown entry", r.hintFor(group, before(key, "."))
}

func before(text, mark string) string {
	head, _, _ := strings.Cut(text, mark)
	return head
}
