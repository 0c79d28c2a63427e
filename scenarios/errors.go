package scenarios

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

// Error is one thing wrong with a scenario, at its place in the file.
type Error struct {
	File         string
	Line, Column int    // from 1
	Entry        string // dotted name; "" where the file as a whole is meant
	Problem      string
	Hint         string // what to do next; "" where the problem says it
}

// Error returns the place, the entry and the problem on one line, and the
// hint on the next.
//
//	lab/link.yaml:9:16: detectors.gated.efficiency: 85 is outside 0 to 1
//	        hint: efficiency is a fraction: 0.85
func (e Error) Error() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s:%d:%d: ", escape(e.File), e.Line, e.Column)
	if e.Entry != "" {
		b.WriteString(e.Entry + ": ")
	}
	b.WriteString(e.Problem)
	if e.Hint != "" {
		b.WriteString("\n        hint: " + e.Hint)
	}
	return b.String()
}

// Errors is everything wrong with a scenario, sorted by place. It is the
// only type of error that reading returns, and never empty.
type Errors []Error

// maxErrors is how many errors are worth reading, and worth a hint.
const maxErrors = 50

// Error returns the errors one after the other.
func (e Errors) Error() string {
	var lines []string
	for _, one := range e[:min(len(e), maxErrors)] {
		lines = append(lines, one.Error())
	}
	if len(e) > maxErrors {
		lines = append(lines, "and more")
	}
	return strings.Join(lines, "\n")
}

// sorted orders the errors by file, place and entry, the scenario's own
// file first, and drops repetitions.
func (e Errors) sorted(own string) Errors {
	slices.SortStableFunc(e, func(a, b Error) int {
		return cmp.Or(
			cmp.Compare(rank(a.File, own), rank(b.File, own)), cmp.Compare(a.File, b.File),
			cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column),
			cmp.Compare(a.Entry, b.Entry), cmp.Compare(a.Problem, b.Problem))
	})
	return slices.Compact(e)
}

func rank(file, own string) int {
	if file == own {
		return 0
	}
	return 1
}

const maxShown = 40 // characters of a value that an error repeats

// show returns a person's own words for an error: quoted unless they are a
// plain number or word, shortened where long, control characters escaped.
func show(text string) string {
	plain := text != ""
	for _, r := range text {
		plain = plain && (r == '.' || r == '-' || r == '+' || r == '_' || r == '±' ||
			unicode.IsLetter(r) || unicode.IsDigit(r))
	}
	text = shorten(text)
	if plain {
		return text
	}
	return strconv.Quote(text)
}

// shorten cuts a text to what an error repeats.
func shorten(text string) string {
	r := []rune(text)
	if len(r) <= maxShown {
		return text
	}
	return string(r[:maxShown-3]) + "..."
}

// escape makes a name safe to print: no control characters.
func escape(text string) string {
	quoted := strconv.Quote(text)
	if inner := quoted[1 : len(quoted)-1]; strings.IndexFunc(text, func(r rune) bool { return !unicode.IsPrint(r) }) >= 0 {
		return inner
	}
	return text
}

// nearest returns the one of names that text most likely meant: one that it
// begins or ends, or one a few slips of the keyboard away; "" if none is near.
func nearest(text string, names []string) string {
	text = strings.ToLower(text)
	best, least := "", max(1, (len([]rune(text))+1)/3)+1
	for _, name := range names {
		d := slips(text, strings.ToLower(name))
		if len(text) >= 4 && (strings.HasPrefix(name, text+"_") || strings.HasSuffix(name, "_"+text)) {
			d = 0
		}
		if d < least {
			best, least = name, d
		}
	}
	return best
}

// slips counts the insertions, deletions, replacements and swaps of
// neighbours between two words (optimal string alignment).
func slips(a, b string) int {
	s, t := []rune(shorten(a)), []rune(shorten(b))
	rows := make([][]int, len(s)+1)
	for i := range rows {
		rows[i] = make([]int, len(t)+1)
		rows[i][0] = i
	}
	for j := range t {
		rows[0][j+1] = j + 1
	}
	for i := range s {
		for j := range t {
			cost := 1
			if s[i] == t[j] {
				cost = 0
			}
			d := min(rows[i][j]+cost, rows[i][j+1]+1, rows[i+1][j]+1)
			if i > 0 && j > 0 && s[i] == t[j-1] && s[i-1] == t[j] {
				d = min(d, rows[i-1][j-1]+1)
			}
			rows[i+1][j+1] = d
		}
	}
	return rows[len(s)][len(t)]
}
