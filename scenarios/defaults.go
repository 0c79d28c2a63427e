package scenarios

import (
	"math"
	"strconv"
	"strings"

	"pairspan/link"
)

// blank returns a scenario in which no number is stated.
func blank(detectors []string) *Scenario {
	s := &Scenario{Detectors: make([]Detector, len(detectors))}
	for i, name := range detectors {
		s.Detectors[i].Name = name
	}
	each(s, func(r *row, i int, _ string) {
		if r.at == nil {
			return
		}
		if at := r.at(s, i); at != nil {
			*at = math.NaN()
		}
	})
	return s
}

// useDefaults fills in what the file leaves out, and lists it.
func (r *reader) useDefaults() {
	each(r.s, func(e *row, i int, name string) {
		if r.stated[name] != nil || r.stated[parent(name)] == nil && !alwaysThere(parent(name)) || !r.applies(e) {
			return
		}
		value, source := e.def, e.source
		switch {
		case e.derive != nil:
			value, source = e.derive(r.s, i)
		case value == "" || e.asSaid:
		case e.form == numberForm && len(e.words) == 0:
			*e.at(r.s, i), _ = strconv.ParseFloat(value, 64) // a test holds that every default is a number
		default:
			e.set(r.s, i, value)
		}
		idle := e.unless != "" && r.stated[join(parent(name), e.unless)] != nil
		if value != "" && !idle {
			r.s.DefaultsUsed = append(r.s.DefaultsUsed, Default{name, value, source})
		}
	})
}

// alwaysThere reports whether a group's defaults hold though the file leaves
// the group out: those without any required entry do.
func alwaysThere(group string) bool {
	switch group {
	case "", "distance", "uncertainty", "source.unpaired_photons_hz",
		"source.wavelength_nm", bandwidthEntry, spectralEntry + ".from_nm", spectralEntry + ".to_nm":
		return true
	}
	return false
}

// applies reports whether an entry is for this kind of source, or of need.
func (r *reader) applies(e *row) bool {
	switch e.only {
	case pulsed:
		return r.stated["source.pulse_rate_hz"] != nil
	case continuous:
		return r.stated["source.pulse_rate_hz"] == nil
	case renewing:
		return r.stated["need.aes256_renewal_s"] != nil
	}
	return true
}

// What the draws make of a tomography.
const (
	tomographyAsFitted = "as_fitted"
	tomographyRepeated = "repeated"
)

func tomographyDefault(s *Scenario, _ int) (value, source string) {
	if s.Source.Counts != nil {
		return tomographyAsFitted, "the state counts as exact"
	}
	return "", ""
}

// mapEnds is where a pass band ends that is not stated.
const mapEnds = "no pass band stated: as far as the map goes"

func wholeMap(s *Scenario, _ int) (value, source string) {
	if s.Source.SpectralMap.Used {
		return "all", mapEnds
	}
	return "", ""
}

// inMap ends the source of a figure that a spectral map tells.
const inMap = " in the spectral map"

// FromMap reports whether a default with that source is none at all, but what a
// spectral map tells.
func FromMap(source string) bool { return strings.HasSuffix(source, inMap) }

// middleOfBand is the wavelength that a spectral map tells.
func middleOfBand(s *Scenario, arm int) (value, source string) {
	if m := &s.Source.SpectralMap; m.Map != nil {
		return tidy(s.Source.WavelengthNm[arm]), "the middle of the pass band" + inMap
	}
	return "", ""
}

// defaultBandwidth is that of the pass band in a spectral map, or, of Bob's
// photon, what energy conservation makes of Alice's.
func defaultBandwidth(s *Scenario, arm int) (value, source string) {
	if s.Source.SpectralMap.tellsWidth(arm) {
		return tidy(s.Source.BandwidthFWHMNm[arm]), "the width of the pass band" + inMap
	}
	if width := s.Bandwidth(Bob); arm == Bob && Stated(width) {
		return brief(width), "energy conservation, from Alice's bandwidth"
	}
	return "", ""
}

// defaultAttenuation is that of a measured run, stored with the arm since
// the fibre's class knows nothing of it; else that of the fibre's class.
func defaultAttenuation(s *Scenario, arm int) (value, source string) {
	a := &s.Arms[arm]
	class, _ := link.ClassByName(a.Fibre)
	if db, from, ok := class.Attenuation(s.Source.WavelengthNm[arm]); ok {
		return brief(db), from
	}
	if Stated(a.MeasuredLossDB) && a.LengthKm > 0 {
		a.LossDBPerKm = a.MeasuredLossDB / a.LengthKm
		return brief(a.LossDBPerKm), "measured_loss_db over length_km, since the class has no figure here"
	}
	return "", ""
}

func defaultDispersion(s *Scenario, arm int) (value, source string) {
	if d := link.Dispersion(s.Source.WavelengthNm[arm]); Stated(d) {
		return brief(d), link.SourceDispersion
	}
	return "", ""
}

func defaultPMD(s *Scenario, arm int) (value, source string) {
	if class, ok := link.ClassByName(s.Arms[arm].Fibre); ok {
		return brief(class.PMDPsPerSqrtKm), link.SourcePMD
	}
	return "", ""
}

// brief writes a computed figure with six digits.
func brief(x float64) string { return rounded(x, 6) }

// tidy writes a wavelength without the last bits of its way.
func tidy(x float64) string { return rounded(x, 9) }

func rounded(x float64, digits int) string {
	r, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', digits, 64), 64)
	return figure(r)
}
