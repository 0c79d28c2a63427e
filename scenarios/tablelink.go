package scenarios

import "pairspan/link"

// maxLossDB bounds every loss: beyond it no photon arrives.
const maxLossDB = 300

const (
	lossHint     = "a loss is 0 dB or more"
	lengthHint   = "kilometres, not metres?"
	measuredHint = "measured_loss_db holds connectors and splices"
)

var armRows = []row{
	arm("length_km", row{
		unit: "km", hi: 500, required: true, active: true, example: "0.05", bob: "6.2", hint: lengthHint,
		meaning: "length of the arm's fibre as installed",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].LengthKm },
	}),
	arm("fibre", row{
		form: choiceForm, words: link.ClassNames(), active: true, example: "G.652.D",
		def: "G.652.D", source: "the usual single-mode fibre",
		meaning: "class of the fibre: its attenuation, dispersion and PMD at the arm's wavelength",
		set:     func(s *Scenario, i int, name string) { s.Arms[i].Fibre = name },
	}),
	arm("measured_loss_db", row{
		unit: "dB", hi: maxLossDB, example: "2.31 +- 0.1", hint: lossHint,
		meaning: "loss of the whole run as measured, in place of fibre, connectors and splices",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].MeasuredLossDB },
	}),
	arm("loss_db_per_km", row{
		unit: "dB/km", hi: 100, example: "0.22", hint: lossHint,
		def: "by the fibre's class", source: link.SourceAttenuation, derive: defaultAttenuation,
		meaning: "attenuation of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].LossDBPerKm },
	}),
	arm("dispersion_ps_per_nm_km", row{
		unit: "ps/(nm km)", lo: -1000, hi: 1000, example: "17.5",
		def: "by the wavelength", source: link.SourceDispersion, derive: defaultDispersion,
		meaning: "chromatic dispersion of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].DispersionPsPerNmKm },
	}),
	arm("pmd_ps_per_sqrt_km", row{
		unit: "ps/sqrt(km)", hi: 100, example: "0.05",
		def: "by the fibre's class", source: link.SourcePMD, derive: defaultPMD,
		meaning: "polarisation-mode dispersion coefficient of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].PMDPsPerSqrtKm },
	}),
	arm("connector_pairs", row{
		hi: 1000, whole: true, exact: true, active: true, example: "2", bob: "6",
		def: "0", source: noneStated, unless: "measured_loss_db",
		meaning: "mated pairs of connectors between source and receiver",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].ConnectorPairs },
	}),
	arm("connector_pair_loss_db", row{
		unit: "dB", hi: 20, example: "0.3", hint: lossHint,
		def: "0.3", source: commonPractice,
		meaning: "loss of one mated pair of connectors",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].ConnectorPairLossDB },
	}),
	arm("splices", row{
		hi: 10_000, whole: true, exact: true, example: "0", bob: "5",
		def: "0", source: noneStated, unless: "measured_loss_db",
		meaning: "splices between source and receiver",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].Splices },
	}),
	arm("splice_loss_db", row{
		unit: "dB", hi: 20, example: "0.1", hint: lossHint,
		def: "0.1", source: commonPractice,
		meaning: "loss of one splice",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].SpliceLossDB },
	}),
	arm("fixed_loss_db", row{
		unit: "dB", hi: maxLossDB, required: true, active: true, example: "4.2", hint: lossHint,
		words:   []string{"from_counts"},
		meaning: "coupling, filters and analyser together; neither the detector nor a passive splitter",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].FixedLossDB },
		set:     func(s *Scenario, i int, _ string) { s.Arms[i].FixedLossFromCounts = true },
	}),
	arm("misalignment_error", row{
		hi: 0.5, fraction: true, active: true, example: "0.005",
		def: "0.01", source: "common practice (0.5 to 2 %), no source", hint: "half of all bits wrong is the worst there is",
		meaning: "share of bits that the arm's residual misalignment turns wrong",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].MisalignmentError },
	}),
	arm("background_counts_hz", row{
		unit: "Hz", hi: 1e12, example: "0",
		def: "0", source: noneStated,
		meaning: "counts per second and detector with the source blocked, above the dark counts",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].BackgroundCountsHz },
	}),
	arm("detector", row{
		form: detectorForm, required: true, active: true, example: "free_running",
		meaning: "which of the detectors the arm uses",
		set:     func(s *Scenario, i int, name string) { s.Arms[i].Detector = name },
	}),
	arm("basis_choice", row{
		form: choiceForm, words: []string{"passive", "active"}, example: "passive",
		def: "passive", source: "the usual receiver: a beam splitter chooses",
		meaning: "passive: a beam splitter and four detectors; active: a switch and two",
		set:     func(s *Scenario, i int, choice string) { s.Arms[i].Passive = choice == "passive" },
	}),
}

func arm(name string, r row) row {
	r.name = "arms." + eitherArm + "." + name
	return r
}

var detectorRows = []row{
	detector("class", row{
		form: choiceForm, words: []string{"silicon", "ingaas", "superconducting"}, example: "ingaas",
		meaning: "kind of detector; it serves warnings only",
		set:     func(s *Scenario, i int, class string) { s.Detectors[i].Class = class },
	}),
	detector("efficiency", row{
		hi: 1, above: true, fraction: true, required: true, active: true, example: "0.2 +- 0.01",
		meaning: "chance that a photon at its input gives a count",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].Efficiency },
	}),
	detector("dark_counts_hz", row{
		unit: "Hz", hi: 1e9, required: true, active: true, example: "1200",
		meaning: "counts per second in the dark",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].DarkCountsHz },
	}),
	detector("jitter_fwhm_ps", row{
		unit: "ps", hi: 1e6, required: true, active: true, example: "180",
		meaning: "timing jitter, full width at half maximum",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].JitterFWHMPs },
	}),
	detector("dead_time_ns", row{
		unit: "ns", hi: 1e9, required: true, active: true, example: "10000",
		meaning: "time after a count in which it cannot count",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].DeadTimeNs },
	}),
	detector("afterpulsing", row{
		hi: 1, below: true, fraction: true, active: true, example: "0.02",
		def: "0", source: noneStated,
		meaning: "share of its counts that an afterpulse follows",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].Afterpulsing },
	}),
	detector("price", row{
		hi: maxMoney, exact: true, example: "4000",
		meaning: "price of one detector, in any currency",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].Price },
	}),
	detector("site_price", row{
		hi: maxMoney, exact: true, example: "30000",
		meaning: "what an end with detectors of this kind costs once, a cryostat for instance, in the same currency",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].SitePrice },
	}),
}

func detector(name string, r row) row {
	r.name = "detectors." + anyDetector + "." + name
	return r
}
