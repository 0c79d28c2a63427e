package source

import "pairspan/scenarios/plan"

// ScanResult is what a power scan says.
type ScanResult struct {
	Order              int             `json:"order"`                  // pairs grow as the power to this
	WindowShare        float64         `json:"window_share"`           // share of the pairs in the window that was taken
	PairsHzPerMWk      Figure          `json:"pairs_hz_per_mw_k"`      // inside the source, before any loss, at 1 mW; times power^order
	Efficiency         PerArm          `json:"efficiency"`             // chance that a photon of a pair is counted: coupling, filters, detector
	DetectorEfficiency *plan.PerArm    `json:"detector_efficiency"`    // of the detectors that counted; null where not known
	CollectionLossDB   PerArm          `json:"collection_loss_db"`     // efficiency with the detector's taken out
	LinearNoise        PerArm          `json:"linear_noise_hz_per_mw"` // photons without a partner inside the source, before any loss
	ConstantHz         PerArm          `json:"constant_hz"`            // counts that do not depend on the power
	Slopes             *ScanSlopes     `json:"slopes"`                 // order 1 only
	Parameters         []ScanParameter `json:"parameters"`
	Correlation        [][]*float64    `json:"correlation"` // of the errors of parameters, -1 to 1, in their order
	Chi2               float64         `json:"chi2"`
	DegreesOfFreedom   int             `json:"degrees_of_freedom"`
	Chi2PerDof         *float64        `json:"chi2_per_dof"`
	PValue             *float64        `json:"p_value"`
	Points             []ScanPoint     `json:"points"`   // in file order
	Fitted             []ScanFitted    `json:"fitted"`   // from the least to the greatest power that was measured
	Told               []string        `json:"told"`     // sentences: what the scan tells, and what that rests on
	NotTold            []string        `json:"not_told"` // sentences: what it does not tell, and what would
	Doubts             []string        `json:"doubts"`   // sentences: what is amiss or was assumed
}

// ScanFitted is what the fit expects at one power.
type ScanFitted struct {
	PowerMW   float64     `json:"power_mw"`
	SinglesHz plan.PerArm `json:"singles_hz"`
	TrueHz    float64     `json:"true_hz"` // coincidences less accidentals
}

// ScanSlopes are the growth of the rates at order 1, and the bounds they set.
type ScanSlopes struct {
	SinglesHzPerMW      PerArm `json:"singles_hz_per_mw"`
	CoincidencesHzPerMW Figure `json:"coincidences_hz_per_mw"`
	PairsAtMostHzPerMW  Figure `json:"pairs_at_most_hz_per_mw"`
	EfficiencyAtLeast   PerArm `json:"efficiency_at_least"`
}

// ScanParameter is one parameter that the scan tells.
type ScanParameter struct {
	Name    string   `json:"name"`
	Unit    string   `json:"unit"`
	Value   *float64 `json:"value"`
	SD      *float64 `json:"sd"`
	AtBound bool     `json:"at_bound"` // held back by an end of its range
}

// ScanPoint is one point of a scan beside the fit.
type ScanPoint struct {
	PowerMW           float64     `json:"power_mw"`
	SinglesHz         plan.PerArm `json:"singles_hz"`
	SinglesFitHz      plan.PerArm `json:"singles_fit_hz"`
	SinglesSDHz       MaybePerArm `json:"singles_sd_hz"`    // of the counting, about the fit
	SinglesResidual   MaybePerArm `json:"singles_residual"` // in standard deviations
	CoincidencesHz    float64     `json:"coincidences_hz"`  // accidentals included
	AccidentalsHz     float64     `json:"accidentals_hz"`   // those subtracted
	TrueHz            float64     `json:"true_hz"`          // coincidences less accidentals, may be negative
	TrueFitHz         float64     `json:"true_fit_hz"`
	TrueSDHz          *float64    `json:"true_sd_hz"`
	TrueResidual      *float64    `json:"true_residual"` // in standard deviations
	PairRateHz        Figure      `json:"pair_rate_hz"`  // inside the source
	UnpairedPhotonsHz PerArm      `json:"unpaired_photons_hz"`
}

// MaybePerArm is a figure of each arm that may not apply.
type MaybePerArm struct {
	Alice *float64 `json:"alice"`
	Bob   *float64 `json:"bob"`
}

