package link

import "math"

const (
	zeroDispersionNm = 1310  // λ₀, a typical value within the limits of G.652
	dispersionSlope  = 0.092 // S₀, ps/(nm² km), the maximum of G.652
	glassBelowNm     = 1000  // below, the formula of G.652 does not hold
	speedOfLightNmPs = 299792.458
	psPerNmToKm      = 1e12 // ps/nm² to ps/(nm km): 1 km = 10¹² nm
)

// Dispersion returns the chromatic dispersion of standard single-mode fibre
// in ps/(nm km) at a wavelength in nm: negative below 1310 nm.
//
//	D = (S₀/4)(λ - λ₀⁴/λ³)                [1]
//
// Below 1000 nm, where that formula does not hold, it is the material
// dispersion of silica.
//
// [1] ITU-T G.652.
func Dispersion(wavelengthNm float64) float64 {
	if wavelengthNm < glassBelowNm {
		return SilicaDispersion(wavelengthNm)
	}
	ratio := zeroDispersionNm / wavelengthNm
	return dispersionSlope / 4 * wavelengthNm * (1 - ratio*ratio*ratio*ratio)
}

// silica are the terms Bλ²/(λ² - L²) of fused silica's n² - 1, L in µm [1].
var silica = [3]struct{ b, l float64 }{
	{0.6961663, 0.0684043}, {0.4079426, 0.1162414}, {0.8974794, 9.896161},
}

// SilicaDispersion returns the material dispersion of fused silica in
// ps/(nm km) at a wavelength in nm (210 to 3700 nm).
//
//	D = -(λ/c) d²n/dλ²,  n² = 1 + Σ Bᵢ λ²/(λ² - Lᵢ²)
//
// with the derivatives of n² taken term by term. The coefficients are from
// memory.
//
// [1] Malitson (1965). J. Opt. Soc. Am. 55, 1205.
func SilicaDispersion(wavelengthNm float64) float64 {
	const nmPerUm = 1000
	x := wavelengthNm / nmPerUm
	var f, f1, f2 float64 // n² and its derivatives
	f = 1
	for _, s := range silica {
		ll := s.l * s.l
		d := x*x - ll
		f += s.b * x * x / d
		f1 -= 2 * s.b * x * ll / (d * d)
		f2 += 2 * s.b * ll * (3*x*x + ll) / (d * d * d)
	}
	n := math.Sqrt(f)
	n2 := f2/(2*n) - f1*f1/(4*n*n*n) // per µm²
	return -x / nmPerUm * n2 / speedOfLightNmPs * psPerNmToKm
}
