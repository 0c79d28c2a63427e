package scenarios

import (
	"math"

	"pairspan/link"
)

// Bandwidth returns a photon's bandwidth, FWHM in nm; Bob's follows from
// Alice's by energy conservation unless it was stated.
func (s *Scenario) Bandwidth(i int) float64 {
	src := &s.Source
	if Stated(src.BandwidthFWHMNm[i]) {
		return src.BandwidthFWHMNm[i]
	}
	return link.PartnerBandwidth(src.BandwidthFWHMNm[Alice], src.WavelengthNm[Alice], src.WavelengthNm[Bob])
}

// dispersion returns an arm's chromatic dispersion: as stated, else by the
// wavelength.
func (s *Scenario) dispersion(i int) float64 {
	if d := s.Arms[i].DispersionPsPerNmKm; Stated(d) {
		return d
	}
	return link.Dispersion(s.Source.WavelengthNm[i])
}

// dispersionSpread returns the signed spread, ps, that a fibre gives a photon
// over its bandwidth.
func (s *Scenario) dispersionSpread(i int, lengthKm float64) float64 {
	return s.dispersion(i) * lengthKm * s.Bandwidth(i)
}

// coherence returns the longer of the two photons' coherence times.
func (s *Scenario) coherence() float64 {
	src := &s.Source
	return max(
		link.CoherenceTime(src.WavelengthNm[Alice], s.Bandwidth(Alice)),
		link.CoherenceTime(src.WavelengthNm[Bob], s.Bandwidth(Bob)))
}

// differenceSpread returns the FWHM of the difference of the arrival times of
// a pair from a continuous source. The photons are anticorrelated in
// frequency, so dispersion of equal sign in both arms adds up and of opposite
// sign cancels (Franson, PRA 45, 3126 (1992)).
func (s *Scenario) differenceSpread(lengthKm [2]float64) float64 {
	dispersion := s.dispersionSpread(Alice, lengthKm[Alice]) + s.dispersionSpread(Bob, lengthKm[Bob])
	return link.RootSumSquare(
		s.detectorOf(Alice).JitterFWHMPs, s.detectorOf(Bob).JitterFWHMPs, s.ClockJitterFWHMPs,
		max(s.coherence(), s.Source.Delays.RestFWHMPs), dispersion)
}

// clockSpread returns the FWHM of one photon's arrival against the clock of a
// pulsed source.
func (s *Scenario) clockSpread(i int, lengthKm float64) float64 {
	return link.RootSumSquare(
		s.detectorOf(i).JitterFWHMPs, s.ClockJitterFWHMPs, s.Source.PumpPulseFWHMPs,
		s.dispersionSpread(i, lengthKm))
}

// Spread returns the arrival spread, FWHM in ps, that a window must hold at a
// distance: continuous, of the difference; pulsed, the wider arm's.
func (s *Scenario) Spread(km float64) float64 {
	length := s.Lengths(km)
	if s.Pulsed() {
		return max(s.clockSpread(Alice, length[Alice]), s.clockSpread(Bob, length[Bob]))
	}
	return s.differenceSpread(length)
}

// Steps of a search along the fibre.
const (
	searchStepDB  = 0.5 // loss changes by no more from one step to the next
	searchStepKm  = 5.0 // nor does the length
	leastStepKm   = 0.05
	spreadPerStep = 0.5 // of the spread without fibre, where dispersion can cancel
)

// SearchStepKm returns a step of distance over which neither loss nor spread
// changes much: dispersion of opposite signs may cancel within a short
// stretch, and a search along the fibre must not step over it.
func (s *Scenario) SearchStepKm() float64 {
	share := s.Shares()
	step := searchStepKm
	if loss := share[Alice]*s.Attenuation(Alice) + share[Bob]*s.Attenuation(Bob); loss > 0 {
		step = min(step, searchStepDB/loss)
	}
	a, b := s.dispersionSpread(Alice, 1), s.dispersionSpread(Bob, 1)
	if a*b < 0 {
		bare := s.differenceSpread([2]float64{})
		step = min(step, spreadPerStep*bare/math.Abs(share[Alice]*a-share[Bob]*b))
	}
	return max(step, leastStepKm)
}

// detectorOf returns the detector of an arm.
func (s *Scenario) detectorOf(i int) *link.Detector { return &s.Detector(s.Arms[i].Detector).Detector }
