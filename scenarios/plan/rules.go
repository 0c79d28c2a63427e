package plan

import (
	"fmt"
	"math"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/scenarios"
)

var nan = math.NaN()

// rules are all the warnings there are, what reading had to mend first. The
// limits in them are common practice, no source.
var rules = append(repairs(), []rule{
	{"tomography-not-repeated", tomographyNotRepeated},
	{"efficiency-twice", efficiencyTwice},
	{"coincidences-as-pairs", coincidencesAsPairs},
	{"too-many-pairs", tooManyPairs},
	{"crowded-window", crowdedWindow},
	{"window-and-pulses", windowAndPulses},
	{"window-and-spread", windowAndSpread},
	{"dark-counts", darkCounts},
	{"detector-timing", detectorTiming},
	{"per-cent-or-fraction", perCentOrFraction},
	{"state-with-accidentals", stateWithAccidentals},
	{"light-and-glass", lightAndGlass},
	{"splitter-as-loss", splitterAsLoss},
}...)

var armEntry = [2]string{"arms.alice.", "arms.bob."}

// repairs hand on what reading found and mended, each under its rule.
func repairs() (rules []rule) {
	for _, name := range scenarios.RepairRules {
		rules = append(rules, rule{name, func(w *watch) (found []doubt) {
			for _, r := range w.s.Repairs {
				if r.Rule == name {
					found = append(found, doubt{r.Entry, r.Sentence, nil})
				}
			}
			return found
		}})
	}
	return rules
}

// efficiencyTwice: a collection loss measured with a detector holds that
// detector's efficiency already.
func efficiencyTwice(w *watch) (found []doubt) {
	const (
		goodEnough          = 0.9 // above, counting it twice hardly matters
		near                = 1.0 // dB
		suspicious          = 8.0 // dB
		leastLeft, mostLeft = 1.0, 6.0
	)
	for i := range w.s.Arms {
		a := &w.s.Arms[i]
		eff := w.s.Detector(a.Detector).Efficiency
		fixed, detector := a.FixedLossDB, float64(link.LossOf(eff))
		if !scenarios.Stated(fixed) || eff >= goodEnough {
			continue
		}
		left := fixed - detector
		if c := &w.s.Source.Counted; c.Used {
			heralded := float64(link.LossOf(c.CoincidencesHz / c.SinglesHz[1-i]))
			if abs(fixed-heralded) > near {
				continue
			}
			left = max(0, left)
		} else if fixed < suspicious || left < leastLeft || left > mostLeft {
			continue
		}
		found = append(found, doubt{
			armEntry[i] + "fixed_loss_db",
			fmt.Sprintf("%s dB may hold the efficiency of the detector (%s dB), which is counted once more; without it %s dB remain.",
				plain(fixed), two(detector), two(left)),
			func(s *scenarios.Scenario) { s.Arms[i].FixedLossDB = left },
		})
	}
	return found
}

// withoutFibre is the efficiency of both arms together at the source's own table.
func (w *watch) withoutFibre() float64 {
	eta := 1.0
	for i := range w.s.Arms {
		eta *= w.s.FixedLoss(i).Transmittance() * w.s.Detector(w.s.Arms[i].Detector).Efficiency
	}
	return eta
}

// coincidencesAsPairs: what a laboratory counts is far below what the source makes.
func coincidencesAsPairs(w *watch) []doubt {
	const (
		fewPairs            = 2e5 // per second
		fewPerPulse         = 1e-4
		leastMade, mostMade = 1e5, 1e9
		mostPerPulse        = 1.0
	)
	src := &w.s.Source
	if src.EmissionMeasured() || src.PumpAuto {
		return nil
	}
	const sentence = "%s is little for a source; if these are coincidences counted behind both arms, the source makes %s."
	if w.s.Pulsed() {
		made := src.PairsPerPulse / w.withoutFibre()
		if src.PairsPerPulse >= fewPerPulse {
			return nil
		}
		d := doubt{"source.pairs_per_pulse", fmt.Sprintf(sentence, plain(src.PairsPerPulse), bare(made)), nil}
		if made <= mostPerPulse {
			d.suspect = func(s *scenarios.Scenario) { s.Source.PairsPerPulse = made }
		}
		return []doubt{d}
	}
	made := src.PairRateHz / w.withoutFibre()
	if src.PairRateHz >= fewPairs || made < leastMade || made > mostMade {
		return nil
	}
	return []doubt{{
		"source.pair_rate_hz", fmt.Sprintf(sentence, plain(src.PairRateHz)+" pairs/s", bare(made)),
		func(s *scenarios.Scenario) { s.Source.PairRateHz = made },
	}}
}

// emissionEntry names the entry that sets the pump.
func emissionEntry(s *scenarios.Scenario) string {
	switch {
	case s.Source.Counted.Used:
		return "source.counted"
	case s.Source.PowerScan.Used:
		return "source.power_scan"
	case s.Pulsed():
		return "source.pairs_per_pulse"
	}
	return "source.pair_rate_hz"
}

// pump multiplies the emission of a scenario that states it.
func pump(by float64) func(*scenarios.Scenario) {
	return func(s *scenarios.Scenario) {
		s.Source.PairRateHz *= by
		s.Source.PairsPerPulse *= by
	}
}

