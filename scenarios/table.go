package scenarios

import (
	"slices"

	"pairspan/sources"
)

// Sources of defaults that several entries share.
const (
	noneStated     = "none stated"
	commonPractice = "common practice, no source"
)

// maxRateHz bounds every rate of light and of pairs.
const maxRateHz = 1e15

var titleRows = []row{
	{
		name: "title", form: textForm, required: true, active: true, example: "Campus link, workshop to archive",
		meaning: "what the report is headed with",
		set:     func(s *Scenario, _ int, text string) { s.Title = text },
	},
}

var sourceRows = slices.Concat(emissionRows, countedRows, scanRows, stateRows, spectralRows, lightRows, delayRows)

var emissionRows = []row{
	{
		name: "source.pair_rate_hz", unit: "Hz", hi: maxRateHz, above: true, active: true, example: "4.0e+6",
		meaning: "continuous source: pairs made per second inside it, both photons in their pass bands, before any loss",
		words:   []string{"auto"},
		set:     func(s *Scenario, _ int, _ string) { s.Source.PumpAuto = true },
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PairRateHz },
	},
	{
		name: "source.pulse_rate_hz", unit: "Hz", hi: 1e12, above: true, example: "100.0e+6",
		meaning: "pulsed source: pulses per second",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PulseRateHz },
	},
	{
		name: "source.pairs_per_pulse", hi: 100, above: true, only: pulsed, example: "0.02",
		meaning: "pulsed source: mean number of pairs per pulse inside it, before any loss",
		words:   []string{"auto"},
		set:     func(s *Scenario, _ int, _ string) { s.Source.PumpAuto = true },
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PairsPerPulse },
	},
	{
		name: "source.schmidt_number", lo: 1, hi: 1e6, only: pulsed, example: "1.2",
		def: "none", source: "Poisson statistics: very many modes",
		asSaid:  true,
		meaning: "pulsed source: Schmidt modes of the light per polarisation",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.SchmidtNumber },
	},
	{
		name: "source.max_pair_rate_hz", unit: "Hz", hi: maxRateHz, above: true, only: continuous, example: "2.0e+7",
		meaning: "continuous source: the most pairs per second that the pump can reach",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.MaxPairRateHz },
	},
	{
		name: "source.max_pairs_per_pulse", hi: 100, above: true, only: pulsed, example: "0.1",
		meaning: "pulsed source: the most pairs per pulse that the pump can reach",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.MaxPairsPerPulse },
	},
}

var countedRows = []row{
	{
		name: "source.counted.singles_hz." + eitherArm, unit: "Hz", hi: 1e12, above: true, required: true,
		example: "310000", bob: "290000",
		meaning: "counts per second of the arm's one detector at the source, without analysers",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.Counted.SinglesHz[i] },
	},
	{
		name: "source.counted.coincidences_hz", unit: "Hz", hi: 1e12, above: true, required: true, example: "31000",
		meaning: "coincidences per second of the two detectors, accidentals left in",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.Counted.CoincidencesHz },
	},
	{
		name: "source.counted.window_ps", unit: "ps", hi: 1e9, above: true, required: true, exact: true, example: "1000",
		meaning: "full width of the window in which they were counted",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.Counted.WindowPs },
	},
	{
		name: "source.counted.background_hz." + eitherArm, unit: "Hz", hi: 1e12, required: true, example: "1200",
		meaning: "counts per second of that detector with the source blocked, dark counts included",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.Counted.BackgroundHz[i] },
	},
	{
		name: "source.counted.detector." + eitherArm, form: detectorForm, required: true, example: "free_running",
		meaning: "the detector that counted",
		set:     func(s *Scenario, i int, name string) { s.Source.Counted.Detector[i] = name },
	},
}

