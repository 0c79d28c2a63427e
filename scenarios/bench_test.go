package scenarios

import "testing"

func BenchmarkLoad(b *testing.B) {
	for b.Loop() {
		if _, err := Load("demo.yaml"); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkWith changes one number and reads again, as a control of a report
// does; the scenario compares nothing.
func BenchmarkWith(b *testing.B) {
	s := mustRead(b, errBase)
	for b.Loop() {
		if _, err := s.With(Change{"arms.bob.length_km", "7.5"}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkNumber(b *testing.B) {
	s := mustRead(b, errBase)
	for b.Loop() {
		if _, err := s.Number("detectors.gated.efficiency"); err != nil {
			b.Fatal(err)
		}
	}
}
