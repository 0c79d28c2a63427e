package link

import (
	"math"
	"testing"
)

// Neumann et al., PRA 104, 022406 (2021), from memory; recomputed to six
// digits.
func TestPublishedWindowShare(t *testing.T) {
	for _, row := range []struct{ windowInFWHM, share float64 }{
		{0.5, 0.443941}, {1, 0.760968}, {2, 0.981468},
	} {
		const fwhmPs = 137
		if got := WindowShare(row.windowInFWHM*fwhmPs, fwhmPs); math.Abs(got-row.share) > 5e-7 {
			t.Errorf("window of %v FWHM: share %v, want %v", row.windowInFWHM, got, row.share)
		}
	}
}

// Non-paralysable dead time: Knoll, Radiation Detection and Measurement,
// ch. 4; figures computed from its formula n/(1 + n t).
func TestPublishedDeadTime(t *testing.T) {
	for _, row := range []struct{ clicksHz, deadTimeNs, registeredHz float64 }{
		{1e6, 50, 952381}, {1e5, 10e3, 50000},
	} {
		d := Detector{DeadTimeNs: row.deadTimeNs}
		if got, _ := d.Respond(row.clicksHz); math.Abs(got-row.registeredHz) > 0.5 {
			t.Errorf("%v /s behind %v ns: %v /s registered, want %v", row.clicksHz, row.deadTimeNs, got, row.registeredHz)
		}
	}
}

// ITU-T G.652, its formula at λ₀ = 1310 nm and S₀ = 0.092 ps/(nm² km).
func TestPublishedDispersion(t *testing.T) {
	for _, row := range []struct{ wavelengthNm, dispersion float64 }{
		{1550, 17.461}, {1383, 6.203}, {1270, -3.858},
	} {
		if got := Dispersion(row.wavelengthNm); math.Abs(got-row.dispersion) > 5e-4 {
			t.Errorf("%v nm: %v ps/(nm km), want %v", row.wavelengthNm, got, row.dispersion)
		}
	}
}

// Malitson, J. Opt. Soc. Am. 55, 1205 (1965): the material dispersion of fused
// silica vanishes at 1273 nm; from memory.
func TestPublishedZeroOfSilica(t *testing.T) {
	below, above := SilicaDispersion(1272.5), SilicaDispersion(1273.5)
	if below >= 0 || above <= 0 {
		t.Errorf("%v ps/(nm km) at 1272.5 nm and %v at 1273.5, want a zero between", below, above)
	}
}

// Loss budgets. The first two are arithmetic on part figures of common
// practice, no source; the third is Wengerowsky et al., npj Quantum Inf. 6, 5
// (2020): 192.82 km with 48 dB. Losses add in decibels and transmittances
// multiply, so a budget must come out the same by either.
func TestPublishedLossBudgets(t *testing.T) {
	for _, row := range []struct {
		parts   []DB
		totalDB float64
	}{
		{[]DB{10 * 0.35, 0.01, 2 * 0.5, 3}, 7.51},
		{[]DB{10 * 0.2, 4 * 0.15, 2 * 0.5}, 3.6},
		{[]DB{192.82 * 0.249}, 48.0},
	} {
		transmittance := 1.0
		for _, part := range row.parts {
			transmittance *= part.Transmittance()
		}
		if got := float64(LossOf(transmittance)); math.Abs(got-row.totalDB) > 0.05 {
			t.Errorf("%v dB: %v dB in all, want %v", row.parts, got, row.totalDB)
		}
		if len(row.parts) > 1 && !near(float64(LossOf(transmittance)), row.totalDB, 1e-13) {
			t.Errorf("%v dB do not add up to %v", row.parts, row.totalDB)
		}
	}
}

// Telecom fibre at 810 nm: 3.0 dB/km, so that 12 km lose 36 dB, one photon in
// four thousand getting through (common practice, no source). A class does
// not guess that figure: it must be stated.
func TestPublishedNearInfrared(t *testing.T) {
	const lengthKm, dbPerKm = 12, 3.0
	if got := 1 / DB(lengthKm*dbPerKm).Transmittance(); math.Abs(got-3981) > 0.5 {
		t.Errorf("one photon in %v, want one in 3981", got)
	}
	class, _ := ClassByName("G.652.D")
	if dbPerKm, _, ok := class.Attenuation(810); ok || dbPerKm != 0 {
		t.Errorf("G.652.D claims %v dB/km at 810 nm", dbPerKm)
	}
}

// Installed links of ITU-T G.652 Appendix I and its PMD link design value,
// from memory; G.657 of category A complies with G.652.D. Bands include their
// ends; between and beyond them a class has no figure.
func TestPublishedFibreClasses(t *testing.T) {
	for _, name := range []string{"G.652.D", "G.657", "G.657.A1", "G.657.A2"} {
		class, ok := ClassByName(name)
		if !ok || class.Name != name || class.PMDPsPerSqrtKm != 0.1 {
			t.Fatalf("%s: %+v, %v", name, class, ok)
		}
		for _, row := range []struct {
			wavelengthNm, dbPerKm float64
			ok                    bool
		}{
			{1260, 0.5, true},
			{1310, 0.5, true},
			{1360, 0.5, true},
			{1530, 0.275, true},
			{1550, 0.275, true},
			{1565, 0.275, true},
			{850, 0, false},
			{1259.9, 0, false},
			{1360.1, 0, false},
			{1383, 0, false},
			{1529.9, 0, false},
			{1565.1, 0, false},
			{1610, 0, false},
		} {
			got, source, ok := class.Attenuation(row.wavelengthNm)
			if got != row.dbPerKm || ok != row.ok || (source == SourceAttenuation) != ok {
				t.Errorf("%s at %v nm: %v dB/km, %q, %v; want %v, %v", name, row.wavelengthNm, got, source, ok, row.dbPerKm, row.ok)
			}
		}
	}
}
