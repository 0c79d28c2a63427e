package scenarios

var scanRows = []row{
	{
		name: "source.power_scan.file", form: fileForm, required: true, example: "power-scan.csv",
		meaning: "a CSV file of counts at the source over the pump's power, without analysers: power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz",
		set:     func(*Scenario, int, string) {}, // read with the other files, at the end
	},
	{
		name: "source.power_scan.power_mw", unit: "mW", hi: 1e6, above: true, required: true, example: "3.2",
		meaning: "the pump power at which the source runs",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PowerScan.PowerMW },
	},
	{
		name: "source.power_scan.order", lo: 1, hi: 2, whole: true, exact: true, required: true, example: "2",
		meaning: "the power of the pump with which pairs grow: 1 for down-conversion, 2 for four-wave mixing",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PowerScan.Order },
	},
	{
		name: "source.power_scan.linear_noise_hz_per_mw." + eitherArm, unit: "Hz/mW", hi: maxRateHz, exact: true, example: "0",
		meaning: "light without a partner that grows with the power, photons per second and mW inside the source; needed at order 1, where the scan cannot tell it from pairs",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.PowerScan.LinearNoiseHzPerMW[i] },
	},
	{
		name: "source.power_scan.window_share", hi: 1, above: true, fraction: true, exact: true, example: "0.98",
		def: "1", source: noneStated,
		meaning: "share of the pairs that lay in the window in which the scan was counted",
		at:      func(s *Scenario, _ int) *float64 { return &s.Source.PowerScan.WindowShare },
	},
	{
		name: "source.power_scan.detector." + eitherArm, form: detectorForm, example: "free_running",
		meaning: "the detector that counted; needed for fixed_loss_db: from_counts",
		set:     func(s *Scenario, i int, name string) { s.Source.PowerScan.Detector[i] = name },
	},
}

var delayRows = []row{
	{
		name: "source.delays.file", form: fileForm, required: true, example: "delays.csv",
		meaning: "a CSV file of a histogram of delays between both photons' detections, recorded at the source without the link's fibre: delay_ps,counts. Its peak tells how far the arrivals spread",
		set:     func(*Scenario, int, string) {},
	},
	{
		name: "source.delays.detector." + eitherArm, form: detectorForm, required: true, example: "free_running",
		meaning: "the detector that recorded the delays: its jitter is in them, and that of the link's own detectors takes its place",
		set:     func(s *Scenario, i int, name string) { s.Source.Delays.Detector[i] = name },
	},
}

var spectralRows = []row{
	{
		name: "source.spectral_map.file", form: fileForm, required: true, example: "spectral-map.csv",
		meaning: "a CSV file of the pairs by the spectral bins of both photons: alice_nm,bob_nm,share,row,col,re,im, or with a tangle. It takes the place of state, wavelength and bandwidth; the pair rate is that of the whole map",
		set:     func(*Scenario, int, string) {},
	},
	{
		name: "source.spectral_map.from_nm." + eitherArm, unit: "nm", lo: 400, hi: 2000, exact: true, example: "1549.2", bob: "1555.2",
		def: "all", source: mapEnds, derive: wholeMap,
		meaning: "where the arm's pass band begins; it takes the bins whose middles lie in it",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.SpectralMap.FromNm[i] },
	},
	{
		name: "source.spectral_map.to_nm." + eitherArm, unit: "nm", lo: 400, hi: 2000, exact: true, example: "1550.8", bob: "1556.8",
		def: "all", source: mapEnds, derive: wholeMap,
		meaning: "where the arm's pass band ends",
		at:      func(s *Scenario, i int) *float64 { return &s.Source.SpectralMap.ToNm[i] },
	},
}
