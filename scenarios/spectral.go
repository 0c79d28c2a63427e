package scenarios

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"strings"

	"pairspan/sources"
)

// SpectralMap is the source's light resolved in wavelength, and the pass bands
// in front of it. The pair rate is that of the whole map.
type SpectralMap struct {
	Used         bool
	FromNm, ToNm [2]float64 // of the pass bands, as stated; NaN: the map's own end

	// What follows from the file.
	Map     *sources.SpectralMap // nil until it is read
	Band    sources.Band
	Parting sources.Parting
}

// tellsWidth reports whether an arm's bandwidth follows from the map: that of
// a single bin does not.
func (m *SpectralMap) tellsWidth(arm int) bool { return m.Map != nil && m.Band.WidthNm(arm) > 0 }

const (
	spectralEntry    = "source.spectral_map"
	spectralDoubtful = "spectral-map" // the rule of the warning
)

// SetPassBands puts a pair of pass bands of a spectral map in front of the
// source: the state is that of the pairs inside, unknown where the map holds
// tangles of several bins; wavelengths and bandwidths are the bands'. What is
// counted at the source is counted without them. It returns what is doubtful.
func (s *Scenario) SetPassBands(m *sources.SpectralMap, b sources.Band) (doubts []string) {
	src := &s.Source
	src.SpectralMap = SpectralMap{Used: true, FromNm: b.FromNm, ToNm: b.ToNm, Map: m, Band: b, Parting: b.Parting()}
	src.State, src.Counts, src.MeasuredCAR = m.State(&b), nil, math.NaN()
	for arm := range src.WavelengthNm {
		src.WavelengthNm[arm] = b.CentreNm(arm)
		if width := b.WidthNm(arm); width > 0 {
			src.BandwidthFWHMNm[arm] = width
		}
	}
	if !Stated(src.BandwidthFWHMNm[Bob]) { // a single bin of Bob's, whatever the band of Alice's
		src.BandwidthFWHMNm[Bob] = s.unfiltered().Bandwidth(Bob)
	}
	if src.State.Knowledge() == sources.Unknown {
		c := m.MostConcurrence(b.First, b.Last)
		doubts = append(doubts, fmt.Sprintf("Tangles of several bins leave the state of their mixture open: its tangle is at most %.4g, and nothing is known at worst. Density matrices of the bins would settle it.", c*c))
	}
	return doubts
}

// unfiltered returns the scenario with the wavelengths and the bandwidths of
// the light that its pass bands meet.
func (s *Scenario) unfiltered() *Scenario {
	m := s.Source.SpectralMap.Map
	if m == nil {
		return s
	}
	c := *s
	for arm, edges := range m.EdgeNm {
		from, to := edges[0], edges[len(edges)-1]
		c.Source.WavelengthNm[arm] = (from + to) / 2
		if to > from {
			c.Source.BandwidthFWHMNm[arm] = to - from
		}
	}
	return &c
}

// spectralMap reads a spectral map and puts the pass bands as stated before it.
func (r *reader) spectralMap(entry string, data []byte) error {
	m, err := sources.ReadSpectralMap(bytes.NewReader(data))
	if err != nil {
		return err
	}
	stated := r.s.Source.SpectralMap
	band, arm, err := m.Within(stated.FromNm, stated.ToNm)
	if err != nil {
		if !(arm >= 0 && stated.FromNm[arm] > stated.ToNm[arm]) { // which is an error already
			r.noPassBand(arm, err)
		}
		return nil
	}
	doubts := slices.Concat(m.Doubts, r.s.SetPassBands(m, band), cutBins(&stated, &band))
	r.s.Source.SpectralMap.FromNm, r.s.Source.SpectralMap.ToNm = stated.FromNm, stated.ToNm
	if len(doubts) > 0 {
		r.s.Repairs = append(r.s.Repairs, Repair{spectralDoubtful, entry, strings.Join(doubts, " ")})
	}
	return nil
}

// noPassBand reports pass bands that let nothing through, at the entry that
// states one.
func (r *reader) noPassBand(arm int, err error) {
	at := spectralEntry
	for _, end := range []string{"from_nm", "to_nm"} {
		for i, name := range armNames {
			if full := spectralEntry + "." + end + "." + name; r.stated[full] != nil && (arm < 0 || arm == i) {
				at = full
			}
		}
	}
	r.fail(at, r.keys[at], err.Error(), "pass bands lie in the map and let pairs through; pairspan source MAP shows where they are")
}

// cutTolerance is how far, in parts of a band's width, a pass band may end from
// an edge of its bins before that is said.
const cutTolerance = 0.01

// cutBins says where a pass band as stated does not end with its bins.
func cutBins(stated *SpectralMap, b *sources.Band) (doubts []string) {
	for arm, name := range [2]string{"Alice", "Bob"} {
		off := math.Max(distance(stated.FromNm[arm], b.FromNm[arm]), distance(stated.ToNm[arm], b.ToNm[arm]))
		if off > cutTolerance*b.WidthNm(arm) {
			doubts = append(doubts, fmt.Sprintf("%s's pass band does not end where bins end: it counts as %.9g to %.9g nm, the bins whose middles lie in it.", name, b.FromNm[arm], b.ToNm[arm]))
		}
	}
	return doubts
}

// distance returns how far two figures lie apart; 0 where one is not stated.
func distance(a, b float64) float64 {
	if !Stated(a) {
		return 0
	}
	return math.Abs(a - b)
}

// checkSpectralMap finds what a spectral map does not go with.
func (r *reader) checkSpectralMap() {
	m := &r.s.Source.SpectralMap
	if !m.Used {
		return
	}
	r.exclude("the map tells the state of the pairs in the pass bands", spectralEntry, "source.state")
	r.exclude("the map tells the wavelengths: the middles of the pass bands", spectralEntry, "source.wavelength_nm")
	for arm, name := range armNames {
		r.atMost(spectralEntry+".from_nm."+name, spectralEntry+".to_nm."+name)
		if m.tellsWidth(arm) {
			r.exclude("the map tells the bandwidth: the width of the pass band", spectralEntry, r.bandwidthOf(arm))
		}
	}
}

// bandwidthOf returns the name by which an arm's bandwidth is stated: a single
// value is Alice's.
func (r *reader) bandwidthOf(arm int) string {
	if n := r.stated[bandwidthEntry]; n != nil && n.kind == scalar && arm == Alice {
		return bandwidthEntry
	}
	return bandwidthEntry + "." + armNames[arm]
}

// told reports whether the spectral map takes the place of a required entry,
// or would if it could be read.
func (r *reader) told(name string) bool {
	m := &r.s.Source.SpectralMap
	switch name {
	case "source.wavelength_nm", "source.wavelength_nm.alice", "source.wavelength_nm.bob":
		return m.Used
	case bandwidthEntry, bandwidthEntry + ".alice":
		return m.Used && (m.Map == nil || m.tellsWidth(Alice))
	}
	return false
}

// ToldByMap reports whether an entry of this scenario follows from a spectral
// map, and so cannot be varied by itself.
func (s *Scenario) ToldByMap(entry string) bool {
	if entry == bandwidthEntry {
		entry += "." + armNames[Alice]
	}
	return slices.ContainsFunc(s.DefaultsUsed, func(d Default) bool { return d.Entry == entry && FromMap(d.Source) })
}
