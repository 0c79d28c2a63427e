package scenarios

import (
	"regexp"
	"strconv"
	"strings"
)

// bare is a text that YAML reads the same way without quotes, inside
// brackets too.
var bare = regexp.MustCompile(`^([\pL0-9./_+±]|-[0-9.])([\pL0-9./_+±% -]*[\pL0-9./_+±%-])?$`)

// String writes a node as a value stands in a file, on one line.
func (n *node) String() string {
	var b strings.Builder
	n.write(&b)
	return b.String()
}

func (n *node) write(b *strings.Builder) {
	switch {
	case n.kind == mapping:
		b.WriteByte('{')
		for i, m := range n.members {
			if i > 0 {
				b.WriteByte(',')
			}
			b.WriteString(" " + quoted(m.key) + ": ")
			m.value.write(b)
		}
		b.WriteString(" }")
	case n.kind == list:
		b.WriteByte('[')
		for i, item := range n.items {
			if i > 0 {
				b.WriteString(", ")
			}
			item.write(b)
		}
		b.WriteByte(']')
	case !n.quoted && isNull(n.text):
		b.WriteByte('~')
	case n.quoted:
		b.WriteString(strconv.Quote(n.text)) // its escapes are YAML's too
	default:
		b.WriteString(quoted(n.text))
	}
}

// quoted writes a plain text, in quotes only where it needs them.
func quoted(text string) string {
	if bare.MatchString(text) {
		return text
	}
	return strconv.Quote(text)
}
