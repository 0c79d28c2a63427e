package report

import (
	"math"

	"pairspan/scenarios/plan"
	"pairspan/scenarios/source"
)

// sampleMap is a map of n by n bins along a diagonal, with a pair of bands.
func sampleMap(n int) *source.SpectralMap {
	m := &source.SpectralMap{
		Known: source.Whole, ShareSum: 1, ByWidth: []source.SpectralBand{}, BandsCompared: 1296, Sentence: "Pass bands raise the tangle.",
		Told: []string{"Bins do not interfere."}, Doubts: []string{"The map's wavelengths were used."},
	}
	edge := func(arm, i int) float64 { return 1546 + float64(4*arm) + 3.2*float64(i)/float64(n) }
	for i := range n + 1 {
		m.AliceEdgesNm, m.BobEdgesNm = append(m.AliceEdgesNm, edge(0, i)), append(m.BobEdgesNm, edge(1, i))
		if i < n {
			m.AliceNm, m.BobNm = append(m.AliceNm, (edge(0, i)+edge(0, i+1))/2), append(m.BobNm, (edge(1, i)+edge(1, i+1))/2)
		}
	}
	for i := range n {
		for j := range n {
			x, y := (float64(i)+0.5)/float64(n)*2-1, (float64(j)+0.5)/float64(n)*2-1
			share := math.Exp(-2*(x-y)*(x-y)-30*(x+y)*(x+y)) / float64(n*n) * 8
			if share < 1e-6 {
				continue
			}
			m.Bins = append(m.Bins, source.SpectralBin{
				AliceNm: m.AliceNm[i], BobNm: m.BobNm[j], Share: share, Tangle: 0.95 - 0.3*x*x,
				QBERLab: &source.QBERAxes{HV: 0.01, DA: 0.02, RL: 0.03}, QBERAligned: &plan.QBER{Key: 0.01 + 0.05*x*x, Check: 0.02 + 0.08*x*x},
			})
		}
	}
	pass := func(arm, bins int) source.PassBand {
		first := (n - bins) / 2
		from, to := edge(arm, first), edge(arm, first+bins)
		return source.PassBand{FirstBin: first, Bins: bins, FromNm: &from, ToNm: &to, WidthNm: ptr(to - from), CentreNm: (from + to) / 2}
	}
	band := func(bins int) source.SpectralBand {
		k := float64(bins) / float64(2*n)
		return source.SpectralBand{
			Alice: pass(0, (bins+1)/2), Bob: pass(1, bins/2), Share: k * (2 - k), Tangle: ptr(0.95 - 0.25*k*k), QBERAligned: plan.QBER{Key: 0.02, Check: 0.03},
			OnLink: &source.BandOnLink{UsableRateBps: 800 * k * (1.6 - k)},
		}
	}
	for bins := 2 * n; bins > 1; bins-- {
		m.ByWidth = append(m.ByWidth, band(bins))
	}
	m.Whole, m.Best = band(2*n), ptr(band(max(2, 8*n/5)))
	return m
}

// mapSource is a spectral map alone, of n by n bins.
func mapSource(n int) *source.Result {
	r := bareSource()
	r.Form, r.SpectralMap = source.FormSpectralMap, sampleMap(n)
	return r
}

// tanglesSource is a spectral map of tangles, of one bin, without a link.
func tanglesSource() *source.Result {
	r := mapSource(1)
	m := r.SpectralMap
	m.Known, m.Best, m.ByWidth = source.Bounded, nil, nil
	m.AliceEdgesNm, m.BobEdgesNm = []float64{1547.6, 1547.6}, []float64{1551.6, 1551.6}
	m.Bins[0].QBERLab, m.Bins[0].QBERAligned = nil, nil
	m.Whole.Alice.FromNm, m.Whole.Bob.FromNm, m.Whole.Tangle, m.Whole.TangleAtMost, m.Whole.OnLink = nil, nil, nil, ptr(0.81), nil
	return r
}
