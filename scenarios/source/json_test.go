package source

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"testing"

	"pairspan/scenarios/internal/jsonpaths"
)

// TestJSONIsWhole: every form encodes, and nothing in it is missing or not a
// number.
func TestJSONIsWhole(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	for _, q := range []Request{
		{File: written(t, "state.csv", matrixText(tilted())), On: link},
		{File: written(t, "counts.csv", countsText(tilted(), 3)), On: link}, // hardly any
		{File: written(t, "scan.csv", scanText(2)), On: link, Options: Options{Order: 2}},
		{File: written(t, "scan.csv", scanText(1)), On: link, Options: Options{Order: 1}},
		{File: written(t, "delays.csv", delaysText(400)), On: link},
		{File: written(t, "delays.csv", delaysText(0)), On: link},
		{File: filepath.Join("testdata", "map.csv"), On: link},
		{File: written(t, "tangles.csv", tanglesText), On: link},
		{File: link},
	} {
		r := accounted(t, q)
		text, err := json.Marshal(r)
		if err != nil {
			t.Errorf("%s: %v", q.File, err)
		}
		var back any
		if err := json.Unmarshal(text, &back); err != nil {
			t.Fatal(err)
		}
		for _, name := range []string{"inputs", "warnings", "cautions", "references"} {
			if _, ok := back.(map[string]any)[name].([]any); !ok {
				t.Errorf("%s: %s is no list", q.File, name)
			}
		}
		if r.Sentence == "" || r.Link == nil || bytes.Contains(text, []byte("NaN")) {
			t.Errorf("%s: %s", q.File, text)
		}
	}
}

// TestPinnedPaths guards the JSON interface: fields may be added, never renamed
// or given another type within a source_format.
func TestPinnedPaths(t *testing.T) {
	paths := jsonpaths.Of(reflect.TypeFor[Result]())
	file := filepath.Join("testdata", fmt.Sprintf("source_format_%d.txt", Format))
	if *update {
		if err := os.WriteFile(file, []byte(paths), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if string(want) != paths {
		t.Errorf("the paths are now\n%s", paths)
	}
}
