package sources

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"runtime"
	"testing"
)

// exhaustive compares all pairs of pass bands, one after the other.
func exhaustive(m *SpectralMap, worth func(Band) float64) (best RatedBand, byWidth map[int]RatedBand) {
	byWidth = map[int]RatedBand{}
	// In this order the first of equal worth has fewest bins, then the lowest first bins.
	for total := 2; total <= len(m.CentreNm[0])+len(m.CentreNm[1]); total++ {
		allFrom(m, total, func(first, last [2]int) {
			b := m.Band(first, last)
			if b.Share == 0 {
				return
			}
			r := RatedBand{b, worth(b)}
			if old, ok := byWidth[b.AllBins()]; !ok || r.Worth > old.Worth {
				byWidth[b.AllBins()] = r
			}
			if best.Share == 0 || r.Worth > best.Worth {
				best = r
			}
		})
	}
	return best, byWidth
}

// allFrom calls do for all bands of so many bins together, ordered by the first
// bins, then the last ones.
func allFrom(m *SpectralMap, total int, do func(first, last [2]int)) {
	nA, nB := len(m.CentreNm[0]), len(m.CentreNm[1])
	for a := range nA {
		for c := range nB {
			for b := a; b < nA; b++ {
				if d := c + total - (b - a + 1) - 1; d >= c && d < nB {
					do([2]int{a, c}, [2]int{b, d})
				}
			}
		}
	}
}

// scrambled returns a worth without any pattern, of a few values only so that
// many are equal.
func scrambled(seed uint64, values int) func(Band) float64 {
	return func(b Band) float64 {
		mix := rand.NewPCG(seed, uint64(b.First[0]+100*b.Last[0]+10_000*b.First[1]+1_000_000*b.Last[1]))
		return float64(int(mix.Uint64()%uint64(values))) - 3
	}
}

// loosened returns a bound that lies above the worth by up to 4, or gives up.
func loosened(seed uint64, worth func(Band) float64) func(Band, float64) float64 {
	return func(b Band, enough float64) float64 {
		w := worth(b)
		if slack := 4 * math.Abs(scrambled(seed, 11)(b)) / 11; slack > 0 && w+slack < enough {
			return w + slack
		}
		return max(w, enough)
	}
}

func TestBestBandsIsExhaustive(t *testing.T) {
	for seed := range uint64(40) {
		d := mapDrawing{seed: seed, bins: [2]int{1 + int(seed)%6, 1 + int(seed/2)%5}, decades: 3, empty: 0.2, tangles: seed%4 == 3}
		m := d.spectralMap(t)
		worths := map[string]func(Band) float64{
			"scrambled":   scrambled(seed, 7),
			"alike":       func(Band) float64 { return 1 },
			"never":       func(Band) float64 { return math.Inf(-1) },
			"share":       func(b Band) float64 { return b.Share - 0.3*(b.UnpairedShare[0]+b.UnpairedShare[1]) },
			"fraction":    func(b Band) float64 { return b.Share * idealSecretFraction(b.StateError[0], b.StateError[1]) },
			"no fraction": func(b Band) float64 { return -b.StateError[0] - b.StateError[1] },
		}
		for name, worth := range worths {
			best, byWidth := exhaustive(m, worth)
			for _, bound := range []func(Band, float64) float64{nil, loosened(seed, worth)} {
				got, err := m.BestBands(context.Background(), BandSearch{Worth: worth, Bound: bound})
				if err != nil {
					t.Fatal(err)
				}
				if got.Best != best {
					t.Errorf("seed %d, %s: best is %+v, want %+v", seed, name, got.Best, best)
				}
				if len(got.ByWidth) != len(byWidth) {
					t.Errorf("seed %d, %s: %d widths, want %d", seed, name, len(got.ByWidth), len(byWidth))
				}
				for _, b := range got.ByWidth {
					if b != byWidth[b.AllBins()] {
						t.Errorf("seed %d, %s: of %d bins %+v, want %+v", seed, name, b.AllBins(), b, byWidth[b.AllBins()])
					}
				}
			}
		}
	}
}

// A bound that lies below the worth loses bands: the test above could see it.
func TestWrongBoundIsFollowed(t *testing.T) {
	m := mapDrawing{seed: 1, bins: [2]int{4, 4}, decades: 1}.spectralMap(t)
	share := func(b Band) float64 { return b.Share }
	seen := 0
	got, err := m.BestBands(context.Background(), BandSearch{
		Worth: func(b Band) float64 { seen++; return share(b) },
		Bound: func(b Band, enough float64) float64 {
			if !math.IsInf(enough, -1) {
				return enough - 1
			}
			return enough
		},
	})
	if err != nil || seen != len(got.ByWidth) {
		t.Errorf("%d bands rated, %d widths, %v", seen, len(got.ByWidth), err)
	}
}

func TestBestBandsOnAnyCores(t *testing.T) {
	m := mapDrawing{seed: 9, bins: [2]int{9, 8}, decades: 2}.spectralMap(t)
	worth := scrambled(9, 50)
	search := BandSearch{Worth: worth, Bound: loosened(3, worth)}
	want, err := m.BestBands(context.Background(), search)
	if err != nil {
		t.Fatal(err)
	}
	if want.Compared != 45*36 {
		t.Errorf("compared %d, want %d", want.Compared, 45*36)
	}
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	for _, cores := range []int{1, 2, 7} {
		runtime.GOMAXPROCS(cores)
		if got, err := m.BestBands(context.Background(), search); err != nil || !reflect.DeepEqual(got, want) {
			t.Errorf("on %d cores %+v, %v, want %+v", cores, got, err, want)
		}
	}
}

func TestBestBandsProgressAndEnd(t *testing.T) {
	m := mapDrawing{seed: 2, bins: [2]int{6, 3}, decades: 1}.spectralMap(t)
	last := 0
	search := BandSearch{Worth: func(b Band) float64 { return b.Share }, Progress: func(done, total int) {
		if done != last+1 || total != 21 {
			t.Errorf("%d of %d after %d", done, total, last)
		}
		last = done
	}}
	if _, err := m.BestBands(context.Background(), search); err != nil || last != 21 {
		t.Errorf("progress ended at %d, %v", last, err)
	}
	ctx, stop := context.WithCancel(context.Background())
	rated := 0
	search = BandSearch{Worth: func(b Band) float64 {
		if rated++; rated == 5 {
			stop()
		}
		return b.Share
	}}
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	if _, err := m.BestBands(ctx, search); !errors.Is(err, context.Canceled) || rated > 5 {
		t.Errorf("stopped after %d with %v", rated, err)
	}
	if _, err := m.BestBands(context.Background(), BandSearch{Worth: func(Band) float64 { return math.NaN() }}); err == nil {
		t.Error("bands without a worth were chosen from")
	}
}

func BenchmarkBestBands(b *testing.B) {
	for _, n := range []int{10, 40} {
		m := mapDrawing{seed: 1, bins: [2]int{n, n}, decades: 2}.spectralMap(b)
		worth := func(b Band) float64 { return b.Share * idealSecretFraction(b.StateError[0], b.StateError[1]) }
		b.Run(fmt.Sprintf("%dx%d", n, n), func(b *testing.B) {
			for b.Loop() {
				if _, err := m.BestBands(context.Background(), BandSearch{Worth: worth}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkReadSpectralMap(b *testing.B) {
	text := mapDrawing{seed: 1, bins: [2]int{40, 40}, decades: 2}.text()
	b.ReportAllocs()
	for b.Loop() {
		mustReadMap(b, text)
	}
}
