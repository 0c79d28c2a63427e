package source

import (
	"context"
	"fmt"
	"sync/atomic"
	"testing"

	"pairspan/sources"
)

// BenchmarkBestBands compares the 672,400 pairs of pass bands of 40 x 40 bins.
func BenchmarkBestBands(b *testing.B) {
	m := inventedSource{
		bins: 40, stepNm: 0.1, centreNm: [2]float64{1548, 1552}, acrossNm: 0.75, pumpNm: 0.2,
		phasePerNm: 0.85, noise: 0.02, noisePerNm: 0.035,
	}.spectralMap(b)
	for _, x := range []struct {
		name    string
		changes []string
	}{
		{"campus", nil},
		{"far", []string{"length_km: 9", "length_km: 60"}},
		{"no-key", []string{"length_km: 9", "length_km: 150"}},
		{"bright", []string{"2.0e+6", "1.0e+8"}},
		{"window-fixed", []string{"window_ps: auto", "window_ps: 400"}},
		{"finite", []string{"window_ps: auto", "window_ps: auto\nfinite_key: { sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}},
		{"pulsed", []string{"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02"}},
		{"pump", []string{"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 1.0e+8"}},
		{"pump-finite", []string{
			"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 1.0e+8",
			"window_ps: auto", "window_ps: auto\nfinite_key: { sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }",
		}},
		{"pump-pulsed", []string{"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: auto\n  max_pairs_per_pulse: 1"}},
		{"pump-thermal", []string{"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: auto\n  max_pairs_per_pulse: 1\n  schmidt_number: 1.5"}},
		{"pump-share", []string{"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 1.0e+8", "window_ps: auto", "window_ps: auto\nkey_basis_share: auto"}},
		{"share", []string{"window_ps: auto", "window_ps: auto\nkey_basis_share: auto"}},
	} {
		b.Run(x.name, func(b *testing.B) {
			j, err := NewBandJudge(bandScenario(b, x.changes...), m)
			if err != nil {
				b.Fatal(err)
			}
			var rated atomic.Int64
			for b.Loop() {
				search := sources.BandSearch{
					Worth: func(band sources.Band) float64 { rated.Add(1); return j.Worth(band) },
					Bound: j.Bound,
				}
				c, err := m.BestBands(context.Background(), search)
				if err != nil {
					b.Fatal(err)
				}
				if testing.Verbose() {
					fmt.Printf("%+v\n", c.Best)
				}
			}
			b.ReportMetric(float64(rated.Load())/float64(b.N), "rated/op")
		})
	}
}
