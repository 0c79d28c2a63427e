package sources

import (
	"fmt"
	"strings"
	"testing"
)

var delayBenches = []struct {
	name  string
	truth delayTruth
}{
	{"dozen", delayTruth{bins: 14, first: -70, bin: 10, delay: 3, fwhm: 25, pairs: 400, floor: 12}},
	{"one-peak-20000", delayTruth{bins: 20_000, first: -100_000, bin: 10, delay: 130, fwhm: 180, pairs: 4e5, floor: 50}},
	{"none-20000", delayTruth{bins: 20_000, first: -100_000, bin: 10, fwhm: 180, floor: 50}},
	{"pulsed-20000", delayTruth{bins: 20_000, first: -100_000, bin: 10, delay: 130, fwhm: 180, pairs: 4e4, side: 1000, period: 12_500, floor: 0.1}},
	{"dense-20000", delayTruth{bins: 20_000, first: -100_000, bin: 10, delay: 130, fwhm: 30, pairs: 5000, side: 100, period: 100, floor: 3}},
}

func BenchmarkDelayFit(b *testing.B) {
	for _, x := range delayBenches {
		h := x.truth.histogram(poissonFrom(70))
		b.Run(x.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				h.Fit(DelayOptions{})
			}
		})
	}
}

func BenchmarkDelayRead(b *testing.B) {
	h := delayBenches[1].truth.histogram(poissonFrom(71))
	text := histogramText(h)
	b.ReportAllocs()
	for b.Loop() {
		ReadDelayHistogram(strings.NewReader(text))
	}
}

// histogramText returns the histogram as a file.
func histogramText(h DelayHistogram) string {
	var text strings.Builder
	text.WriteString("delay_ps,counts\n")
	for i, x := range h.DelayPs {
		fmt.Fprintf(&text, "%g,%g\n", x, h.Counts[i])
	}
	return text.String()
}

func BenchmarkScanFit(b *testing.B) {
	for _, s := range []scanTruth{fourWave(), downConversion()} {
		scan, o := s.scan(poissonFrom(72)), s.options()
		b.Run(fmt.Sprintf("order-%d", s.order), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				scan.Fit(o)
			}
		})
	}
}
