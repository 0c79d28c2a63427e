package scenarios

import (
	"bytes"
	"io"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"gopkg.in/yaml.v3"
)

// The library names the line of the construct that an error lies in, and
// none at all for the first line. The first line after the longest beginning
// that can be read is what a person has to look at.
const (
	maxTrials     = 400       // beginnings tried
	maxTrialBytes = 512 << 10 // and their size in all
)

var lineOf = regexp.MustCompile(`^yaml: (?:line ([0-9]+): )?(.*)`)

// restated are the library's complaints in the words of this program.
var restated = []struct{ contains, problem, hint string }{
	{"found character that cannot start any token", "a value cannot begin like this", "put a text that begins with such a sign in quotes"},
	{"mapping values are not allowed", "a second colon in one value", "put a text that holds a colon and a space in quotes; check the indentation"},
	{"block sequence entries are not allowed", "a list item cannot stand here", "write each item on a line of its own, or the list in brackets"},
	{"could not find expected ':'", "no colon after the entry's name", "write the entry as name: value"},
	{"did not find expected key", "the indentation does not fit the lines above, or a sign is missing", "entries of one group begin in the same column"},
	{"did not find expected '-' indicator", "the indentation does not fit the list above", "items of one list begin in the same column"},
	{"did not find expected ',' or", "a bracket is not closed, or a comma is missing", "write { name: value, name: value }"},
	{"unexpected end of stream", "a quote is not closed", "close it on the same line"},
	{"unexpected document indicator", "a quote is not closed", "close it on the same line"},
	{"escape", "a backslash in double quotes begins an escape that does not exist", "use single quotes"},
	{"hexdecimal", "a backslash in double quotes begins an escape that does not exist", "use single quotes"},
	{"exceeded max depth", "brackets or indentation are nested too deeply", "a scenario needs four levels"},
	{"did not find expected node content", "a value is missing or cannot begin like this", "check brackets and commas"},
	{"document start", "text after the end of the document", "a file holds one scenario"},
}

// yamlError restates an error of the library with its place.
func yamlError(file string, data []byte, err error) Error {
	m := lineOf.FindStringSubmatch(err.Error())
	if m == nil {
		m = []string{"", "", err.Error()}
	}
	out := Error{File: file, Line: 1, Column: 1, Problem: "the text is not YAML", Hint: "check the indentation, brackets and quotes near here"}
	for _, r := range restated {
		if strings.Contains(m[2], r.contains) {
			out.Problem, out.Hint = r.problem, r.hint
			break
		}
	}
	lines := bytes.SplitAfter(data, []byte("\n"))
	if name, is := strings.CutPrefix(m[2], "unknown anchor '"); is {
		name = strings.TrimSuffix(name, "' referenced")
		out.Problem, out.Hint = "there is no anchor &"+escape(shorten(name)), "an alias *name needs an anchor &name above it"
		out.Line, out.Column = find(lines, "*"+name)
		return out
	}
	said, _ := strconv.Atoi(m[1])
	out.Line = min(max(1, failingLine(data, lines, said)), len(lines))
	line := lines[out.Line-1]
	out.Column = indent(line) + 1
	if tab := bytes.IndexByte(line, '\t'); tab >= 0 && (tab <= indent(line) || strings.Contains(m[2], "cannot start any token")) {
		out.Column = utf8.RuneCount(line[:tab]) + 1
		out.Problem, out.Hint = "a tab where YAML wants spaces", "indent with spaces"
	}
	return out
}

// find returns the place of a text.
func find(lines [][]byte, text string) (line, column int) {
	for i, l := range lines {
		if at := bytes.Index(l, []byte(text)); at >= 0 {
			return i + 1, utf8.RuneCount(l[:at]) + 1
		}
	}
	return 1, 1
}

// indent counts the spaces that a line begins with.
func indent(line []byte) int { return len(line) - len(bytes.TrimLeft(line, " ")) }

// failingLine returns the line after the longest beginning of whole lines
// that can be read, or the line that the library said where that takes long.
func failingLine(data []byte, lines [][]byte, said int) int {
	r := &lineReader{lines: lines}
	d := yaml.NewDecoder(r)
	for err := error(nil); err == nil; {
		_, err = decode(d)
	}
	size, spent := 0, 0
	for _, l := range lines[:r.next] {
		size += len(l)
	}
	for n := r.next; n > 0; n-- {
		size -= len(lines[n-1])
		if spent += size; spent > maxTrialBytes || r.next-n > maxTrials {
			return said
		}
		if readable(data[:size]) {
			return n
		}
	}
	return 1
}

func readable(data []byte) bool {
	d := yaml.NewDecoder(bytes.NewReader(data))
	for {
		if _, err := decode(d); err != nil {
			return err == io.EOF
		}
	}
}

// lineReader hands out whole lines, and so knows how far its reader came.
type lineReader struct {
	lines [][]byte
	next  int
	rest  []byte
}

func (r *lineReader) Read(p []byte) (int, error) {
	if len(r.rest) == 0 {
		if r.next == len(r.lines) {
			return 0, io.EOF
		}
		r.rest = r.lines[r.next]
		r.next++
	}
	n := copy(p, r.rest)
	r.rest = r.rest[n:]
	return n, nil
}
