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
	arm("length_km", row{unit: "km", hi: 500, required: true, active: true, example: "0.05", bob: "6.2", hint: lengthHint,
		meaning: "length of the arm's fibre as installed",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].LengthKm }}),
	arm("fibre", row{form: choiceForm, words: link.ClassNames(), active: true, example: "G.652.D",
		def: "G.652.D", source: "the usual single-mode fibre",
		meaning: "class of the fibre: its attenuation, dispersion and PMD at the arm's wavelength",
		set:     func(s *Scenario, i int, name string) { s.Arms[i].Fibre = name }}),
	arm("measured_loss_db", row{unit: "dB", hi: maxLossDB, example: "2.31 +- 0.1", hint: lossHint,
		meaning: "loss of the whole run as measured, in place of fibre, connectors and splices",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].MeasuredLossDB }}),
	arm("loss_db_per_km", row{unit: "dB/km", hi: 100, example: "0.22", hint: lossHint,
		def: "by the fibre's class", source: link.SourceAttenuation, derive: defaultAttenuation,
		meaning: "attenuation of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].LossDBPerKm }}),
	arm("dispersion_ps_per_nm_km", row{unit: "ps/(nm km)", lo: -1000, hi: 1000, example: "17.5",
		def: "by the wavelength", source: link.SourceDispersion, derive: defaultDispersion,
		meaning: "chromatic dispersion of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].DispersionPsPerNmKm }}),
	arm("pmd_ps_per_sqrt_km", row{unit: "ps/sqrt(km)", hi: 100, example: "0.05",
		def: "by the fibre's class", source: link.SourcePMD, derive: defaultPMD,
		meaning: "polarisation-mode dispersion coefficient of the fibre",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].PMDPsPerSqrtKm }}),
	arm("connector_pairs", row{hi: 1000, whole: true, exact: true, active: true, example: "2", bob: "6",
		def: "0", source: noneStated, unless: "measured_loss_db",
		meaning: "mated pairs of connectors between source and receiver",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].ConnectorPairs }}),
	arm("connector_pair_loss_db", row{unit: "dB", hi: 20, example: "0.3", hint: lossHint,
		def: "0.3", source: commonPractice,
		meaning: "loss of one mated pair of connectors",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].ConnectorPairLossDB }}),
	arm("splices", row{hi: 10_000, whole: true, exact: true, example: "0", bob: "5",
		def: "0", source: noneStated, unless: "measured_loss_db",
		meaning: "splices between source and receiver",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].Splices }}),
	arm("splice_loss_db", row{unit: "dB", hi: 20, example: "0.1", hint: lossHint,
		def: "0.1", source: commonPractice,
		meaning: "loss of one splice",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].SpliceLossDB }}),
	arm("fixed_loss_db", row{unit: "dB", hi: maxLossDB, required: true, active: true, example: "4.2", hint: lossHint,
		words:   []string{"from_counts"},
		meaning: "coupling, filters and analyser together; neither the detector nor a passive splitter",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].FixedLossDB },
		set:     func(s *Scenario, i int, _ string) { s.Arms[i].FixedLossFromCounts = true }}),
	arm("misalignment_error", row{hi: 0.5, fraction: true, active: true, example: "0.005",
		def: "0.01", source: "common practice (0.5 to 2 %), no source", hint: "half of all bits wrong is the worst there is",
		meaning: "share of bits that the arm's residual misalignment turns wrong",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].MisalignmentError }}),
	arm("background_counts_hz", row{unit: "Hz", hi: 1e12, example: "0",
		def: "0", source: noneStated,
		meaning: "counts per second and detector with the source blocked, above the dark counts",
		at:      func(s *Scenario, i int) *float64 { return &s.Arms[i].BackgroundCountsHz }}),
	arm("detector", row{form: detectorForm, required: true, active: true, example: "free_running",
		meaning: "which of the detectors the arm uses",
		set:     func(s *Scenario, i int, name string) { s.Arms[i].Detector = name }}),
	arm("basis_choice", row{form: choiceForm, words: []string{"passive", "active"}, example: "passive",
		def: "passive", source: "the usual receiver: a beam splitter chooses",
		meaning: "passive: a beam splitter and four detectors; active: a switch and two",
		set:     func(s *Scenario, i int, choice string) { s.Arms[i].Passive = choice == "passive" }}),
}

func arm(name string, r row) row {
	r.name = "arms." + eitherArm + "." + name
	return r
}

