package plan

import (
	"math"
	"strconv"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

const psPerSecond = 1e12

// point computes the link at one distance.
func (a *asker) point(km float64) Point {
	lengths := a.s.Lengths(km)
	p := Point{
		DistanceKm: km,
		LengthKm:   PerArm{lengths[keyrate.Alice], lengths[keyrate.Bob]},
		LossDB: PerArm{
			float64(a.s.Loss(keyrate.Alice, lengths[keyrate.Alice])),
			float64(a.s.Loss(keyrate.Bob, lengths[keyrate.Bob])),
		},
		DetectorsNeeded: PerArmCount{detectorsNeeded(a.s, keyrate.Alice), detectorsNeeded(a.s, keyrate.Bob)},
	}
	if a.unknown {
		a.withoutState(km, &p)
		return p
	}
	now := a.at(km, nominal, nil)
	p.setDetectors(now)
	p.setSlots(now)
	p.setCoincidences(now)
	p.setKey(now, a.s.Finite())
	if !a.given {
		worst, best := a.at(km, judged, nil), a.at(km, atBest, nil)
		p.Bounds = &Bounds{AtWorst: bound(worst), AtBest: bound(best)}
	}
	return p
}

// passBands says what stands in front of a source that makes so many pairs.
func passBands(s *scenarios.Scenario, pairRateHz float64) *PassBands {
	if !s.Source.SpectralMap.Used {
		return nil
	}
	b := &s.Source.SpectralMap.Band
	return &PassBands{
		Alice: PassBand{b.FromNm[0], b.ToNm[0]}, Bob: PassBand{b.FromNm[1], b.ToNm[1]},
		Share: b.Share, UnpairedShare: PerArm{b.UnpairedShare[0], b.UnpairedShare[1]}, PairRateHz: pairRateHz * b.Share,
	}
}

// detectorsNeeded counts an arm's detectors: two a basis.
func detectorsNeeded(s *scenarios.Scenario, arm int) int {
	if s.Arms[arm].Passive {
		return 4
	}
	return 2
}

// withoutState fills in what a pair rate alone can tell: no quality is invented.
func (a *asker) withoutState(km float64, p *Point) {
	l := a.s.Link(km, a.members(nominal)[0])
	setting := a.setting
	if a.s.WindowAuto {
		setting.WindowS = math.NaN()
	}
	now := reply{l, setting, l.Key(setting)}
	p.setDetectors(now)
	p.setSlots(now)
	if !a.s.WindowAuto {
		_, accidentals := l.Coincidences(setting)
		p.AccidentalsHz = number(accidentals)
	}
}

func (p *Point) setDetectors(r reply) {
	alice, bob := &r.rate.Arms[keyrate.Alice], &r.rate.Arms[keyrate.Bob]
	p.PairRateHz = r.setting.PairRateHz
	p.KeyBasisShare = r.setting.KeyShare
	p.CountsPerDetectorHz = PerArm{alice.CountsHz, bob.CountsHz}
	p.LiveShare = PerArm{alice.Live, bob.Live}
	p.SinglesHz = PerArm{alice.SinglesHz, bob.SinglesHz}
}

func (p *Point) setSlots(r reply) {
	p.PairsPerSlot = number(r.rate.PairsPerSlot)
	p.SlotsHz = number(r.rate.SlotsHz)
	p.WindowPs = number(windowPs(r.setting))
	p.WindowShare = number(r.rate.WindowShare)
}

func (p *Point) setCoincidences(r reply) {
	coincidences, accidentals := r.link.Coincidences(r.setting)
	p.CoincidencesHz, p.AccidentalsHz = number(coincidences), number(accidentals)
	p.CAR = number(max(0, coincidences-accidentals) / accidentals)
}

func (p *Point) setKey(r reply, finite bool) {
	p.SiftedBps = number(r.rate.SiftedBps())
	p.QBER = &QBER{r.rate.QBER[keyrate.KeyBasis], r.rate.QBER[keyrate.CheckBasis]}
	p.SecretRateBps = number(r.rate.SecretBps)
	p.KeyBasisSecretBps = number(r.rate.KeyBasisSecretBps(r.link.ErrorCorrectionF))
	if finite {
		p.FiniteSecretRateBps = number(r.rate.FiniteBps)
	}
	p.UsableRateBps = number(r.rate.UsableBps)
}

func bound(r reply) Bound {
	return Bound{
		WindowPs:      windowPs(r.setting),
		PairRateHz:    r.setting.PairRateHz,
		KeyBasisShare: r.setting.KeyShare,
		QBER:          QBER{r.rate.QBER[keyrate.KeyBasis], r.rate.QBER[keyrate.CheckBasis]},
		SecretRateBps: r.rate.SecretBps,
		UsableRateBps: r.rate.UsableBps,
	}
}

// windowDigits drops the last bits, so that a window of 500 ps does not read
// 499.99999999999994 after its way through seconds.
const windowDigits = 12

func windowPs(p keyrate.OperatingPoint) float64 {
	ps, err := strconv.ParseFloat(strconv.FormatFloat(p.WindowS*psPerSecond, 'g', windowDigits, 64), 64)
	if err != nil {
		return math.NaN()
	}
	return ps
}
