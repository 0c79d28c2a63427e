package scenarios

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// FiledName is the name of the scenario itself among its compared cases.
const FiledName = "as filed"

// maxCases bounds the compared cases of a file: each is a whole plan.
const maxCases = 200

// variant is a compared case before it is read.
type variant struct {
	name  string
	at    place
	edits []edit
	tree  *node // with the edits made
}

// comparer lists the variants of a document.
type comparer struct {
	d        *Document
	r        *reader // of the scenario as filed: takes the errors
	base     *node   // the tree that is changed
	variants []variant
	seen     map[string]bool // trees, written out
}

// cases reads the compared cases; r has read the scenario as filed.
func (d *Document) cases(r *reader) []Case {
	m := d.root.get("compare")
	if m == nil || len(r.errs) > maxErrors {
		return nil
	}
	base := d.root.without([]string{"compare"}).without([]string{"origins"})
	c := comparer{d: d, r: r, base: base, seen: map[string]bool{base.String(): true}}
	if m.value.kind != list || len(m.value.items) == 0 {
		r.fail("compare", m.value.at, "it takes a list of cases", "write - { name: NAME, change: { ENTRY: VALUE } }")
		return nil
	}
	for i, item := range m.value.items {
		c.item(fmt.Sprintf("compare.%d", i+1), item)
	}
	if len(c.variants) > maxCases {
		r.fail("compare", m.at, fmt.Sprintf("more than %d cases", maxCases), "compare fewer, or name fewer detectors")
		return nil
	}
	c.checkNames()
	var cases []Case
	for _, v := range c.variants {
		cases = append(cases, c.read(v))
	}
	return cases
}

// item lists the variants of one item of compare.
func (c *comparer) item(entry string, n *node) {
	if n.kind != mapping || len(n.members) == 0 {
		c.r.fail(entry, n.at, "a case is a mapping", "write - { name: NAME, change: { ENTRY: VALUE } }")
		return
	}
	for _, m := range n.members {
		if known := []string{"name", "change", "every_detector"}; !slices.Contains(known, m.key) {
			hint := cmp.Or(didYouMean(m.key, known), "a case takes name, change or every_detector")
			if isEntry(m.key) {
				hint = "an entry stands under change: { " + m.key + ": VALUE }"
			}
			c.r.fail(join(entry, escape(shorten(m.key))), m.at, "unknown entry", hint)
			return
		}
	}
	name, change, every := n.get("name"), n.get("change"), n.get("every_detector")
	switch {
	case every != nil && len(n.members) > 1:
		c.r.fail(entry, every.at, "every_detector stands alone", "make it an item of its own: - { every_detector: true }")
	case every != nil && (every.value.text != "true" || every.value.quoted):
		c.r.fail(join(entry, "every_detector"), every.value.at, "it is true or left out", "write - { every_detector: true }")
	case every != nil:
		c.everyDetector(every.at)
	case change == nil:
		c.r.fail(entry, n.members[0].at, "change: required, but missing", "write change: { ENTRY: VALUE }")
	default:
		c.change(entry, name, change)
	}
}

// change adds the variant of one case's changes.
func (c *comparer) change(entry string, name, change *member) {
	if change.value.kind != mapping || len(change.value.members) == 0 {
		c.r.fail(join(entry, "change"), change.value.at, "it takes a mapping of entries to values", "write change: { arms.bob.length_km: 12 }")
		return
	}
	v := variant{at: change.at}
	var texts []string
	for _, m := range change.value.members {
		if problem, hint := c.changeable(m.key); problem != "" {
			c.r.fail(join(entry, "change."+escape(shorten(m.key))), m.at, problem, hint)
			return
		}
		v.edits = append(v.edits, edit{m.key, m.at, m.value})
		texts = append(texts, m.key+"="+m.value.String())
	}
	v.name = shorten(strings.Join(texts, ", "))
	if name != nil {
		var ok bool
		if v.name, ok = c.r.line(join(entry, "name"), name.value); !ok {
			return
		}
		v.at = name.value.at
	}
	c.add(v)
}

