package scenarios

import (
	"fmt"
	"strings"
	"testing"
	"time"
	"unicode/utf16"

	"pgregory.net/rapid"
)

func mustTree(t *testing.T, text string) *node {
	t.Helper()
	root, errs := parseTree("x.yaml", []byte(text))
	if len(errs) > 0 {
		t.Fatal(errs)
	}
	return root
}

func TestAliasesAndMerges(t *testing.T) {
	root := mustTree(t, strings.Join([]string{
		"base: &base { a: 1, b: 2 }", // line 1
		"more: &more { b: 3, c: 4 }",
		"copy: *base",
		"one: { <<: *base, b: 9 }",
		"two: { d: 5, <<: [*more, *base] }",
		`not: { "<<": 1 }`,
	}, "\n"))
	for name, want := range map[string]string{
		"copy": "{ a: 1, b: 2 }",
		"one":  "{ a: 1, b: 9 }",             // what the mapping says itself goes first
		"two":  "{ d: 5, b: 3, c: 4, a: 1 }", // and then the earlier merge
		"not":  `{ "<<": 1 }`,
	} {
		if got := root.get(name).value.String(); got != want {
			t.Errorf("%s: got %s, want %s", name, got, want)
		}
	}
	// What an alias brings in stands where the alias stands.
	for name, want := range map[string]place{"copy": {3, 7}, "one": {4, 12}, "two": {5, 26}} {
		if got := root.get(name).value.get("a").value.at; got != want {
			t.Errorf("%s: a at %v, want %v", name, got, want)
		}
	}
	if got := root.get("one").value.get("b").at; got != (place{4, 19}) {
		t.Errorf("own entry at %v", got)
	}
}

// A chain of ten anchors of ten aliases each stands for 10^10 values.
func TestAliasBombEndsSoon(t *testing.T) {
	var b strings.Builder
	b.WriteString("a0: &a0 [x, x, x, x, x, x, x, x, x, x]\n")
	for i := 1; i <= 10; i++ {
		fmt.Fprintf(&b, "a%d: &a%d [%s]\n", i, i, strings.TrimSuffix(strings.Repeat(fmt.Sprintf("*a%d, ", i-1), 10), ", "))
	}
	merges := strings.NewReplacer("[", "{ <<: [", "]", "] }").Replace(strings.Replace(b.String(), "[x, x, x, x, x, x, x, x, x, x]", "{ x: 1 }", 1))
	for _, text := range []string{b.String(), merges} {
		start := time.Now()
		_, errs := parseTree("x.yaml", []byte(text))
		if len(errs) == 0 || !strings.Contains(errs[0].Problem, "more than 20000 values") {
			t.Errorf("got %v", errs)
		}
		if d := time.Since(start); d > patience {
			t.Errorf("took %v", d)
		}
	}
}

func TestBounds(t *testing.T) {
	values := func(n int) string { return "a: [" + strings.Repeat("x,", n-2) + "]" } // and the root, and the list
	if _, errs := parseTree("x.yaml", []byte(values(maxNodes))); len(errs) > 0 {
		t.Error(errs)
	}
	if _, errs := parseTree("x.yaml", []byte(values(maxNodes+1))); len(errs) != 1 {
		t.Error(errs)
	}
	deep := func(n int) string { return "a: " + strings.Repeat("[", n-1) + "x" + strings.Repeat("]", n-1) }
	if _, errs := parseTree("x.yaml", []byte(deep(maxDepth))); len(errs) > 0 {
		t.Error(errs)
	}
	if _, errs := parseTree("x.yaml", []byte(deep(maxDepth+1))); len(errs) != 1 {
		t.Error(errs)
	}
	if _, errs := parseTree("x.yaml", []byte("a: 1"+strings.Repeat("\n", 2*maxLines))); len(errs) > 0 {
		t.Error(errs)
	}
	if _, errs := parseTree("x.yaml", []byte("a: 1"+strings.Repeat("\n", 2*maxLines+1))); len(errs) != 1 {
		t.Error(errs)
	}
}

