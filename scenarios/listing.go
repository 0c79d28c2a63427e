package scenarios

import (
	"fmt"
	"strings"
)

const listingWidth = 90

// Listing describes the entries whose name begins with prefix, each with its
// meaning, unit, range, default and where that comes from; "" where there is
// none. Either arm's name, and any detector's, finds the entries of all.
func Listing(prefix string) string {
	var b strings.Builder
	for _, e := range Entries() {
		if !listed(e.Name, prefix) {
			continue
		}
		if b.Len() > 0 {
			b.WriteByte('\n')
		}
		b.WriteString(e.Name + "\n")
		for _, line := range fold(e.Meaning, listingWidth-4) {
			b.WriteString("    " + line + "\n")
		}
		for _, line := range fold(e.facts(), listingWidth-4) {
			b.WriteString("    " + line + "\n")
		}
	}
	return b.String()
}

// facts is the second half of an entry's description.
func (e *Entry) facts() string {
	var facts []string
	if e.Unit != "" {
		facts = append(facts, "in "+e.Unit)
	}
	facts = append(facts, e.Range)
	switch {
	case e.Required:
		facts = append(facts, "required")
	case e.Default != "":
		facts = append(facts, fmt.Sprintf("default %s (%s)", e.Default, e.DefaultSource))
	}
	return strings.Join(facts, "; ")
}

// listed compares with the pattern too, whose words stand for names.
func listed(name, prefix string) bool {
	if strings.HasPrefix(name, prefix) {
		return true
	}
	p, _, _ := pattern(strings.TrimSuffix(prefix, "."))
	return p != "" && strings.HasPrefix(name, p)
}

// fold breaks text at spaces into lines of at most width columns.
func fold(text string, width int) (lines []string) {
	line := ""
	for _, w := range strings.Fields(text) {
		if line != "" && len(line)+1+len(w) > width {
			lines, line = append(lines, line), ""
		}
		if line != "" {
			line += " "
		}
		line += w
	}
	return append(lines, line)
}
