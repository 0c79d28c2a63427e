package scenarios

import (
	"fmt"
	"math"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/sources"
)

const psPerSecond = 1e12

// Link returns the link at one distance with one member of the states that
// the scenario leaves open, at no particular setting. It is the only place
// where file units, fibre classes and decibels become plain numbers. km is
// the length of the arm that lengthens; of both together where both do.
func (s *Scenario) Link(km float64, m sources.Member) keyrate.Link {
	length := s.Lengths(km)
	l := keyrate.Link{
		Modes:            math.Inf(1),
		ErrorCorrectionF: s.ErrorCorrectionF,
		DutyCycle:        s.DutyCycle,
		StateError:       s.stateErrors(m),
	}
	if s.Pulsed() {
		l.PulseRateHz = s.Source.PulseRateHz
	} else {
		l.SpreadFWHMPs = s.differenceSpread(length)
	}
	if Stated(s.Source.SchmidtNumber) {
		l.Modes = s.Source.SchmidtNumber
	}
	if s.Finite() {
		l.BlockBits, l.EpsilonTotal = s.SiftedBitsPerBlock, s.EpsilonTotal
		l.AuthenticationBits = s.AuthenticationBitsPerBlock
	}
	for i := range l.Arms {
		l.Arms[i] = s.arm(i, length[i])
	}
	if m := &s.Source.SpectralMap; m.Used {
		l.PutPassBands(m.Parting.Pairs, m.Parting.Passes)
	}
	return l
}

// Setting returns the operating point as described. What is left to the
// planner stands at its start until Settle finds it: a window at 0, the pump
// at its ceiling, the share of the key basis at a half.
func (s *Scenario) Setting() keyrate.OperatingPoint {
	emission, _ := s.Emission() // reading has refused what cannot be counted
	p := keyrate.OperatingPoint{PairRateHz: emission.PairRateHz, KeyShare: s.KeyBasisShare}
	if s.Source.PumpAuto {
		p.PairRateHz, _ = s.Ceiling()
	}
	if s.KeyShareAuto {
		p.KeyShare = evenShare
	}
	if !s.WindowAuto {
		p.WindowS = s.WindowPs / psPerSecond
	}
	return p
}

// Settle searches the settings that the scenario leaves to the planner, for
// one link.
func (s *Scenario) Settle(l *keyrate.Link, p keyrate.OperatingPoint) keyrate.OperatingPoint {
	free := keyrate.Free{Window: s.WindowAuto, KeyShare: s.KeyShareAuto}
	if s.Source.PumpAuto {
		free.MaxPairRateHz, _ = s.Ceiling()
	}
	if free == (keyrate.Free{}) {
		return p
	}
	return l.Best(p, free)
}

// stateErrors returns the errors of a lone pair in the key and check basis.
func (s *Scenario) stateErrors(m sources.Member) [2]float64 {
	state := s.Source.State
	if Stated(s.Source.MeasuredCAR) {
		state, _ = state.WithoutAccidentals(s.Source.MeasuredCAR)
	}
	e1, e2 := state.Errors(m)
	return [2]float64{e1, e2}
}

// DistanceKm returns the installed distance: what km is in Link.
func (s *Scenario) DistanceKm() float64 {
	switch s.Lengthen {
	case LengthenAlice:
		return s.Arms[Alice].LengthKm
	case LengthenBob:
		return s.Arms[Bob].LengthKm
	}
	return s.Arms[Alice].LengthKm + s.Arms[Bob].LengthKm
}

// Shares returns how a length, or a loss, that is added to the link divides
// between the arms: to the one that lengthens; for both in proportion to
// their installed lengths, equally where both are 0.
func (s *Scenario) Shares() [2]float64 {
	switch s.Lengthen {
	case LengthenAlice:
		return [2]float64{1, 0}
	case LengthenBob:
		return [2]float64{0, 1}
	}
	a, b := s.Arms[Alice].LengthKm, s.Arms[Bob].LengthKm
	if a+b == 0 {
		return [2]float64{0.5, 0.5}
	}
	return [2]float64{a / (a + b), b / (a + b)}
}

// Lengths returns the fibre length of each arm at a distance.
func (s *Scenario) Lengths(km float64) [2]float64 {
	share := s.Shares()
	switch s.Lengthen {
	case LengthenAlice:
		return [2]float64{km, s.Arms[Bob].LengthKm}
	case LengthenBob:
		return [2]float64{s.Arms[Alice].LengthKm, km}
	}
	return [2]float64{share[Alice] * km, share[Bob] * km}
}

