package main

import (
	"bytes"
	"os"
	"regexp"
	"strings"
	"testing"

	"pairspan/scenarios"
)

const readme = "../../README.md"

// block is one fenced block of the README.
var block = regexp.MustCompile("(?s)(?:`([a-z-]+\\.yaml)`:\n\n)?```(console|yaml)\n(.*?)```\n")

// TestReadme runs the README's commands, in order and in one folder, and
// compares what they print. A yaml block whose line before names a file is
// that file, and the folder scenarios is the repository's. With -update the
// README is pinned anew.
func TestReadme(t *testing.T) {
	text, err := os.ReadFile(readme)
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	if err := os.CopyFS("scenarios", scenarios.Examples); err != nil {
		t.Fatal(err)
	}
	ran := 0
	var b bytes.Buffer
	last := 0
	for _, m := range block.FindAllSubmatchIndex(text, -1) {
		body := string(text[m[6]:m[7]])
		b.Write(text[last:m[6]])
		last = m[7]
		if string(text[m[4]:m[5]]) == "yaml" {
			if m[2] >= 0 {
				writeFile(t, string(text[m[2]:m[3]]), body)
			}
			b.WriteString(body)
			continue
		}
		got := console(t, body)
		ran += strings.Count(got, "$ pairspan")
		if got != body && !*update {
			t.Errorf("README shows:\n%s\nbut it is:\n%s", body, got)
		}
		b.WriteString(got)
	}
	b.Write(text[last:])
	if ran < 4 {
		t.Errorf("only %d commands found in the README", ran)
	}
	if *update && !t.Failed() {
		writeFile(t, readmePath, b.String())
	}
}

// console runs a block's commands and returns the block as it should be.
func console(t *testing.T, body string) string {
	t.Helper()
	var b strings.Builder
	for line := range strings.Lines(body) {
		command, ok := strings.CutPrefix(line, "$ pairspan ")
		if !ok {
			continue
		}
		b.WriteString(line)
		command, file, redirected := strings.Cut(strings.TrimSpace(command), " > ")
		var out, errs bytes.Buffer
		run(strings.Fields(command), &out, &errs)
		if redirected {
			writeFile(t, file, out.String())
			out.Reset()
		}
		b.WriteString(out.String() + errs.String())
	}
	return b.String()
}

func writeFile(t *testing.T, name, text string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

// readmePath is absolute, since the test works in a folder of its own.
var readmePath = func() string {
	dir, err := os.Getwd()
	if err != nil {
		panic(err)
	}
	return dir + "/" + readme
}()
