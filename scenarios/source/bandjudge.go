package source

import (
	"fmt"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/scenarios"
	"pairspan/sources"
)

const psPerSecond = 1e12

// BandJudge tells what a pair of pass bands in front of a source is worth on a
// link at its installed distance. It is safe for use by several at once.
//
// The scenario's pair rate is that of the whole map. A band passes its share of
// it, and pairs of which one photon passes stay as light without a partner in
// that photon's arm, besides what the scenario states. The band's width takes the
// place of the scenario's bandwidth and its middle that of the wavelength, where
// the map tells them. The state is that of the mixture, the analysers aligned to
// it. All else is the scenario's.
type BandJudge struct {
	start  keyrate.Link // without arms, spread and state
	setup  keyrate.OperatingPoint
	free   keyrate.Free // MaxPairRateHz is that of the whole map
	jitter [3]float64   // FWHM of both detectors and the clock, ps
	restPs float64      // of a histogram of delays
	arms   [2][][]armBand
	hints  *bandHints // nil: Bound does without
}

// armBand is one arm behind one of its bands.
type armBand struct {
	arm          keyrate.Arm
	dispersionPs float64 // spread over the band, signed
	coherencePs  float64
}

// NewBandJudge returns the judge of a map's pass bands on a scenario's link. The
// error names a wavelength at which the loss of the fibre is not known.
func NewBandJudge(s *scenarios.Scenario, m *sources.SpectralMap) (*BandJudge, error) {
	bare, err := withoutCounts(s)
	if err != nil {
		return nil, err
	}
	j := &BandJudge{setup: s.Setting(), start: bare.Link(s.DistanceKm(), sources.Nominal), restPs: s.Source.Delays.RestFWHMPs}
	j.free = keyrate.Free{Window: s.WindowAuto, KeyShare: s.KeyShareAuto}
	if s.Source.PumpAuto {
		j.free.MaxPairRateHz = j.setup.PairRateHz
	}
	j.jitter = [3]float64{
		s.Detector(s.Arms[scenarios.Alice].Detector).JitterFWHMPs,
		s.Detector(s.Arms[scenarios.Bob].Detector).JitterFWHMPs, s.ClockJitterFWHMPs,
	}
	for arm := range j.arms {
		edges := m.EdgeNm[arm]
		j.arms[arm] = make([][]armBand, len(edges)-1)
		for first := range j.arms[arm] {
			for last := first + 1; last < len(edges); last++ {
				band, err := behindBand(bare, arm, edges[first], edges[last])
				if err != nil {
					return nil, err
				}
				j.arms[arm][first] = append(j.arms[arm][first], band)
			}
		}
	}
	j.hints = newBandHints(j.arms[0])
	return j, nil
}

// withoutCounts returns the scenario with both bandwidths, and the losses that
// were counted at its source, written out: those were counted without the pass
// bands and do not change with them.
func withoutCounts(s *scenarios.Scenario) (*scenarios.Scenario, error) {
	emission, err := s.Emission()
	if err != nil {
		return nil, err
	}
	c := s.Clone()
	c.Source.SpectralMap = scenarios.SpectralMap{} // the judge's own takes its place
	for arm := range c.Arms {
		if a := &c.Arms[arm]; a.FixedLossFromCounts {
			a.FixedLossFromCounts, a.FixedLossDB = false, float64(emission.CollectionLoss[arm])
		}
		c.Source.BandwidthFWHMNm[arm] = s.Bandwidth(arm)
	}
	return c, nil
}

// behindBand returns an arm behind the pass band between two wavelengths.
func behindBand(s *scenarios.Scenario, arm int, fromNm, toNm float64) (armBand, error) {
	c := s.Clone()
	wavelength, width := &c.Source.WavelengthNm[arm], &c.Source.BandwidthFWHMNm[arm]
	*wavelength = (fromNm + toNm) / 2
	if toNm > fromNm {
		*width = toNm - fromNm
	}
	km := c.DistanceKm()
	length, a := c.Lengths(km)[arm], &c.Arms[arm]
	if class, _ := link.ClassByName(a.Fibre); !scenarios.Stated(a.LossDBPerKm) && !scenarios.Stated(a.MeasuredLossDB) && length > 0 {
		if _, _, known := class.Attenuation(*wavelength); !known {
			return armBand{}, fmt.Errorf("the loss of %s fibre at %.6g nm, in the middle of a pass band of %s, is not known: state arms.%s.loss_db_per_km",
				a.Fibre, *wavelength, armNames[arm], armEntries[arm])
		}
	}
	dispersion := a.DispersionPsPerNmKm
	if !scenarios.Stated(dispersion) {
		dispersion = link.Dispersion(*wavelength)
	}
	return armBand{
		arm:          c.Link(km, sources.Nominal).Arms[arm],
		dispersionPs: dispersion * length * *width,
		coherencePs:  link.CoherenceTime(*wavelength, *width),
	}, nil
}

// The arms as people are told of them, and as entries name them.
var (
	armNames   = [2]string{"Alice", "Bob"}
	armEntries = [2]string{"alice", "bob"}
)

// link returns the link behind a pair of pass bands, to be asked with the pair
// rate of the whole map.
func (j *BandJudge) link(b *sources.Band) keyrate.Link {
	l, through := j.start, b.Parting()
	l.StateError = b.StateError
	var behind [2]*armBand
	for arm := range behind {
		behind[arm] = &j.arms[arm][b.First[arm]][b.Last[arm]-b.First[arm]]
		l.Arms[arm] = behind[arm].arm
	}
	l.PutPassBands(through.Pairs, through.Passes)
	if l.PulseRateHz == 0 {
		l.SpreadFWHMPs = link.RootSumSquare(
			j.jitter[0], j.jitter[1], j.jitter[2],
			max(behind[0].coherencePs, behind[1].coherencePs, j.restPs),
			behind[0].dispersionPs+behind[1].dispersionPs)
	}
	return l
}

// setting returns the link behind a pair of pass bands, and the best setting of
// what the scenario leaves to the planner.
func (j *BandJudge) setting(b *sources.Band) (l keyrate.Link, p keyrate.OperatingPoint) {
	l, p = j.link(b), j.setup
	if j.free == (keyrate.Free{}) {
		return l, p
	}
	return l, l.Best(p, j.free)
}

// Worth returns the usable rate in bit/s, at the best setting. Where there is
// none it is negative: above −1 where blocks are too short for a key, the more
// the greater the asymptotic rate; below that by how far the secret fraction is
// from zero with the narrowest window, even shares and the pump at its ceiling,
// where these are free.
func (j *BandJudge) Worth(b sources.Band) float64 {
	l, p := j.setting(&b)
	r := l.Key(p)
	if worth := worthOfKey(&r); worth > noKey {
		if worth > 0 && j.hints != nil {
			j.hints.keep(&b, &l, p)
		}
		return worth
	}
	return j.worthWithoutKey(&b)
}

// worthWithoutKey returns the worth of a band that gives no key.
func (j *BandJudge) worthWithoutKey(b *sources.Band) float64 {
	l, p := j.link(b), j.setup
	if j.free.Window {
		p.WindowS = leastWindowS
	}
	r := l.Key(p)
	return noKey + wantOf(&l, &r)
}