// arm returns one arm in plain numbers.
func (s *Scenario) arm(i int, lengthKm float64) keyrate.Arm {
	a, src := &s.Arms[i], &s.Source
	det := s.Detector(a.Detector).Detector
	arm := keyrate.Arm{
		Transmittance: s.Loss(i, lengthKm).Transmittance(),
		Detector:      det,
		Passive:       a.Passive,
		Misalignment:  a.MisalignmentError,
		PMDError:      link.PMDError(link.MeanDelay(s.pmd(i), lengthKm), src.WavelengthNm[i], s.Bandwidth(i)),
		BackgroundHz:  a.BackgroundCountsHz,
		UnpairedHz:    s.Unpaired(i),
	}
	if s.Pulsed() {
		arm.SpreadFWHMPs = s.clockSpread(i, lengthKm)
	}
	return arm
}

// losses are the parts of an arm's optical loss, in the order of a budget.
type losses struct{ fixed, run, connectors, splices link.DB }

func (l losses) total() link.DB { return l.fixed + l.run + l.connectors + l.splices }

// losses returns an arm's optical losses at a fibre length. A measured run,
// which holds connectors and splices, changes with length by the coefficient,
// not below 0; connectors and splices do not grow with length.
func (s *Scenario) losses(i int, lengthKm float64) losses {
	a := &s.Arms[i]
	l := losses{fixed: s.FixedLoss(i)}
	if Stated(a.MeasuredLossDB) {
		l.run = link.DB(max(0, a.MeasuredLossDB+s.Attenuation(i)*(lengthKm-a.LengthKm)))
		return l
	}
	l.run = link.DB(s.Attenuation(i) * lengthKm)
	l.connectors = link.DB(a.ConnectorPairs * a.ConnectorPairLossDB)
	l.splices = link.DB(a.Splices * a.SpliceLossDB)
	return l
}

// Loss returns an arm's whole optical loss at a fibre length, from the
// source's output to the detector's input.
func (s *Scenario) Loss(i int, lengthKm float64) link.DB { return s.losses(i, lengthKm).total() }

// LossItem is one named part of an arm's optical loss.
type LossItem struct {
	Item string
	Loss link.DB
}

// LossItems names an arm's optical losses at a fibre length: fixed, then the run.
func (s *Scenario) LossItems(i int, lengthKm float64) []LossItem {
	a, l := &s.Arms[i], s.losses(i, lengthKm)
	items := []LossItem{{"fixed: coupling, filters, analyser", l.fixed}}
	if Stated(a.MeasuredLossDB) {
		return append(items, LossItem{fmt.Sprintf("fibre run as measured, %.4g km", lengthKm), l.run})
	}
	items = append(items, LossItem{fmt.Sprintf("fibre, %.4g km", lengthKm), l.run})
	if a.ConnectorPairs > 0 {
		items = append(items, LossItem{fmt.Sprintf("connector pairs, %.0f", a.ConnectorPairs), l.connectors})
	}
	if a.Splices > 0 {
		items = append(items, LossItem{fmt.Sprintf("splices, %.0f", a.Splices), l.splices})
	}
	return items
}

// FixedLoss returns the loss that is not the run's: as stated, or as the
// counts at the source tell.
func (s *Scenario) FixedLoss(i int) link.DB {
	if !s.Arms[i].FixedLossFromCounts {
		return link.DB(s.Arms[i].FixedLossDB)
	}
	emission, _ := s.Emission()
	return emission.CollectionLoss[i]
}

// Attenuation returns an arm's loss per km of fibre: as stated, else its class's.
func (s *Scenario) Attenuation(i int) float64 {
	a := &s.Arms[i]
	if Stated(a.LossDBPerKm) {
		return a.LossDBPerKm
	}
	class, _ := link.ClassByName(a.Fibre)
	db, _, _ := class.Attenuation(s.Source.WavelengthNm[i])
	return db
}

// pmd returns an arm's PMD coefficient: as stated, else its class's.
func (s *Scenario) pmd(i int) float64 {
	if a := &s.Arms[i]; Stated(a.PMDPsPerSqrtKm) {
		return a.PMDPsPerSqrtKm
	}
	class, _ := link.ClassByName(s.Arms[i].Fibre)
	return class.PMDPsPerSqrtKm
}
