package sources

import (
	"strings"
	"testing"
)

func benchmark(b *testing.B, work func(rho DensityMatrix)) {
	rho := normalDrawer(70).state(4)
	b.ReportAllocs()
	for b.Loop() {
		work(rho)
	}
}

func BenchmarkConcurrence(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { rho.Concurrence() })
}

func BenchmarkFidelity(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { rho.Fidelity() })
}

func BenchmarkAlignedErrors(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { rho.AlignedErrors() })
}

func BenchmarkErrorsOfTangle(b *testing.B) {
	s, _ := FromTangle(0.8).WithoutAccidentals(40)
	benchmark(b, func(DensityMatrix) { s.Errors(AtWorst) })
}

func BenchmarkWithoutAccidentals(b *testing.B) {
	benchmark(b, func(rho DensityMatrix) { FromDensityMatrix(rho).WithoutAccidentals(40) })
}

func BenchmarkNewDensityMatrix(b *testing.B) {
	raw := [4][4]complex128(bellDiagonal([4]float64{1, 0.02, 0, -0.02}))
	benchmark(b, func(DensityMatrix) { NewDensityMatrix(raw) })
}

func BenchmarkReadDensityMatrix(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		ReadDensityMatrix(strings.NewReader(printed2001))
	}
}
