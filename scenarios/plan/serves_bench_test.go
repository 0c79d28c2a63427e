package plan

import (
	"testing"

	"pairspan/scenarios"
)

func benchServes(b *testing.B, s *scenarios.Scenario) {
	a := newAsker(s)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.serves(b.Context()); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkServes(b *testing.B) { benchServes(b, read(b)) }

func BenchmarkServesFixedWindow(b *testing.B) { benchServes(b, read(b, set{"window_ps", "600"})) }

func BenchmarkServesFinite(b *testing.B) {
	benchServes(b, read(b, set{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}))
}

func BenchmarkServesAllAuto(b *testing.B) {
	benchServes(b, read(b, set{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"},
		set{"source.pair_rate_hz", "auto"}, set{"key_basis_share", "auto"}))
}

func BenchmarkElasticities(b *testing.B) {
	a := newAsker(read(b))
	b.ReportAllocs()
	for b.Loop() {
		a.elasticities()
	}
}

func benchTangle(b *testing.B, s *scenarios.Scenario) {
	a := newAsker(s)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.tangleNeeded(b.Context(), 40); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkTangleNeeded(b *testing.B) { benchTangle(b, read(b)) }

func BenchmarkTangleNeededAllAuto(b *testing.B) {
	benchTangle(b, read(b, set{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"},
		set{"source.pair_rate_hz", "auto"}, set{"key_basis_share", "auto"}))
}
