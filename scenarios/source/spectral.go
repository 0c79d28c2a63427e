package source

import (
	"bytes"
	"fmt"

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
	t.mapInScenario(t.SpectralMap.Best)
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
	if m.State(b).Knowledge() == sources.Unknown {
		t.tanglesAlone()
		return nil
	}
	c := t.link.Clone()
	c.Source.BandwidthFWHMNm[1] = c.Bandwidth(1) // of a single bin: before Alice's is narrowed
	c.SetPassBands(m, *b)                        // what it doubts is said of the map already
	without(c, "source.state")
	if err := t.carry(c, t.bandEntries(c)); err != nil {
		return err
	}
	*t.Link.PairRateHz *= b.Share // of those that pass both
	return nil
}

// bandEntries returns what a scenario would say of its pass bands, and what
// follows from them.
func (t *task) bandEntries(c *scenarios.Scenario) []plan.Change {
	entries := []plan.Change{{Entry: "source.spectral_map.file", Value: t.Title}}
	src := &c.Source
	for _, of := range []struct {
		entry string
		value [2]float64
	}{
		{"source.spectral_map.from_nm.", src.SpectralMap.FromNm},
		{"source.spectral_map.to_nm.", src.SpectralMap.ToNm},
		{"source.wavelength_nm.", src.WavelengthNm},
		{"source.bandwidth_fwhm_nm.", src.BandwidthFWHMNm},
	} {
		for arm, name := range armEntries {
			entries = append(entries, plan.Change{Entry: of.entry + name, Value: fmt.Sprintf("%.9g", of.value[arm])})
		}
	}
	return append(entries, plan.Change{Entry: "source.state", Value: "that of the pairs in the pass bands"})
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
