package plan

import (
	"testing"

	"pairspan/scenarios"
)

// BenchmarkDemo plans the scenario that is built in, all cases.
func BenchmarkDemo(b *testing.B) {
	s, err := scenarios.LoadFS(scenarios.Examples, "demo.yaml")
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := New(b.Context(), s, "test", nil); err != nil {
			b.Fatal(err)
		}
	}
}
