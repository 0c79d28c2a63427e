package scenarios

// maxMoney bounds every price.
const maxMoney = 1e12

var linkRows = []row{
	{
		name: "window_ps", unit: "ps", hi: 1e9, above: true, exact: true, active: true, example: "auto",
		def: "auto", source: "the planner searches it", words: []string{"auto"},
		meaning: "full width of the coincidence window",
		at:      func(s *Scenario, _ int) *float64 { return &s.WindowPs },
		set:     func(s *Scenario, _ int, _ string) { s.WindowAuto = true },
	},
	{
		name: "clock_jitter_fwhm_ps", unit: "ps", hi: 1e6, active: true, example: "30",
		def: "0", source: noneStated,
		meaning: "jitter of the two clocks against each other, full width at half maximum",
		at:      func(s *Scenario, _ int) *float64 { return &s.ClockJitterFWHMPs },
	},
	{
		name: "key_basis_share", lo: 0.5, hi: 0.99, fraction: true, example: "0.5",
		def: "0.5", source: "an unbiased choice of basis (Bennett et al. 1992)",
		words:   []string{"auto"},
		meaning: "probability of the key basis at either arm",
		hint:    "the key basis is the more frequent of the two",
		at:      func(s *Scenario, _ int) *float64 { return &s.KeyBasisShare },
		set:     setKeyBasisShare,
	},
	{
		name: "error_correction_f", lo: 1, hi: 10, example: "1.16",
		def: "1.16", source: commonPractice,
		meaning: "bits that error correction gives away, over Shannon's limit",
		hint:    "no code beats Shannon's limit, f = 1; a usual one is 1.16",
		at:      func(s *Scenario, _ int) *float64 { return &s.ErrorCorrectionF },
	},
	{
		name: "duty_cycle", hi: 1, above: true, fraction: true, example: "0.9",
		def: "1", source: noneStated,
		meaning: "share of the time in which the link makes key",
		at:      func(s *Scenario, _ int) *float64 { return &s.DutyCycle },
	},
}

// setKeyBasisShare takes the default as a number and auto as a search.
func setKeyBasisShare(s *Scenario, _ int, text string) {
	if s.KeyShareAuto = text == "auto"; !s.KeyShareAuto {
		s.KeyBasisShare = evenShare
	}
}

// evenShare is an unbiased choice of basis.
const evenShare = 0.5