// The same scenario in other encodings of its text is the same tree, at the
// same places.
func TestTextForms(t *testing.T) {
	want := mustTree(t, Starter()).String()
	for name, text := range map[string]string{
		"mark":  "\ufeff" + Starter(),
		"crlf":  strings.ReplaceAll(Starter(), "\n", "\r\n"),
		"both":  "\ufeff" + strings.ReplaceAll(Starter(), "\n", "\r\n"),
		"start": "---\n" + Starter(),
		"end":   Starter() + "...\n",
	} {
		plain, problem := plainText([]byte(text))
		if problem != nil {
			t.Fatal(name, problem)
		}
		if got := mustTree(t, string(plain)).String(); got != want {
			t.Errorf("%s: got %s", name, got)
		}
	}
	for _, order := range []string{"little", "big"} {
		var b []byte
		for _, u := range utf16.Encode([]rune("title: x")) {
			if order == "little" {
				b = append(b, byte(u), byte(u>>8))
			} else {
				b = append(b, byte(u>>8), byte(u))
			}
		}
		if _, problem := plainText(b); problem == nil || !strings.Contains(problem.problem, "UTF-16") {
			t.Errorf("%s endian: %v", order, problem)
		}
	}
}

// An error in the YAML is reported in the line that was spoilt, wherever
// that is.
func TestYAMLErrorsAreFound(t *testing.T) {
	lines := strings.Split(strings.TrimSpace(errBase), "\n")
	for i := range lines {
		for _, spoilt := range []string{"\t" + lines[i], lines[i] + ` "`, "@" + strings.TrimSpace(lines[i])} {
			text := strings.Join(append(append(append([]string{}, lines[:i]...), spoilt), lines[i+1:]...), "\n")
			_, errs := parseTree("x.yaml", []byte(text))
			if len(errs) == 0 {
				continue // a few of them are YAML all the same
			}
			if got := errs[0].Line; got < i || got > i+2 {
				t.Errorf("line %d, %q: reported in line %d: %v", i+1, spoilt, got, errs[0])
			}
		}
	}
}

// A tree written on one line is read back as the same tree.
func TestRenderRoundTrip(t *testing.T) {
	scalars := rapid.OneOf(
		rapid.SampledFrom([]string{"0.2", "-5", "a b", "x: y", "- a", "#", "a #b", "~", "null", "", "true", "{", "é", "50 %", "'", `"`, `\`, "\n", "a,b", "*a", "1 +- 2", "±3", "---", "?", "=", "<<", "\u2028", "\x7f"}),
		rapid.StringMatching(`[a-z0-9 .,:#%+-]{0,8}`), rapid.String())
	var nodes func(depth int) *rapid.Generator[*node]
	nodes = func(depth int) *rapid.Generator[*node] {
		return rapid.Custom(func(t *rapid.T) *node {
			n := &node{kind: kind(rapid.IntRange(0, 2).Draw(t, "kind"))}
			if depth == 0 {
				n.kind = scalar
			}
			switch n.kind {
			case scalar:
				n.text, n.quoted = scalars.Draw(t, "text"), true
			case list:
				n.items = rapid.SliceOfN(nodes(depth-1), 0, 3).Draw(t, "items")
			case mapping:
				for _, key := range rapid.SliceOfNDistinct(scalars, 0, 3, rapid.ID).Draw(t, "keys") {
					n.members = append(n.members, member{key: key, value: nodes(depth-1).Draw(t, "value")})
				}
			}
			return n
		})
	}
	rapid.Check(t, func(t *rapid.T) {
		text := nodes(3).Draw(t, "tree").String()
		got, problem, _ := parseValue(text, place{1, 1})
		if problem != "" {
			t.Fatalf("%s: %s", text, problem)
		}
		if got.String() != text {
			t.Fatalf("wrote %s, read %s", text, got)
		}
	})
}

// A plain value stays plain, so that a number is still a number.
func TestRenderKeepsPlainValues(t *testing.T) {
	for _, text := range []string{"0.86 +- 0.02", "2.0e+6", "-5", "auto", "G.652.D", "lab/state.csv", "85 %", "~", "as built"} {
		n, problem, _ := parseValue(text, place{1, 1})
		if problem != "" || n.quoted || n.String() != text {
			t.Errorf("%q: %q, %v, %s", text, problem, n.quoted, n)
		}
	}
}
