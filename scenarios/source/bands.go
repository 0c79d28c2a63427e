package source

import (
	"context"
	"math"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// DescribeSpectralMap says what a spectral map holds and, unless s is nil, which
// pair of pass bands gives most key on that scenario's link at its installed
// length. The link's source is the map's: the scenario gives its pair rate, over
// the whole map, and not its state. For each number of bins, both bands' together,
// it returns the best pair of bands too. The search is exact: see sources.SpectralMap.BestBands.
//
// progress, unless nil, is told how much is done. When the context ends first
// its error is returned; another error says what the link lacks.
func DescribeSpectralMap(ctx context.Context, m *sources.SpectralMap, s *scenarios.Scenario, progress func(done, total int)) (*SpectralMap, error) {
	r := &SpectralMap{
		Known:   Whole,
		AliceNm: m.CentreNm[0], BobNm: m.CentreNm[1], AliceEdgesNm: m.EdgeNm[0], BobEdgesNm: m.EdgeNm[1],
		ShareSum: m.ShareSum, Bins: spectralBins(m), ByWidth: []SpectralBand{},
		Told: append([]string{}, m.Told...), Doubts: append([]string{}, m.Doubts...),
	}
	if m.Tangles {
		r.Known = Bounded
	}
	whole := m.Whole()
	if s == nil {
		r.Whole = spectralBand(m, nil, &whole)
		r.Sentence = r.sentence()
		return r, nil
	}
	j, err := NewBandJudge(s, m)
	if err != nil {
		return nil, err
	}
	choice, err := m.BestBands(ctx, sources.BandSearch{Worth: j.Worth, Bound: j.Bound, Progress: progress})
	if err != nil {
		return nil, err
	}
	r.Whole = spectralBand(m, j, &whole)
	r.BandsCompared = choice.Compared
	for _, b := range choice.ByWidth {
		r.ByWidth = append(r.ByWidth, spectralBand(m, j, &b.Band))
	}
	if choice.Best.Worth > 0 {
		best := spectralBand(m, j, &choice.Best.Band)
		r.Best = &best
	}
	r.sayLink(s)
	r.Sentence = r.sentence()
	return r, nil
}

// spectralBins lists the bins with pairs.
func spectralBins(m *sources.SpectralMap) []SpectralBin {
	bins := []SpectralBin{}
	for i, row := range m.Bins {
		for k, b := range row {
			if b.Share == 0 {
				continue
			}
			bin := SpectralBin{AliceNm: m.CentreNm[0][i], BobNm: m.CentreNm[1][k], Share: b.Share, Tangle: b.Tangle}
			if !m.Tangles {
				bin.QBERLab, bin.QBERAligned = axesOf(b.Rho), alignedOf(b.Rho)
			}
			bins = append(bins, bin)
		}
	}
	return bins
}

func axesOf(rho sources.DensityMatrix) *QBERAxes {
	hv, da, rl := rho.LabErrors()
	return &QBERAxes{hv, da, rl}
}

func alignedOf(rho sources.DensityMatrix) *plan.QBER {
	key, check := rho.AlignedErrors()
	return &plan.QBER{Key: key, Check: check}
}

// spectralBand describes a pair of pass bands, on a link unless j is nil.
func spectralBand(m *sources.SpectralMap, j *BandJudge, b *sources.Band) SpectralBand {
	r := SpectralBand{
		Alice: passBand(b, 0, m.CentreNm[0]), Bob: passBand(b, 1, m.CentreNm[1]), Share: b.Share,
		UnpairedShare: plan.PerArm{Alice: b.UnpairedShare[0], Bob: b.UnpairedShare[1]},
		QBERAligned:   plan.QBER{Key: b.StateError[0], Check: b.StateError[1]},
	}
	rho, _ := m.Mixture(b.First, b.Last)
	c := rho.Concurrence()
	if m.Tangles {
		c = m.MostConcurrence(b.First, b.Last)
		r.TangleAtMost = number(c * c)
	} else {
		r.QBERLab, r.Fidelity = axesOf(rho), number(rho.Fidelity())
	}
	single := m.Tangles && len(m.BinsWithPairs(b)) == 1
	if !m.Tangles || single {
		r.Concurrence, r.Tangle = number(c), number(c*c)
	}
	if j != nil {
		r.OnLink = j.onLink(b)
	}
	if j != nil && m.Tangles {
		r.OnLink.UsableRateAtBestBps = number(max(j.usable(b, c, sources.BestDephased), j.usable(b, c, sources.BestEven)))
	}
	if j != nil && single {
		r.OnLink.UsableRateAtWorstBps = number(j.usable(b, c, sources.AtWorst))
	}
	return r
}

func passBand(b *sources.Band, arm int, centres []float64) PassBand {
	p := PassBand{FirstBin: b.First[arm], Bins: b.Bins(arm), CentreNm: tidied(b.CentreNm(arm))}
	if len(centres) > 1 {
		p.FromNm, p.ToNm, p.WidthNm = number(b.FromNm[arm]), number(b.ToNm[arm]), number(tidied(b.WidthNm(arm)))
	}
	return p
}

// tidied takes the last bits out of a wavelength or a window, in which 500 would
// read 499.99999999999994.
func tidied(x float64) float64 {
	const digits = 1e9
	return math.Round(x*digits) / digits
}

// onLink returns what a band gives at its best setting.
func (j *BandJudge) onLink(b *sources.Band) *BandOnLink {
	l, p := j.setting(b)
	r := l.Key(p)
	emitted := p.PairRateHz
	on := &BandOnLink{
		SourcePairRateHz: emitted, PairRateHz: emitted * b.Share,
		UnpairedPhotonsHz: plan.PerArm{Alice: emitted * b.UnpairedShare[0], Bob: emitted * b.UnpairedShare[1]},
		WindowPs:          tidied(p.WindowS * psPerSecond), KeyBasisShare: p.KeyShare,
		QBER:          plan.QBER{Key: r.QBER[keyrate.KeyBasis], Check: r.QBER[keyrate.CheckBasis]},
		SecretRateBps: r.SecretBps, UsableRateBps: r.UsableBps,
	}
	if l.BlockBits > 0 {
		on.FiniteSecretRateBps = number(r.FiniteBps)
	}
	return on
}

// usable returns the usable rate of a band with a state of which the concurrence
// alone is known.
func (j *BandJudge) usable(b *sources.Band, concurrence float64, m sources.Member) float64 {
	other := *b
	other.StateError[0], other.StateError[1] = sources.FromConcurrence(concurrence).Errors(m)
	l, p := j.setting(&other)
	r := l.Key(p)
	return r.UsableBps
}