var detectorRows = []row{
	detector("class", row{form: choiceForm, words: []string{"silicon", "ingaas", "superconducting"}, example: "ingaas",
		meaning: "kind of detector; it serves warnings only",
		set:     func(s *Scenario, i int, class string) { s.Detectors[i].Class = class }}),
	detector("efficiency", row{hi: 1, above: true, fraction: true, required: true, active: true, example: "0.2 +- 0.01",
		meaning: "chance that a photon at its input gives a count",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].Efficiency }}),
	detector("dark_counts_hz", row{unit: "Hz", hi: 1e9, required: true, active: true, example: "1200",
		meaning: "counts per second in the dark",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].DarkCountsHz }}),
	detector("jitter_fwhm_ps", row{unit: "ps", hi: 1e6, required: true, active: true, example: "180",
		meaning: "timing jitter, full width at half maximum",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].JitterFWHMPs }}),
	detector("dead_time_ns", row{unit: "ns", hi: 1e9, required: true, active: true, example: "10000",
		meaning: "time after a count in which it cannot count",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].DeadTimeNs }}),
	detector("afterpulsing", row{hi: 1, below: true, fraction: true, active: true, example: "0.02",
		def: "0", source: noneStated,
		meaning: "share of its counts that an afterpulse follows",
		at:      func(s *Scenario, i int) *float64 { return &s.Detectors[i].Afterpulsing }}),
}

func detector(name string, r row) row {
	r.name = "detectors." + anyDetector + "." + name
	return r
}

var linkRows = []row{
	{name: "window_ps", unit: "ps", hi: 1e9, above: true, exact: true, active: true, example: "auto",
		def: "auto", source: "the planner searches it", words: []string{"auto"},
		meaning: "full width of the coincidence window",
		at:      func(s *Scenario, _ int) *float64 { return &s.WindowPs },
		set:     func(s *Scenario, _ int, _ string) { s.WindowAuto = true }},
	{name: "clock_jitter_fwhm_ps", unit: "ps", hi: 1e6, active: true, example: "30",
		def: "0", source: noneStated,
		meaning: "jitter of the two clocks against each other, full width at half maximum",
		at:      func(s *Scenario, _ int) *float64 { return &s.ClockJitterFWHMPs }},
	{name: "key_basis_share", lo: 0.5, hi: 0.99, fraction: true, example: "0.5",
		def: "0.5", source: "an unbiased choice of basis (Bennett et al. 1992)",
		refused: map[string]string{"auto": "state key_basis_share as a number from 0.5 to 0.99"},
		meaning: "probability of the key basis at either arm",
		hint:    "the key basis is the more frequent of the two",
		at:      func(s *Scenario, _ int) *float64 { return &s.KeyBasisShare }},
	{name: "error_correction_f", lo: 1, hi: 10, example: "1.16",
		def: "1.16", source: commonPractice,
		meaning: "bits that error correction gives away, over Shannon's limit",
		hint:    "no code beats Shannon's limit, f = 1; a usual one is 1.16",
		at:      func(s *Scenario, _ int) *float64 { return &s.ErrorCorrectionF }},
	{name: "duty_cycle", hi: 1, above: true, fraction: true, example: "0.9",
		def: "1", source: noneStated,
		meaning: "share of the time in which the link makes key",
		at:      func(s *Scenario, _ int) *float64 { return &s.DutyCycle }},
}

var planRows = []row{
	{name: "finite_key.sifted_bits_per_block", lo: 1e3, hi: 1e13, required: true, exact: true, example: "1.0e+6",
		meaning: "sifted bits, of both bases, from which one block of key is made",
		at:      func(s *Scenario, _ int) *float64 { return &s.SiftedBitsPerBlock }},
	{name: "finite_key.epsilon_total", lo: 1e-30, hi: 0.1, required: true, exact: true, example: "1.0e-10",
		meaning: "failure probability that one block may have",
		at:      func(s *Scenario, _ int) *float64 { return &s.EpsilonTotal }},
	{name: "need.secret_rate_bps", unit: "bit/s", hi: 1e12, above: true, required: true, exact: true, active: true, example: "256",
		meaning: "secret bits per second that the link has to make",
		hint:    "leave need out where nothing is needed",
		at:      func(s *Scenario, _ int) *float64 { return &s.NeedBps }},
	{name: "distance.to_km", unit: "km", hi: 500, above: true, exact: true, example: "40", hint: lengthHint,
		def: "chosen by the planner", source: "1.25 times the greatest reach or installed distance, at most 500 km",
		asSaid:  true,
		meaning: "where the curve ends",
		at:      func(s *Scenario, _ int) *float64 { return &s.ToKm }},
	{name: "distance.points", lo: 2, hi: 2001, whole: true, exact: true, example: "241",
		def: "241", source: "enough for a smooth curve",
		meaning: "distances that the curve is computed at",
		at:      func(s *Scenario, _ int) *float64 { return &s.Points }},
	{name: "distance.lengthen", form: choiceForm, words: []string{"alice", "bob", "both"}, example: "bob",
		def: "bob", source: "the source stands at Alice's",
		meaning: "whose fibre grows with the distance; both: in proportion to length_km",
		set:     func(s *Scenario, _ int, whose string) { s.Lengthen = Lengthen(whose) }},
	{name: "compare", form: ownForm, words: []string{"a list of { name: NAME, change: { ENTRY: VALUE } } and { every_detector: true }"},
		active: true, example: "\n- { name: longer-run, change: { arms.bob.length_km: 9 } }",
		meaning: "further cases on the same chart: each changes some entries and keeps the rest"},
	{name: "origins", form: ownForm, words: []string{"a mapping of ENTRY: text"},
		active: true, example: "\narms.bob.length_km: as built",
		meaning: "where figures come from, in your own words, shown in the report"},
}
