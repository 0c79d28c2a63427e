package scenarios

import (
	"slices"
	"strings"
)

// unknown reports a name that the table does not have, and guesses what was
// meant.
func (r *reader) unknown(group string, m member) {
	name := join(group, escape(shorten(m.key)))
	switch {
	case group == "detectors":
		r.fail(name, m.at, show(m.key)+" cannot be a detector's name", "a name is lower-case letters, digits, _ and -, a letter first")
	case len(r.errs) > maxErrors: // each hint compares the name with all others
		r.fail(name, m.at, "unknown entry", "")
	default:
		r.fail(name, m.at, "unknown entry", r.hintFor(group, m.key))
	}
}

// hintFor says what a name that a group does not take may have meant.
func (r *reader) hintFor(group, key string) string {
	if strings.Contains(key, ".") && (isEntry(key) || isEntry(join(group, key))) {
		return "in a file, entries stand inside their groups: " +
			strings.ReplaceAll(key, ".", ": { ") + ": ..." + strings.Repeat(" }", strings.Count(key, "."))
	}
	if where := r.belongs(group, key); where != "" {
		return where
	}
	here := children(group)
	if near := nearest(key, here); near != "" {
		r.meant[join(group, near)] = true
		return "did you mean " + near + "?"
	}
	if near := nearest(key, leaves()); near != "" {
		return "did you mean " + near + "? " + r.belongs(group, near)
	}
	if group == "" {
		return "pairspan entries lists all that there are"
	}
	return group + " takes " + shortList(here)
}

// leaves lists the last words of all entries but the arms' names.
func leaves() []string {
	var names []string
	for _, e := range table {
		if name := leaf(e.name); name != eitherArm {
			names = append(names, name)
		}
	}
	return names
}

// belongs says where an entry of that last word belongs, "" if none has it.
func (r *reader) belongs(group, name string) string {
	if name == eitherArm {
		return ""
	}
	i := slices.IndexFunc(table, func(e row) bool {
		return leaf(e.name) == name && !strings.HasPrefix(e.name, "source.counted.")
	})
	if i < 0 {
		return ""
	}
	switch home := parent(table[i].name); {
	case home == "":
		return name + " belongs at the top level"
	case strings.HasPrefix(home, "detectors."):
		return "a detector's " + name + " belongs under detectors." + r.detectorAt(group)
	case strings.HasPrefix(home, "arms."):
		return name + " belongs under arms.alice or arms.bob"
	default:
		return name + " belongs under " + home
	}
}

// detectorAt names the detector of the arm that a group is, or NAME.
func (r *reader) detectorAt(group string) string {
	if n := r.stated["arms"]; n != nil && parent(group) == "arms" {
		if arm := n.get(leaf(group)); arm != nil {
			if d := arm.value.get("detector"); d != nil && r.s.Detector(d.value.text) != nil {
				return d.value.text
			}
		}
	}
	return anyDetector
}

// didYouMean suggests the nearest of a few names, "" if none is near.
func didYouMean(text string, names []string) string {
	if near := nearest(text, names); near != "" {
		return "did you mean " + near + "?"
	}
	return ""
}

const maxListed = 8

// shortList lists names, the first few of many.
func shortList(names []string) string {
	if len(names) > maxListed {
		names = append(slices.Clone(names[:maxListed]), "...")
	}
	return strings.Join(names, ", ")
}
