package scenarios

import "strings"

const starterHead = `# A scenario for pairspan: put in your own figures, then run
#     pairspan plan FILE
# A line such as #duty_cycle: 0.9 is an entry that is left out; take its # away to state it.
# A figure may carry one standard deviation: 0.88 +- 0.02. All figures here are invented.
`

// starterDetector is the one detector of the starting file.
const starterDetector = "free_running"

// Starter returns a commented scenario to start from: every entry with its
// meaning, unit, range and default. It can be planned without edits.
func Starter() string {
	root := &item{}
	s := &Scenario{Detectors: []Detector{{Name: starterDetector}}}
	each(s, func(e *row, i int, name string) {
		path := strings.Split(strings.TrimSuffix(name, "."+armNames[Alice]), ".")
		switch {
		case path[len(path)-1] == armNames[Bob]:
		case i == Alice: // or no arm's at all
			root.add(path, e, fold(e.explained(), maxColumns-2*len(path)-2))
		case e.active: // Bob's arm is explained by Alice's
			root.add(path, e, nil)
		}
	})
	var b strings.Builder
	b.WriteString(starterHead)
	for _, top := range root.inner {
		b.WriteByte('\n')
		top.write(&b, "", "")
	}
	return b.String()
}

// item is an entry or a group of the starting file.
type item struct {
	key, value string
	comments   []string
	active     bool // stands without #; a group does if one of its entries does
	inner      []*item
}

// add puts an entry in its place.
func (it *item) add(path []string, e *row, comments []string) {
	it.active = it.active || e.active
	var next *item
	for _, in := range it.inner {
		if in.key == path[0] {
			next = in
		}
	}
	if next == nil || len(path) == 1 {
		next = &item{key: path[0]}
		it.inner = append(it.inner, next)
	}
	if len(path) > 1 {
		next.add(path[1:], e, comments)
		return
	}
	next.active, next.comments = e.active, comments
	next.value = e.exampleFor(it.key)
}

// exampleFor returns the value that an entry has in the starting file.
func (e *row) exampleFor(group string) string {
	bob := e.bob
	if bob == "" {
		bob = e.example
	}
	switch {
	case strings.HasSuffix(e.name, "."+eitherArm):
		return "{ alice: " + e.example + ", bob: " + bob + " }"
	case group == armNames[Bob]:
		return bob
	}
	return e.example
}

// write writes an item. What is left out carries its # where the outermost
// item that is left out begins, so that taking it away leaves the indentation
// right.
func (it *item) write(b *strings.Builder, mark, indent string) {
	for _, c := range it.comments {
		b.WriteString(mark + indent + "# " + c + "\n")
	}
	if !it.active && mark == "" {
		mark, indent = indent+"#", ""
	}
	text := it.key + ":"
	if it.value != "" {
		text += " " + strings.ReplaceAll(it.value, "\n", "\n"+mark+indent+"  ")
	}
	b.WriteString(mark + indent + strings.ReplaceAll(text, ": \n", ":\n") + "\n")
	for _, in := range it.inner {
		in.write(b, mark, indent+"  ")
	}
}

// explained describes an entry in a comment.
func (e *row) explained() string {
	parts := []string{e.meaning}
	if e.unit != "" {
		parts = append(parts, e.unit)
	}
	parts = append(parts, e.rangeText())
	switch {
	case e.required:
		parts = append(parts, "required")
	case e.def != "":
		parts = append(parts, "default "+e.def+" ("+e.source+")")
	}
	return strings.Join(parts, "; ")
}

const maxColumns = 100
