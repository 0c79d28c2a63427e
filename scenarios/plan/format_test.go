package plan

import (
	"fmt"
	"reflect"
	"testing"

	"pairspan/scenarios/internal/jsonpaths"
)

// TestPinnedPaths guards the JSON interface: fields may be added, never
// renamed or given another type within a plan_format.
func TestPinnedPaths(t *testing.T) {
	pinned(t, fmt.Sprintf("plan_format_%d.txt", Format), jsonpaths.Of(reflect.TypeFor[Plan]()))
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
