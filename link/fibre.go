package link

import "slices"

// Class is a class of single-mode fibre, with the figures that a plan uses
// where none is stated.
type Class struct {
	Name           string
	PMDPsPerSqrtKm float64 // limit of the standard's table, not a typical value
	bands          []band
}

// band is a range of wavelengths over which the class has one attenuation.
type band struct{ fromNm, toNm, dbPerKm float64 }

// SourceAttenuation says where the attenuation of the classes comes from.
const SourceAttenuation = "ITU-T G.652 Appendix I, installed link, from memory"

// SourcePMD says where the polarisation-mode dispersion of the classes comes from.
const SourcePMD = "ITU-T G.652 link design value, a limit, from memory"

// SourceDispersion says where the chromatic dispersion comes from.
const SourceDispersion = "ITU-T G.652 formula, 1310 nm and 0.092 ps/(nm² km); silica (Malitson 1965) below 1000 nm"

// installed are the attenuations of installed links of G.652 Appendix I. The
// maxima of the bare fibre are lower (0.40 and 0.30 dB/km); connectors and
// splices are still added, which keeps a plan on the safe side.
var installed = []band{{1260, 1360, 0.5}, {1530, 1565, 0.275}}

// classes have the same figures: category A of G.657 complies with G.652.D.
var classes = []Class{
	{"G.652.D", 0.1, installed},
	{"G.657", 0.1, installed},
	{"G.657.A1", 0.1, installed},
	{"G.657.A2", 0.1, installed},
}

// ClassByName returns the class of that name.
func ClassByName(name string) (Class, bool) {
	i := slices.IndexFunc(classes, func(c Class) bool { return c.Name == name })
	if i < 0 {
		return Class{}, false
	}
	return classes[i], true
}

// ClassNames lists the classes.
func ClassNames() []string {
	names := make([]string, len(classes))
	for i, c := range classes {
		names[i] = c.Name
	}
	return names
}

// Attenuation returns the class's attenuation in dB/km at a wavelength and
// its source. It is not ok outside the class's bands: there a figure must be
// stated, since attenuation rises steeply at short wavelengths (about as the
// inverse fourth power) and peaks between the bands.
func (c Class) Attenuation(wavelengthNm float64) (dbPerKm float64, source string, ok bool) {
	for _, b := range c.bands {
		if b.fromNm <= wavelengthNm && wavelengthNm <= b.toNm {
			return b.dbPerKm, SourceAttenuation, true
		}
	}
	return 0, "", false
}
