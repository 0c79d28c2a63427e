package plan

import (
	"fmt"
	"reflect"
	"strings"
	"testing"
)

// TestPinnedPaths guards the JSON interface: fields may be added, never
// renamed or given another type within a plan_format.
func TestPinnedPaths(t *testing.T) {
	var b strings.Builder
	listPaths(&b, reflect.TypeFor[Plan](), "")
	pinned(t, fmt.Sprintf("plan_format_%d.txt", Format), b.String())
}

// listPaths writes every path and type below t, in order.
func listPaths(b *strings.Builder, t reflect.Type, path string) {
	null := ""
	if t.Kind() == reflect.Pointer {
		t, null = t.Elem(), " or null"
	}
	switch t.Kind() {
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
	case reflect.Slice:
		listPaths(b, t.Elem(), path+"[]")
	case reflect.String:
		fmt.Fprintf(b, "%s string%s\n", path, null)
	case reflect.Bool:
		fmt.Fprintf(b, "%s true or false%s\n", path, null)
	case reflect.Int, reflect.Float64:
		fmt.Fprintf(b, "%s number%s\n", path, null)
	default:
		panic("a JSON interface of " + t.String())
	}
}

func BenchmarkPlan(b *testing.B) {
	s := read(b, set{"distance.points", "241"})
	b.ReportAllocs()
	for b.Loop() {
		if _, err := New(b.Context(), s, "test", nil); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkCurve is 241 distances of three members, the window searched at each.
func BenchmarkCurve(b *testing.B) {
	a := newAsker(read(b))
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.curve(b.Context(), 40, 241, func() {}); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkCurveFixedWindow is the same without the search.
func BenchmarkCurveFixedWindow(b *testing.B) {
	a := newAsker(read(b, set{"window_ps", "600"}))
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.curve(b.Context(), 40, 241, func() {}); err != nil {
			b.Fatal(err)
		}
	}
}
