package main

import (
	"bytes"
	"io/fs"
	"strings"
	"testing"
	"unicode/utf8"

	"pairspan/scenarios"
)

// The terminal page: one screen.
const (
	mostLines   = 40
	mostColumns = 90
)

// TestTerminalFitsOneScreen plans every scenario that is built in, and the
// starting one.
func TestTerminalFitsOneScreen(t *testing.T) {
	files, err := fs.Glob(scenarios.Examples, "*.yaml")
	if err != nil || len(files) < 4 {
		t.Fatal(files, err)
	}
	t.Chdir("../../scenarios")
	for _, name := range files {
		var out, errs bytes.Buffer
		if status := run([]string{"plan", name}, &out, &errs); status > statusNo {
			t.Fatalf("%s: status %d: %s", name, status, errs.String())
		}
		lines := strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")
		if len(lines) > mostLines {
			t.Errorf("%s: %d lines", name, len(lines))
		}
		for _, line := range lines {
			if n := utf8.RuneCountInString(line); n > mostColumns || n != len(line) {
				t.Errorf("%s: %d columns, %d bytes: %q", name, n, len(line), line)
			}
		}
	}
}

// BenchmarkDemo is the whole command, reading to text.
func BenchmarkDemo(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		var out, errs bytes.Buffer
		if status := run([]string{"demo"}, &out, &errs); status != statusYes {
			b.Fatal(errs.String())
		}
	}
}