// DelayResult is what a delay histogram says.
type DelayResult struct {
	Kind              string     `json:"kind"` // none, one_peak, pulsed
	BinWidthPs        float64    `json:"bin_width_ps"`
	DelayPs           Figure     `json:"delay_ps"` // middle of the peak that holds the pairs
	FWHMPs            Figure     `json:"fwhm_ps"`
	Coincidences      Figure     `json:"coincidences"` // counts in that peak above floor and side peaks
	FloorPerBin       Figure     `json:"floor_per_bin"`
	PeriodPs          Figure     `json:"period_ps"` // pulsed only
	SidePeak          Figure     `json:"side_peak"` // counts, pulsed only
	SidePeaks         int        `json:"side_peaks"`
	WindowPs          *float64   `json:"window_ps"` // full width, in which the next figures hold
	WindowShare       Figure     `json:"window_share"`
	InWindow          Figure     `json:"coincidences_in_window"`
	AccidentalsIn     Figure     `json:"accidentals_in_window"`
	CAR               Figure     `json:"car"`                // the ratio of both
	CoincidencesLimit *float64   `json:"coincidences_limit"` // without a peak: what would have been found
	Chi2              float64    `json:"chi2"`
	DegreesOfFreedom  int        `json:"degrees_of_freedom"`
	Chi2PerDof        *float64   `json:"chi2_per_dof"`
	PValue            *float64   `json:"p_value"`
	Bins              []DelayBin `json:"bins"` // in order of delay
	Told              []string   `json:"told"`
	Doubts            []string   `json:"doubts"`
}

// DelayBin is one bin of the histogram beside the fit.
type DelayBin struct {
	DelayPs float64 `json:"delay_ps"` // middle
	Counts  float64 `json:"counts"`
	Fitted  float64 `json:"fitted"`
}

// NotTold is the outcome on a link of a file that leaves open what the link
// would need of it.
const NotTold plan.Outcome = "not_told"

// Link is what the source can carry on a scenario's link: the answer of its
// plan, with what was measured in place of what the scenario says.
type Link struct {
	Title         string        `json:"title"`    // the scenario's
	Replaced      []plan.Change `json:"replaced"` // entries in whose place the measurement stands, and what it says
	Outcome       plan.Outcome  `json:"outcome"`
	State         *string       `json:"state"` // "given" or "at_worst"; null where unknown
	UsableRateBps *float64      `json:"usable_rate_bps"`
	NeedBps       *float64      `json:"need_bps"`
	MarginDB      *float64      `json:"margin_db"`
	MarginReason  *string       `json:"margin_reason"`
	ReachKm       *float64      `json:"reach_km"`
	ReachReason   *string       `json:"reach_reason"`
	PairRateHz    *float64      `json:"pair_rate_hz"` // at the installed point
	WindowPs      *float64      `json:"window_ps"`
	QBER          *plan.QBER    `json:"qber"`
	Sentence      string        `json:"sentence"` // the answer in words
	RestsOn       string        `json:"rests_on"`
	InTheWay      string        `json:"in_the_way"`
	Pump          *Pump         `json:"pump"` // of a power scan; null elsewhere
}

// Pump is the pump power at which the key on the link is greatest within the
// measured powers, at the installed length, the window searched where it is
// left to the planner.
type Pump struct {
	PowerMW           float64     `json:"power_mw"`
	FromMW            float64     `json:"from_mw"` // least and greatest power that were measured
	ToMW              float64     `json:"to_mw"`
	AtEnd             string      `json:"at_end"` // "lower" or "upper" where it lies at an end of these; "" inside
	PairRateHz        float64     `json:"pair_rate_hz"`
	UnpairedPhotonsHz plan.PerArm `json:"unpaired_photons_hz"`
	WindowPs          float64     `json:"window_ps"`
	UsableRateBps     float64     `json:"usable_rate_bps"`
	Points            []PumpPoint `json:"points"` // along the powers, rising
	Sentence          string      `json:"sentence"`
}

// PumpPoint is the key at one pump power.
type PumpPoint struct {
	PowerMW       float64 `json:"power_mw"`
	PairRateHz    float64 `json:"pair_rate_hz"`
	WindowPs      float64 `json:"window_ps"`
	UsableRateBps float64 `json:"usable_rate_bps"`
}
