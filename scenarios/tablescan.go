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
		name: "source.power_scan.detector." + eitherArm, form: detectorForm, example: "free_running",
		meaning: "the detector that counted; needed for fixed_loss_db: from_counts",
		set:     func(s *Scenario, i int, name string) { s.Source.PowerScan.Detector[i] = name },
	},
}
