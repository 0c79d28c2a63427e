package source

import (
	"context"
	"math/rand/v2"
	"sync/atomic"
	"testing"

	"pairspan/sources"
)

// randomSource returns an invented source of a few bins and odd figures.
func randomSource(seed uint64) inventedSource {
	u := draws(rand.New(rand.NewPCG(seed, 3)).Float64)
	return inventedSource{
		bins: 3 + int(seed%3), stepNm: u.decades(-1.5, 0), centreNm: [2]float64{1548, 1552},
		acrossNm: u.decades(-0.5, 0.5), pumpNm: u.decades(-1, 0.3), phasePerNm: 3 * u(), noise: 0.1 * u(), noisePerNm: 0.2 * u() * u(),
	}
}

// exhaustiveBands rates all pairs of pass bands, in the order that decides between
// equal ones: fewest bins, then the lowest first bins.
func exhaustiveBands(m *sources.SpectralMap, worth func(sources.Band) float64) (best sources.RatedBand, byWidth map[int]sources.RatedBand) {
	byWidth = map[int]sources.RatedBand{}
	n := len(m.CentreNm[0])
	for total := 2; total <= 2*n; total++ {
		for a := range n {
			for c := range n {
				for b := a; b < n; b++ {
					d := c + total - (b - a + 1) - 1
					if d < c || d >= n {
						continue
					}
					band := m.Band([2]int{a, c}, [2]int{b, d})
					if band.Share == 0 {
						continue
					}
					r := sources.RatedBand{Band: band, Worth: worth(band)}
					if old, ok := byWidth[band.AllBins()]; !ok || r.Worth > old.Worth {
						byWidth[band.AllBins()] = r
					}
					if best.Share == 0 || r.Worth > best.Worth {
						best = r
					}
				}
			}
		}
	}
	return best, byWidth
}

// With the true worth, on links of all kinds and at lengths where some, all or
// none of the bands give a key, the search finds what a comparison of all finds.
func TestBestBandsIsExhaustive(t *testing.T) {
	var passed atomic.Int64
	keys := 0
	for name, changes := range variants {
		for seed := range uint64(4) {
			m := randomSource(seed).spectralMap(t)
			s := bandScenario(t, changes...)
			s.Arms[1].LengthKm *= []float64{0.2, 1, 3, 8}[seed]
			j := mustJudge(t, s, m)
			best, byWidth := exhaustiveBands(m, j.Worth)
			got, err := m.BestBands(context.Background(), sources.BandSearch{Worth: j.Worth, Bound: func(b sources.Band, enough float64) float64 {
				most := j.Bound(b, enough)
				if most < enough {
					passed.Add(1)
				}
				return most
			}})
			if err != nil {
				t.Fatal(err)
			}
			if got.Best != best {
				t.Errorf("%s, seed %d: best is %+v, want %+v", name, seed, got.Best, best)
			}
			if best.Worth > 0 {
				keys++
			}
			for _, b := range got.ByWidth {
				if b != byWidth[b.AllBins()] {
					t.Errorf("%s, seed %d: of %d bins %+v, want %+v", name, seed, b.AllBins(), b, byWidth[b.AllBins()])
				}
			}
			if len(got.ByWidth) != len(byWidth) {
				t.Errorf("%s, seed %d: %d widths, want %d", name, seed, len(got.ByWidth), len(byWidth))
			}
		}
	}
	if passed.Load() < 1000 || keys < 10 {
		t.Errorf("%d bands passed over, %d maps with a key: too few to mean anything", passed.Load(), keys)
	}
}