var stateRows = []row{
	{
		name: "source.state.tangle", hi: 1, fraction: true, active: true, example: "0.88 +- 0.02",
		meaning: "the pair's tangle, the square of its concurrence",
		at:      figureOf(sources.TangleKind),
	},
	{
		name: "source.state.concurrence", hi: 1, fraction: true, example: "0.94",
		meaning: "the pair's concurrence",
		at:      figureOf(sources.ConcurrenceKind),
	},
	{
		name: "source.state.fidelity", lo: 0.5, hi: 1, above: true, fraction: true, example: "0.96",
		meaning: "the pair's fidelity to the intended Bell state",
		hint:    "a fidelity of 0.5 or less says nothing of entanglement",
		at:      figureOf(sources.FidelityKind),
	},
	{
		name: "source.state.visibility.hv", hi: 1, fraction: true, required: true, example: "0.98",
		meaning: "visibility in the basis of H and V",
		at:      visibility(func(s *sources.State) *float64 { return &s.VisibilityHV }),
	},
	{
		name: "source.state.visibility.da", hi: 1, fraction: true, required: true, example: "0.96",
		meaning: "visibility in the diagonal basis, D and A",
		at:      visibility(func(s *sources.State) *float64 { return &s.VisibilityDA }),
	},
	{
		name: "source.state.density_matrix", form: fileForm, example: "state.csv",
		meaning: "a CSV file of the pair's density matrix: row,col,re,im in the order HH HV VH VV",
		set:     func(*Scenario, int, string) {},
	}, // read with the other files, at the end
	{
		name: "source.state.counts", form: fileForm, example: "counts.csv",
		meaning: "a CSV file of a tomography's counts, whose likeliest state is used: alice,bob,counts with letters H V D A R L, or wave-plate angles",
		set:     func(*Scenario, int, string) {},
	},
	{
		name: "source.state.measured_car", hi: 1e9, above: true, example: "38",
		meaning: "coincidences to accidentals when the state was measured, if accidentals were left in: they are taken out",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.MeasuredCAR },
	},
}

func figureOf(kind sources.Kind) func(*Scenario, int) *float64 {
	return func(s *Scenario, _ int) *float64 {
		if s.Source.State.Kind != kind {
			return nil
		}
		return &s.Source.State.Figure
	}
}

func visibility(of func(*sources.State) *float64) func(*Scenario, int) *float64 {
	return func(s *Scenario, _ int) *float64 {
		if s.Source.State.Kind != sources.VisibilityKind {
			return nil
		}
		return of(&s.Source.State)
	}
}

var lightRows = []row{
	{
		name: "source.unpaired_photons_hz." + eitherArm, unit: "Hz", hi: maxRateHz, example: "0",
		def: "0", source: noneStated,
		meaning: "light of the source without a partner, its own Raman light, in photons per second before any loss; a pulsed source makes it in its pulses",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.UnpairedHz[i] },
	},
	{
		name: "source.wavelength_nm." + eitherArm, unit: "nm", lo: 400, hi: 2000, required: true, active: true, example: "1550",
		derive:  middleOfBand,
		meaning: "centre wavelength of the arm's photon, in vacuum",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.WavelengthNm[i] },
	},
	{
		name: "source.pump_pulse_fwhm_ps", unit: "ps", hi: 1e6, only: pulsed, example: "3",
		def: "0", source: noneStated,
		meaning: "pulsed source: length of the pump's pulses, full width at half maximum",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PumpPulseFWHMPs },
	},
	{
		name: "source.bandwidth_fwhm_nm", unit: "nm", hi: 200, above: true, required: true, active: true, example: "0.8",
		meaning: "bandwidth of Alice's photon, full width at half maximum, Bob's following by energy conservation; or both as a group",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.BandwidthFWHMNm[Alice] },
	},
	{
		name: "source.bandwidth_fwhm_nm." + eitherArm, unit: "nm", hi: 200, above: true, example: "0.8",
		def: "by energy conservation", source: "Alice's bandwidth x (Bob's wavelength / Alice's)^2",
		derive:  defaultBandwidth,
		meaning: "bandwidth of the arm's photon, full width at half maximum; Alice's is required",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.BandwidthFWHMNm[i] },
	},
}
