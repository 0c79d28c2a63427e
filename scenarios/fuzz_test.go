package scenarios

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"
)

// checkOutcome holds what is true of every reading: a scenario or errors,
// and each error with a place and a clean text.
func checkOutcome(t *testing.T, s *Scenario, err error) {
	t.Helper()
	if err == nil {
		if s == nil {
			t.Fatal("neither a scenario nor an error")
		}
		for i := range s.Arms {
			if s.Detector(s.Arms[i].Detector) == nil {
				t.Errorf("arm %d has no detector", i)
			}
		}
		if _, err := s.Emission(); err != nil {
			t.Errorf("no emission: %v", err)
		}
		return
	}
	var errs Errors
	if !errors.As(err, &errs) || len(errs) == 0 {
		t.Fatalf("not Errors: %v", err)
	}
	for _, e := range errs {
		if e.Line < 1 || e.Column < 1 || e.File == "" || e.Problem == "" {
			t.Errorf("no place: %#v", e)
		}
		if strings.ContainsFunc(e.Error(), func(r rune) bool { return r < ' ' && r != '\n' || r == 0x7F }) {
			t.Errorf("control characters: %q", e.Error())
		}
	}
}

func FuzzRead(f *testing.F) {
	names, _ := filepath.Glob("testdata/err/*.yaml")
	examples, _ := filepath.Glob("*.yaml")
	for _, name := range append(names, examples...) {
		if text, err := os.ReadFile(name); err == nil && len(text) < 8000 {
			f.Add(text)
		}
	}
	f.Add([]byte(Starter()))
	files := fstest.MapFS{"state.csv": {Data: []byte(bellCSV)}}
	f.Fuzz(func(t *testing.T, text []byte) {
		s, err := Read(files, "x.yaml", text)
		checkOutcome(t, s, err)
	})
}
