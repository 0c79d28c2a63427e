package source

import (
	"bytes"
	"fmt"

	"pairspan/link"
	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// spectralMap says what a spectral map holds, and which pass bands serve a link
// best.
func (t *task) spectralMap(text []byte) error {
	m, err := sources.ReadSpectralMap(bytes.NewReader(text))
	if err != nil {
		return t.wrong(err)
	}
	var progress func(done, total int)
	if t.Progress != nil {
		progress = func(done, total int) { t.Progress("pass bands", done, total) }
	}
	if t.SpectralMap, err = DescribeSpectralMap(t.ctx, m, t.link, progress); err != nil {
		return err
	}
	t.warn("spectral-map", t.SpectralMap.Doubts...)
	t.Sentence = t.SpectralMap.Sentence
	band := m.Whole()
	if best := t.SpectralMap.Best; best != nil {
		band = best.within(m)
	}
	if rho, ok := m.Mixture(band.First, band.Last); ok && !m.Tangles {
		t.State = stateOf(rho, nil)
	}
	if t.link == nil {
		return nil
	}
	return t.passed(m, &band)
}

// within returns the band with all that the map knows of it.
func (b *SpectralBand) within(m *sources.SpectralMap) sources.Band {
	first := [2]int{b.Alice.FirstBin, b.Bob.FirstBin}
	return m.Band(first, [2]int{first[0] + b.Alice.Bins - 1, first[1] + b.Bob.Bins - 1})
}

// passed says what the link carries behind a pair of pass bands.
func (t *task) passed(m *sources.SpectralMap, b *sources.Band) error {
	if m.Tangles && binsWithPairs(m, b) > 1 {
		t.tanglesAlone()
		return nil
	}
	rho, _ := m.Mixture(b.First, b.Last)
	state := sources.FromDensityMatrix(rho)
	if m.Tangles {
		c := m.MostConcurrence(b.First, b.Last) // of the one bin with pairs
		state = sources.FromTangle(c * c)
	}
	c, replaced := behindBands(withState(t.link, state), b)
	replaced = append(replaced, plan.Change{Entry: "source.state", Value: "that of the pairs in the pass bands, from " + t.Title})
	if err := t.carry(c, replaced); err != nil {
		return err
	}
	*t.Link.PairRateHz *= b.Share / partingOf(b).pairs // of those that pass both
	return nil
}

// tanglesAlone is the answer where nothing is known at worst.
func (t *task) tanglesAlone() {
	t.notTold("tangles of several bins give no value at worst. Density matrices of the bins would settle it.")
	best := &t.SpectralMap.Whole
	if t.SpectralMap.Best != nil {
		best = t.SpectralMap.Best
	}
	t.Link.Sentence = fmt.Sprintf("%s If all bins hold Werner states about one Bell state, %s bit/s; at best %s.",
		t.Link.Sentence, three(best.OnLink.UsableRateBps), three(*best.OnLink.UsableRateAtBestBps))
}

// behindBands returns a link whose source passes a pair of pass bands first, and
// what that changes. Pairs that a band parts are pairs that lost one photon on
// the way: see parting.
func behindBands(s *scenarios.Scenario, b *sources.Band) (*scenarios.Scenario, []plan.Change) {
	c, through := writtenOut(s), partingOf(b)
	var replaced []plan.Change
	set := func(entry string, value float64) {
		replaced = append(replaced, plan.Change{Entry: entry, Value: hz(value)})
	}
	src := &c.Source
	for _, rate := range []*float64{&src.PairRateHz, &src.PairsPerPulse, &src.MaxPairRateHz, &src.MaxPairsPerPulse} {
		*rate *= through.pairs // those that are not stated stay so
	}
	set(emissionEntry(c.Pulsed()), emitted(c))
	bandwidth := [2]float64{s.Bandwidth(0), s.Bandwidth(1)}
	for arm := range c.Arms {
		src.BandwidthFWHMNm[arm] = bandwidth[arm]
		if width := b.WidthNm(arm); width > 0 {
			src.BandwidthFWHMNm[arm] = width
			set("source.bandwidth_fwhm_nm."+armEntries[arm], src.BandwidthFWHMNm[arm])
		}
		src.WavelengthNm[arm] = b.CentreNm(arm)
		replaced = append(replaced, plan.Change{Entry: "source.wavelength_nm." + armEntries[arm], Value: fmt.Sprintf("%.8g", src.WavelengthNm[arm])})
		c.Arms[arm].FixedLossDB = float64(c.FixedLoss(arm) + link.LossOf(through.passes[arm]))
		set("arms."+armEntries[arm]+".fixed_loss_db", c.Arms[arm].FixedLossDB)
		src.UnpairedHz[arm] /= through.passes[arm] // nothing of it is lost
	}
	return c, replaced
}

// emitted is what a scenario's emission entry says, or its ceiling where the
// planner chooses.
func emitted(s *scenarios.Scenario) float64 {
	rate := s.Setting().PairRateHz
	if s.Pulsed() {
		return rate / s.Source.PulseRateHz
	}
	return rate
}
