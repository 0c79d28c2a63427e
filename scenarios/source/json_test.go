package source

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
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
	var b strings.Builder
	listPaths(&b, reflect.TypeFor[Result](), "")
	file := filepath.Join("testdata", fmt.Sprintf("source_format_%d.txt", Format))
	if *update {
		if err := os.WriteFile(file, []byte(b.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if string(want) != b.String() {
		t.Errorf("the paths are now\n%s", b.String())
	}
}

// kinds are how JSON's types are named in the list.
var kinds = map[reflect.Kind]string{reflect.String: "string", reflect.Bool: "true or false", reflect.Int: "number", reflect.Float64: "number"}

// listPaths writes every path and type below t, in order.
func listPaths(b *strings.Builder, t reflect.Type, path string) {
	null := ""
	if t.Kind() == reflect.Pointer {
		t, null = t.Elem(), " or null"
	}
	switch kind := t.Kind(); kind {
	case reflect.Struct:
		if null != "" {
			fmt.Fprintf(b, "%s object or null\n", path)
		}
		for i := range t.NumField() {
			tag := t.Field(i).Tag.Get("json")
			if tag == "" || strings.Contains(tag, ",") {
				panic(t.Name() + "." + t.Field(i).Name + " has no plain JSON name")
			}
			listPaths(b, t.Field(i).Type, strings.TrimPrefix(path+"."+tag, "."))
		}
	case reflect.Slice, reflect.Array:
		if null != "" {
			fmt.Fprintf(b, "%s list or null\n", path)
		}
		listPaths(b, t.Elem(), path+"[]")
	default:
		if kinds[kind] == "" {
			panic("a JSON interface of " + t.String())
		}
		fmt.Fprintf(b, "%s %s%s\n", path, kinds[kind], null)
	}
}
