package scenarios

import (
	"regexp"
	"strings"
	"testing"
	"unicode/utf8"
)

func TestStarterLoads(t *testing.T) {
	s := mustRead(t, Starter())
	if len(s.Compare) != 1 || len(s.Origins) != 1 || len(s.Deviations) == 0 || !Stated(s.NeedBps) {
		t.Errorf("%+v", s)
	}
	for i, line := range strings.Split(Starter(), "\n") {
		if n := utf8.RuneCountInString(line); n > maxColumns {
			t.Errorf("line %d has %d columns", i+1, n)
		}
		if strings.TrimRight(line, " ") != line {
			t.Errorf("line %d ends in spaces", i+1)
		}
	}
}

// Every entry of the table stands in the starting file.
func TestStarterIsComplete(t *testing.T) {
	text := Starter()
	for i := range table {
		name := strings.TrimSuffix(table[i].name, "."+eitherArm)
		if !regexp.MustCompile(`(?m)^ *#? *` + regexp.QuoteMeta(leaf(name)) + `:`).MatchString(text) {
			t.Errorf("%s is missing", table[i].name)
		}
	}
}

var leftOut = regexp.MustCompile(`^( *)#( *[a-z_]+:.*)$`)

// Taking the # from an entry that is left out, with the lines that belong to
// it, states that entry at the right place: it is known there, and what may
// be wrong is only what it cannot stand beside.
func TestStarterCanBeUncommented(t *testing.T) {
	lines := strings.Split(Starter(), "\n")
	n := 0
	for i, line := range lines {
		m := leftOut.FindStringSubmatch(line)
		if m == nil || strings.HasPrefix(m[2], " ") {
			continue
		}
		n++
		edited := append([]string{}, lines...)
		edited[i] = m[1] + m[2]
		for j := i + 1; j < len(lines) && strings.HasPrefix(lines[j], m[1]+"#  "); j++ {
			edited[j] = m[1] + strings.TrimPrefix(lines[j], m[1]+"#")
		}
		_, err := Read(laboratory, "x.yaml", []byte(strings.Join(edited, "\n")))
		if err == nil {
			continue
		}
		for _, e := range err.(Errors) {
			if !strings.Contains(e.Problem, "cannot stand beside") && !strings.Contains(e.Problem, "only a pulsed source") && !strings.Contains(e.Problem, "only a need") &&
				!strings.Contains(e.Problem, "stands here twice") {
				t.Errorf("%s: %v", m[2], e)
			}
		}
	}
	if n < 20 {
		t.Errorf("only %d entries are left out", n)
	}
}

// bellCounts are what a Bell state gives at the sixteen pairs of H, V, D and R.
const bellCounts = "alice,bob,counts\n" +
	"H,H,500\nH,V,0\nH,D,250\nH,R,250\nV,H,0\nV,V,500\nV,D,250\nV,R,250\n" +
	"D,H,250\nD,V,250\nD,D,500\nD,R,250\nR,H,250\nR,V,250\nR,D,250\nR,R,0\n"
