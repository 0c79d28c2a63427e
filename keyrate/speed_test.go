package keyrate

import (
	"math"
	"testing"

	"pairspan/link"
)

// campus is an invented link for benchmarks and properties.
func campus() (Link, OperatingPoint) {
	det := link.Detector{Efficiency: 0.2, DarkCountsHz: 1200, JitterFWHMPs: 180, DeadTimeNs: 10000, Afterpulsing: 0.02}
	arm := Arm{Transmittance: 0.3, Detector: det, Passive: true, Misalignment: 0.005, PMDError: 1e-4}
	l := Link{
		Modes: math.Inf(1), StateError: [2]float64{0.02, 0.03}, Arms: [2]Arm{arm, arm},
		SpreadFWHMPs: 260, ErrorCorrectionF: 1.16, DutyCycle: 0.9,
	}
	return l, OperatingPoint{PairRateHz: 2e6, WindowS: 500e-12, KeyShare: 0.5}
}

func BenchmarkSlotPoisson(b *testing.B) { benchmarkSlot(b, math.Inf(1)) }
func BenchmarkSlotThermal(b *testing.B) { benchmarkSlot(b, 1) }

func benchmarkSlot(b *testing.B, modes float64) {
	s := Slot{Pairs: 0.1, Efficiency: [2]float64{0.3, 0.2}, Noise: [2]float64{1e-4, 2e-4}, Share: 1, Error: 0.03, Modes: modes}
	b.ReportAllocs()
	for b.Loop() {
		s.Click()
	}
}

func BenchmarkKey(b *testing.B) {
	l, p := campus()
	b.ReportAllocs()
	for b.Loop() {
		l.Key(p)
	}
}

func BenchmarkKeyFinite(b *testing.B) {
	l, p := campus()
	l.BlockBits, l.EpsilonTotal = 1e6, 1e-10
	b.ReportAllocs()
	for b.Loop() {
		l.Key(p)
	}
}

func BenchmarkBestWindow(b *testing.B) {
	l, p := campus()
	b.ReportAllocs()
	for b.Loop() {
		l.BestWindow(p)
	}
}

func BenchmarkBestWindowFinite(b *testing.B) {
	l, p := campus()
	l.BlockBits, l.EpsilonTotal = 1e6, 1e-10
	b.ReportAllocs()
	for b.Loop() {
		l.BestWindow(p)
	}
}

// BenchmarkBest searches pump and window together.
func BenchmarkBest(b *testing.B) {
	l, p := campus()
	b.ReportAllocs()
	for b.Loop() {
		l.Best(p, Free{MaxPairRateHz: 2e7, Window: true})
	}
}

// BenchmarkBestFinite searches pump, window and share of a finite block.
func BenchmarkBestFinite(b *testing.B) {
	l, p := campus()
	l.BlockBits, l.EpsilonTotal = 1e6, 1e-10
	b.ReportAllocs()
	for b.Loop() {
		l.Best(p, Free{MaxPairRateHz: 2e7, Window: true, KeyShare: true})
	}
}
