package sources

import (
	"context"
	"testing"
)

func benchmarkCounts(b *testing.B, work func(counts Counts)) {
	counts := combinations("HVDARL").simulated(scatterState, 1000, 1)
	b.ReportAllocs()
	for b.Loop() {
		work(counts)
	}
}

func BenchmarkReadCounts(b *testing.B) {
	for b.Loop() {
		read2001(b)
	}
}

func BenchmarkLinearInversion(b *testing.B) {
	benchmarkCounts(b, func(counts Counts) { counts.LinearInversion() })
}

func BenchmarkMaximumLikelihood(b *testing.B) {
	benchmarkCounts(b, func(counts Counts) { fitOf(b, counts) })
}

func BenchmarkMaximumLikelihood2001(b *testing.B) {
	counts := read2001(b)
	for b.Loop() {
		fitOf(b, counts)
	}
}

func BenchmarkFigures(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { rho.Figures() })
}

func BenchmarkDescribe(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { Describe(rho) })
}

func BenchmarkBootstrap200(b *testing.B) {
	benchmarkCounts(b, func(counts Counts) {
		if _, err := counts.FigureDeviations(context.Background(), fitOf(b, counts), BootstrapDraws, BootstrapSeed, nil); err != nil {
			b.Fatal(err)
		}
	})
}