var planRows = []row{
	{
		name: "finite_key.sifted_bits_per_block", lo: 1e3, hi: 1e13, required: true, exact: true, example: "1.0e+6",
		meaning: "sifted bits, of both bases, from which one block of key is made",
		at:      func(s *Scenario, _ int) *float64 { return &s.SiftedBitsPerBlock },
	},
	{
		name: "finite_key.epsilon_total", lo: 1e-30, hi: 0.1, required: true, exact: true, example: "1.0e-10",
		meaning: "failure probability that one block may have",
		at:      func(s *Scenario, _ int) *float64 { return &s.EpsilonTotal },
	},
	{
		name: "finite_key.authentication_bits_per_block", hi: 1e9, exact: true, example: "512",
		def: "0", source: noneStated,
		meaning: "secret bits that authenticating one block's messages uses up, taken off the usable rate",
		at:      func(s *Scenario, _ int) *float64 { return &s.AuthenticationBitsPerBlock },
	},
	{
		name: "need.secret_rate_bps", unit: "bit/s", hi: 1e12, above: true, exact: true, active: true, example: "256",
		meaning: "secret bits per second that the link has to make",
		hint:    "leave need out where nothing is needed",
		at:      func(s *Scenario, _ int) *float64 { return &s.NeedBps },
	},
	{
		name: "need.aes256_renewal_s", unit: "s", hi: 1e9, above: true, exact: true, example: "60",
		meaning: "in place of secret_rate_bps: the time after which each encrypted connection takes a new AES-256 key",
		at:      func(s *Scenario, _ int) *float64 { return &s.AES256RenewalS },
	},
	{
		name: "need.encrypted_connections", lo: 1, hi: 1e6, whole: true, exact: true, example: "4",
		def: "1", source: "one connection", only: renewing,
		meaning: "with aes256_renewal_s: connections that each take their own keys",
		at:      func(s *Scenario, _ int) *float64 { return &s.EncryptedConnections },
	},
	{
		name: "need.key_bits_per_day", unit: "bit/day", hi: 1e17, above: true, exact: true, example: "2.0e+7",
		meaning: "in place of secret_rate_bps: secret bits per day that the link has to make",
		at:      func(s *Scenario, _ int) *float64 { return &s.KeyBitsPerDay },
	},
	{
		name: "need.budget", hi: maxMoney, above: true, exact: true, example: "60000",
		meaning: "what all detectors may cost, in the currency of their prices",
		at:      func(s *Scenario, _ int) *float64 { return &s.Budget },
	},
	{
		name: "distance.to_km", unit: "km", hi: 500, above: true, exact: true, example: "40", hint: lengthHint,
		def: "chosen by the planner", source: "1.25 times the greatest reach or installed distance, at most 500 km",
		asSaid:  true,
		meaning: "where the curve ends",
		at:      func(s *Scenario, _ int) *float64 { return &s.ToKm },
	},
	{
		name: "distance.points", lo: 2, hi: 2001, whole: true, exact: true, example: "241",
		def: "241", source: "enough for a smooth curve",
		meaning: "distances that the curve is computed at",
		at:      func(s *Scenario, _ int) *float64 { return &s.Points },
	},
	{
		name: "distance.lengthen", form: choiceForm, words: []string{"alice", "bob", "both"}, example: "bob",
		def: "bob", source: "the source stands at Alice's",
		meaning: "whose fibre grows with the distance; both: in proportion to length_km",
		set:     func(s *Scenario, _ int, whose string) { s.Lengthen = Lengthen(whose) },
	},
	{
		name: "uncertainty.draws", lo: 100, hi: 100_000, whole: true, exact: true, example: "2000",
		def: "2000", source: "enough for two digits of the 5 and 95 % bounds",
		meaning: "links drawn from the standard deviations stated",
		at:      func(s *Scenario, _ int) *float64 { return &s.Draws },
	},
	{
		name: "uncertainty.seed", hi: 1e9, whole: true, exact: true, example: "1",
		def: "1", source: "any will do; the same seed gives the same report",
		meaning: "seed of the draws",
		at:      func(s *Scenario, _ int) *float64 { return &s.Seed },
	},
	{
		name: "uncertainty.tomography", form: choiceForm, example: tomographyRepeated,
		def: tomographyAsFitted, source: "the state counts as exact", derive: tomographyDefault,
		words:   []string{tomographyAsFitted, tomographyRepeated},
		meaning: "whether the draws repeat the tomography of source.state.counts with its counting errors, or take the state as it was fitted",
		set:     func(s *Scenario, _ int, word string) { s.TomographyRepeated = word == tomographyRepeated },
	},
	{
		name: "measured.singles_hz." + eitherArm, unit: "Hz", hi: 1e12, exact: true, example: "110000", bob: "68000",
		meaning: "the running link: counts per second of all the arm's detectors together",
		at:      func(s *Scenario, i int) *float64 { return &s.Measured.SinglesHz[i] },
	},
	{
		name: "measured.coincidences_hz", unit: "Hz", hi: 1e12, exact: true, example: "3400",
		meaning: "the running link: coincidences per second within the window, matched bases or not",
		at:      func(s *Scenario, _ int) *float64 { return &s.Measured.CoincidencesHz },
	},
	{
		name: "measured.car", hi: 1e9, exact: true, example: "600",
		meaning: "the running link: true coincidences to accidental ones",
		at:      func(s *Scenario, _ int) *float64 { return &s.Measured.CAR },
	},
	{
		name: "measured.sifted_bps", unit: "bit/s", hi: 1e12, exact: true, example: "1700",
		meaning: "the running link: sifted bits per second of both bases",
		at:      func(s *Scenario, _ int) *float64 { return &s.Measured.SiftedBps },
	},
	{
		name: "measured.qber.key", hi: 0.5, fraction: true, exact: true, example: "0.036",
		meaning: "the running link: QBER of the key basis, the better of the two",
		at:      func(s *Scenario, _ int) *float64 { return &s.Measured.QBERKey },
	},
	{
		name: "measured.qber.check", hi: 0.5, fraction: true, exact: true, example: "0.041",
		meaning: "the running link: QBER of the check basis",
		at:      func(s *Scenario, _ int) *float64 { return &s.Measured.QBERCheck },
	},
	{
		name: "compare", form: ownForm, words: []string{"a list of { name: NAME, change: { ENTRY: VALUE } } and { every_detector: true }"},
		active: true, example: "\n- { name: longer-run, change: { arms.bob.length_km: 9 } }",
		meaning: "further cases on the same chart: each changes some entries and keeps the rest",
	},
	{
		name: "origins", form: ownForm, words: []string{"a mapping of ENTRY: text"},
		active: true, example: "\narms.bob.length_km: as built",
		meaning: "where figures come from, in your own words, shown in the report",
	},
}