func tooManyPairs(w *watch) []doubt {
	const most = 0.2
	pairs := w.now.rate.PairsPerSlot
	if !(pairs > most) || w.s.Source.PumpAuto { // searched: it weighs that already
		return nil
	}
	d := doubt{
		emissionEntry(w.s),
		fmt.Sprintf("%s pairs per slot: several pairs at once make most of the errors above some %s.", bare(pairs), plain(most)), nil,
	}
	if !w.s.Source.EmissionMeasured() {
		d.suspect = pump(most / pairs)
	}
	return []doubt{d}
}

// crowdedWindow: the ways of pairing tags part company when windows often
// hold more than one click.
func crowdedWindow(w *watch) []doubt {
	const most = 0.003
	if w.s.Pulsed() {
		return nil
	}
	for i := range w.now.rate.Arms {
		clicks := 2 * w.now.rate.Arms[i].CountsHz * w.now.setting.WindowS
		if clicks > most {
			return []doubt{{
				emissionEntry(w.s),
				fmt.Sprintf("%s clicks per window, arm and basis: above %s the QBER depends on how time tags are paired (time slots here; all within the window gives more, the nearest alone less).",
					bare(clicks), plain(most)), nil,
			}}
		}
	}
	return nil
}

func windowAndPulses(w *watch) []doubt {
	if !w.s.Pulsed() || w.s.WindowAuto {
		return nil
	}
	period := psPerSecond / w.s.Source.PulseRateHz
	if w.s.WindowPs <= period/2 {
		return nil
	}
	return []doubt{{
		"window_ps", fmt.Sprintf("%s ps is more than half of the %s ps between pulses.", plain(w.s.WindowPs), bare(period)),
		func(s *scenarios.Scenario) { s.WindowPs = period / 2 },
	}}
}

func windowAndSpread(w *watch) []doubt {
	const least, most = 0.5, 6.0
	spread := w.s.Spread(w.s.DistanceKm())
	if w.s.WindowAuto || w.s.WindowPs >= least*spread && w.s.WindowPs <= most*spread {
		return nil
	}
	return []doubt{{
		"window_ps", fmt.Sprintf("%s ps for arrivals that spread over %s ps (FWHM): auto would choose the window.", plain(w.s.WindowPs), bare(spread)),
		func(s *scenarios.Scenario) { s.WindowAuto, s.WindowPs = true, nan },
	}}
}

func darkCounts(w *watch) (found []doubt) {
	const perGate, ofQBER = 0.01, 0.2
	noisy := w.parts.DetectorNoise > ofQBER*w.now.rate.QBER[keyrate.KeyBasis]
	seen := ""
	for i := range w.s.Arms {
		a := &w.s.Arms[i]
		det := w.s.Detector(a.Detector)
		if a.Detector == seen {
			continue
		}
		seen = a.Detector
		entry := "detectors." + det.Name + ".dark_counts_hz"
		switch pieces := float64(detectorsNeeded(w.s, i)); {
		case det.DarkCountsHz < perGate && det.DarkCountsHz > 0:
			found = append(found, doubt{
				entry, fmt.Sprintf("%s counts per second is very few: is it a chance per detection gate?", plain(det.DarkCountsHz)),
				w.perGate(det.Name),
			})
		case det.DarkCountsHz < perGate:
			found = append(found, doubt{entry, "no dark counts at all: is the figure missing?", nil})
		case noisy:
			found = append(found, doubt{
				entry, fmt.Sprintf("detector noise makes %s of the QBER: is %s per arm instead of per detector?",
					perCent(w.parts.DetectorNoise/w.now.rate.QBER[keyrate.KeyBasis]), plain(det.DarkCountsHz)),
				func(s *scenarios.Scenario) { s.Detector(det.Name).DarkCountsHz /= pieces },
			})
		}
	}
	return found
}

// perGate takes dark counts for a chance per window, or per pulse.
func (w *watch) perGate(detector string) func(*scenarios.Scenario) {
	gates := w.now.rate.SlotsHz
	if !scenarios.Stated(gates) {
		return nil
	}
	return func(s *scenarios.Scenario) { s.Detector(detector).DarkCountsHz *= gates }
}

func stateWithAccidentals(w *watch) []doubt {
	const few = 0.005
	pairs := w.now.rate.PairsPerSlot
	if scenarios.Stated(w.s.Source.MeasuredCAR) || !(pairs > few) {
		return nil
	}
	car := w.now.rate.WindowShare / pairs
	return []doubt{{
		"source.state", fmt.Sprintf("%s pairs per slot: if the state was measured at this pump with accidentals left in (a CAR of some %s), state measured_car, or they count twice.",
			bare(pairs), bare(car)),
		func(s *scenarios.Scenario) { s.Source.MeasuredCAR = car },
	}}
}

func splitterAsLoss(w *watch) (found []doubt) {
	const splitter, near = 3.0, 0.05
	for i := range w.s.Arms {
		a := &w.s.Arms[i]
		if !a.Passive || !(abs(a.FixedLossDB-splitter) <= near) {
			continue
		}
		found = append(found, doubt{
			armEntry[i] + "fixed_loss_db",
			"3 dB with a passive choice of basis: the beam splitter is sifting, not loss, and is counted already.",
			func(s *scenarios.Scenario) { s.Arms[i].FixedLossDB = max(0, s.Arms[i].FixedLossDB-splitter) },
		})
	}
	return found
}
