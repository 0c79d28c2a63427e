package scenarios

import (
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

var update = flag.Bool("update", false, "rewrite the pinned files")

// TestErrors reads one input for each error message. The expected outputs
// are pinned.
func TestErrors(t *testing.T) {
	inputs, err := filepath.Glob("testdata/err/*.yaml")
	if err != nil || len(inputs) == 0 {
		t.Fatal("no inputs", err)
	}
	for _, input := range inputs {
		t.Run(strings.TrimSuffix(filepath.Base(input), ".yaml"), func(t *testing.T) {
			start := time.Now()
			_, err := Load(input)
			if d := time.Since(start); d > patience {
				t.Errorf("took %v", d)
			}
			var errs Errors
			if !errors.As(err, &errs) {
				t.Fatalf("got %v", err)
			}
			for _, e := range errs {
				if e.Hint == "" {
					t.Errorf("no hint: %v", e)
				}
			}
			got := strings.ReplaceAll(filepath.ToSlash(err.Error()), "testdata/err/", "") + "\n"
			golden := strings.TrimSuffix(input, ".yaml") + ".txt"
			if *update {
				if err := os.WriteFile(golden, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(string(want), got); diff != "" {
				t.Error(diff)
			}
		})
	}
}