// changeable says why a case cannot change an entry, "" if it can.
func (c *comparer) changeable(entry string) (problem, hint string) {
	switch first, _, _ := strings.Cut(entry, "."); first {
	case "title", "compare", "distance", "need", "origins":
		return "a case cannot change " + first, "it is the same for all cases; a case changes the source, arms, detectors and settings"
	}
	return c.d.changeable(entry)
}

// add makes a variant's edits and keeps it.
func (c *comparer) add(v variant) {
	if len(c.variants) > maxCases { // too many already: only count
		c.variants = append(c.variants, v)
		return
	}
	tree, errs := c.d.edited(c.base, v.edits)
	for _, e := range errs {
		c.r.errs = append(c.r.errs, e.ofCase(v.name))
	}
	if len(errs) == 0 {
		v.tree = tree
		c.seen[tree.String()] = true
		c.variants = append(c.variants, v)
	}
}

// everyDetector adds a variant for each pair of detectors that no case
// before has.
func (c *comparer) everyDetector(at place) {
	names := detectorNames(c.base)
	for _, alice := range names {
		for _, bob := range names {
			v := variant{name: alice + "+" + bob, at: at, edits: []edit{
				{"arms.alice.detector", at, &node{text: alice, at: at}},
				{"arms.bob.detector", at, &node{text: bob, at: at}},
			}}
			if tree, _ := c.d.edited(c.base, v.edits); !c.seen[tree.String()] {
				c.add(v)
			}
			if len(c.variants) > maxCases {
				return
			}
		}
	}
}

// checkNames reports names that stand twice.
func (c *comparer) checkNames() {
	first := map[string]place{FiledName: {}}
	for _, v := range c.variants {
		at, taken := first[v.name]
		switch {
		case v.name == FiledName:
			c.r.fail("compare", v.at, show(v.name)+" is the name of the scenario itself", "choose another name")
		case taken:
			c.r.fail("compare", v.at, fmt.Sprintf("a case named %s stands in line %d already", show(v.name), at.line), "give each case a name of its own")
		default:
			first[v.name] = v.at
		}
	}
}

// read reads one case. What is wrong with the scenario as filed is not said
// again.
func (c *comparer) read(v variant) Case {
	r := c.d.read(v.tree)
	r.s.Origins = c.r.s.Origins
	places := v.places()
	for _, e := range r.errs {
		here := e.File == c.r.files.scenario
		own := here && places[place{e.Line, e.Column}]
		if !own && slices.ContainsFunc(c.r.errs, e.like) {
			continue
		}
		if here && !own {
			e.Line, e.Column = v.edits[0].at.line, v.edits[0].at.column
		}
		c.r.errs = append(c.r.errs, e.ofCase(v.name))
	}
	out := Case{Name: v.name, Scenario: r.s}
	for _, e := range v.edits {
		out.Changes = append(out.Changes, Change{e.entry, e.value.String()})
	}
	return out
}

// places are where a variant's edits stand in the file.
func (v *variant) places() map[place]bool {
	m := map[place]bool{}
	for _, e := range v.edits {
		m[e.at] = true
		e.value.places(m)
	}
	return m
}

func (n *node) places(m map[place]bool) {
	m[n.at] = true
	for _, inner := range n.members {
		m[inner.at] = true
		inner.value.places(m)
	}
	for _, item := range n.items {
		item.places(m)
	}
}

// like reports whether another error says the same, wherever it stands.
func (e Error) like(other Error) bool {
	return e.File == other.File && e.Entry == other.Entry && e.Problem == other.Problem
}

// ofCase returns the error as one of a compared case.
func (e Error) ofCase(name string) Error {
	e.Problem = "in case " + show(name) + ": " + e.Problem
	return e
}
