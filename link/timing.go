package link

import "math"

var (
	sqrtLn2      = math.Sqrt(math.Ln2)
	fwhmOverSD   = 2 * math.Sqrt(2*math.Ln2)
	maxwellScale = math.Sqrt(math.Pi / 8) // scale of a Maxwell distribution over its mean
)

// timeBandwidth is the product of the FWHM durations and bandwidths of a
// Gaussian at the Fourier limit, 2 ln 2/π, to the three digits in use.
const timeBandwidth = 0.441

// WindowShare returns the share of the arrivals, 0 to 1, that a window of
// full width windowPs centred on them holds, for a Gaussian spread of
// fwhmPs; without spread it is 1.
//
//	w = erf(√(ln 2) τ/FWHM)
//
// Source: Neumann et al., PRA 104, 022406 (2021).
func WindowShare(windowPs, fwhmPs float64) float64 {
	if fwhmPs == 0 {
		return 1
	}
	return math.Erf(sqrtLn2 * windowPs / fwhmPs)
}

// CoherenceTime returns the coherence time, FWHM in ps, of a photon of a
// Gaussian spectrum of bandwidthNm (FWHM) at wavelengthNm.
//
//	0.441 λ²/(c b)
func CoherenceTime(wavelengthNm, bandwidthNm float64) float64 {
	return timeBandwidth * wavelengthNm * wavelengthNm / (speedOfLightNmPs * bandwidthNm)
}

// PartnerBandwidth returns the bandwidth that energy conservation gives the
// partner at partnerNm of a photon of bandwidthNm at wavelengthNm, the pump
// being narrow.
func PartnerBandwidth(bandwidthNm, wavelengthNm, partnerNm float64) float64 {
	r := partnerNm / wavelengthNm
	return bandwidthNm * r * r
}

// RootSumSquare returns the FWHM of a sum of independent Gaussian spreads.
func RootSumSquare(fwhm ...float64) float64 {
	var sum float64
	for _, f := range fwhm {
		sum += f * f
	}
	return math.Sqrt(sum)
}

// PMDError returns the chance, 0 to 1/3, that polarisation-mode dispersion
// flips the bit of a photon of bandwidthNm at wavelengthNm behind a fibre of
// mean differential group delay delayPs; the polarisation correlations shrink
// by 1 - 2 PMDError.
//
//	1 - 2 e = (1 + 2 (1 + (a σ)²)^(-3/2))/3,  a = delay √(π/8)
//
// For a delay d the two correlations across the principal axis shrink by
// exp(-(dσ)²/2), σ the rms width of the spectrum in angular frequency; this
// is its mean over the Maxwell distribution of d and over all axes, a third
// of the directions being untouched. It is on the safe side, by 1 % at
// dσ = 0.5, where both arms have it.
func PMDError(delayPs, wavelengthNm, bandwidthNm float64) float64 {
	sigma := 2 * math.Pi * speedOfLightNmPs * bandwidthNm / (fwhmOverSD * wavelengthNm * wavelengthNm)
	as := delayPs * maxwellScale * sigma
	return -math.Expm1(-1.5*math.Log1p(as*as)) / 3
}

// MeanDelay returns the mean differential group delay in ps of lengthKm of
// fibre of a PMD coefficient in ps/√km.
func MeanDelay(pmdPsPerSqrtKm, lengthKm float64) float64 {
	return pmdPsPerSqrtKm * math.Sqrt(lengthKm)
}
