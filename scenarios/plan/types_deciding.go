package plan

// What a plan says beyond yes and no: the best setting, the limits, what
// would still serve, blocks of key, doubt, money, and the first day's figures.

// Best is the operating point that would make most usable key at the
// installed length, at worst, with every setting free that the scenario
// allows: the pair rate where a ceiling is stated, the window (even where the
// file fixes it), and with finite blocks the share of the key basis.
type Best struct {
	Free          []string `json:"free"` // entries that were searched
	PairRateHz    float64  `json:"pair_rate_hz"`
	PairsPerSlot  float64  `json:"pairs_per_slot"`
	WindowPs      float64  `json:"window_ps"`
	KeyBasisShare float64  `json:"key_basis_share"`
	UsableRateBps float64  `json:"usable_rate_bps"`
	Factor        *float64 `json:"factor"`   // over the rate as described; null from zero
	Keeps95       *Span    `json:"keeps_95"` // pair rates that keep 95 % of it, window and share held; null where the pump is not free or there is no key
	Sentence      string   `json:"sentence"`
}

// Span is a range of one figure.
type Span struct {
	From float64 `json:"from"`
	To   float64 `json:"to"`
}

// Limits are the usable rates at worst of ideal versions of the link, each at
// its own best setting, at the distances of the curve.
type Limits struct {
	Points   []LimitPoint `json:"points"`
	HeldBack *PartFactor  `json:"held_back"` // what would raise the rate most at the installed length: "setting" over the link as described, "state" or "detectors" over its best setting; null where nothing would
	Sentence string       `json:"sentence"`
}

// LimitPoint is one distance of the limits.
type LimitPoint struct {
	DistanceKm          float64  `json:"distance_km"`
	AsDescribedBps      float64  `json:"as_described_bps"`
	AtBestBps           float64  `json:"at_best_setting_bps"`
	PerfectStateBps     float64  `json:"perfect_state_bps"`
	PerfectDetectorsBps float64  `json:"perfect_detectors_bps"`
	RepeaterlessBps     *float64 `json:"repeaterless_bps"` // bound of a direct line of both arms' loss, one mode a slot; null where nothing is lost
	SlotsHz             float64  `json:"slots_hz"`         // that it counts: those of the best setting
}

// Serve is the least or the most of one entry that still meets the need, all
// others as described.
type Serve struct {
	Entry  string   `json:"entry"`
	Unit   string   `json:"unit"`
	Bound  string   `json:"bound"`  // "least" or "most"
	Stated *float64 `json:"stated"` // as described; null where the entry has no figure
	Value  *float64 `json:"value"`  // null: no value does, or every value does
	Reason *string  `json:"reason"` // "no_value_does" or "every_value_does"
}

// Elasticity is d ln(usable rate)/d ln(entry) at worst, at the installed point.
type Elasticity struct {
	Entry string  `json:"entry"`
	Value float64 `json:"value"`
}

// TangleNeeded is the least tangle that meets the need at one distance; null
// where none does.
type TangleNeeded struct {
	DistanceKm float64  `json:"distance_km"`
	AtWorst    *float64 `json:"at_worst"`
	Nominal    *float64 `json:"nominal"`
	AtBest     *float64 `json:"at_best"`
}

// Needs is the need in all its forms.
type Needs struct {
	SecretRateBps  float64  `json:"secret_rate_bps"`
	AES256RenewalS float64  `json:"aes256_renewal_s"` // of one connection
	Connections    float64  `json:"encrypted_connections"`
	KeyBitsPerDay  float64  `json:"key_bits_per_day"`
	StatedAs       string   `json:"stated_as"` // the entry that stated it
	Budget         *float64 `json:"budget"`
}

// Block is the finite-size key at worst, at the installed point.
type Block struct {
	SiftedBits         float64  `json:"sifted_bits"`
	SecretBits         float64  `json:"secret_bits"` // whole, before authentication
	AuthenticationBits float64  `json:"authentication_bits"`
	EpsilonTotal       float64  `json:"epsilon_total"`
	FirstKeyS          *float64 `json:"first_key_s"`          // until the first block is full, the duty cycle counted; null without key
	SmallestSiftedBits *float64 `json:"smallest_sifted_bits"` // block with any key; null where none has
	AES256PerHour      float64  `json:"aes256_per_hour"`      // AES-256 keys
	AES256PerDay       float64  `json:"aes256_per_day"`
	BestSiftedBits     *float64 `json:"best_sifted_bits"`     // block that makes most key, at most a day's sifting with the duty cycle counted; null without key
	BestKeyBasisShare  *float64 `json:"best_key_basis_share"` // with that block
	BestUsableRateBps  *float64 `json:"best_usable_rate_bps"` // with both
	EnoughSiftedBits   *float64 `json:"enough_sifted_bits"`   // smallest block that makes 95 % of that at the same settings
	SameBasisSecretBps float64  `json:"key_basis_secret_bps"` // asymptotic rate of the key basis alone: what ever larger blocks tend to
	Sentence           string   `json:"sentence"`
}

// Uncertainty is what the standard deviations stated make of the answer: draws
// of all of them, each normal and truncated to its entry's range, at the
// settings that the plan chose. Without any there are no draws, bands or shares,
// the quantiles are the figures as stated, and what is open is the interval of
// the state alone.
type Uncertainty struct {
	Draws       int             `json:"draws"` // 0 without standard deviations
	Seed        int             `json:"seed"`
	ChanceMet   *float64        `json:"chance_met"`      // share of the draws at worst that meet the need; null without a need or draws
	UsableRate  Quantiles       `json:"usable_rate_bps"` // at worst
	QBERKey     Quantiles       `json:"qber_key"`        // nominal
	ReachKm     *QuantilesOrNot `json:"reach_km"`        // at worst; null where no quantile exists
	Shares      []Share         `json:"shares"`          // each input's share of the variance, the greatest first
	Bands       []Band          `json:"bands"`           // 61 distances from 0 to the curve's end
	MeasureNext []Measurement   `json:"measure_next"`    // what would remove most of the doubt, the best first
	Sentence    string          `json:"sentence"`
}

// Quantiles are the 5, 50 and 95 % points of the draws. Of n values in order
// the first stands at 0, the last at 100 %, the others evenly between; where a
// point falls between two of them it is interpolated.
type Quantiles struct {
	P05 float64 `json:"p05"`
	P50 float64 `json:"p50"`
	P95 float64 `json:"p95"`
}

// QuantilesOrNot are Quantiles some of which do not exist: a draw may meet the
// need at no distance, which counts as less than any reach, or beyond the curve
// still, which counts as more.
type QuantilesOrNot struct {
	P05 *float64 `json:"p05"`
	P50 *float64 `json:"p50"`
	P95 *float64 `json:"p95"`
}

// Share is one input's share of the variance of the usable rate.
type Share struct {
	Entry      string  `json:"entry"`
	FirstOrder float64 `json:"first_order"` // (elasticity x relative deviation)^2 over their sum
	ByDraws    float64 `json:"by_draws"`    // squared correlation with the draws
}

// Band is the statistical band of the usable rate at worst at one distance.
type Band struct {
	DistanceKm float64   `json:"distance_km"`
	UsableRate Quantiles `json:"usable_rate_bps"`
}

// Measurement is one that would remove doubt, and how much.
type Measurement struct {
	Name       string   `json:"name"`            // two_visibilities, tomography, loss_at_wavelength, detector_calibration, counts_at_source
	Entries    []string `json:"entries"`         // what it would settle
	SpreadNow  float64  `json:"spread_now_bps"`  // usable rate from at worst, 5 %, to at best, 95 %
	SpreadThen float64  `json:"spread_then_bps"` // the same, drawn again without that doubt
	Sentence   string   `json:"sentence"`
}

// Buying is what the cases cost, and which to choose.
type Buying struct {
	Costs         []Cost     `json:"costs"`                    // in the order of cases
	Cheapest      *string    `json:"cheapest"`                 // name of the cheapest case that meets the need
	CheapestSpare *string    `json:"cheapest_with_3_db_spare"` // and with 3 dB to spare
	Overtakes     []Overtake `json:"overtakes"`                // the nearest first
	Turns         []Turn     `json:"turns"`
	Sentence      string     `json:"sentence"`
}

// Cost is what one case's detectors cost: pieces times price, and once per end
// the site price where one is stated.
type Cost struct {
	Case         string      `json:"case"`
	Pieces       PerArmCount `json:"pieces"`
	Price        *float64    `json:"price"`         // null where the price of a detector is not stated
	WithinBudget *bool       `json:"within_budget"` // null without a budget or a price
	MeetsNeed    bool        `json:"meets_need"`    // at worst; without a need: makes key
	MarginDB     *float64    `json:"margin_db"`
}

// Overtake is the distance from which one case makes more usable key at worst
// than another. Each case is compared with the scenario as filed, and the best
// cases with the next in rank.
type Overtake struct {
	Case       string  `json:"case"`
	Overtakes  string  `json:"overtakes"`
	DistanceKm float64 `json:"distance_km"`
}

// Turn is the figure of a detector at which the order of two cases turns: of the
// scenario as filed and the compared case that makes most usable key at worst
// at the installed length. The figure is varied in both cases where both have
// the same, else in the better one.
type Turn struct {
	Entry  string  `json:"entry"`
	Case   string  `json:"case"`  // better now
	Other  string  `json:"other"` // better from there on
	Stated float64 `json:"stated"`
	Value  float64 `json:"value"`
}

// Against is the link over another entry in place of distance.
type Against struct {
	Entry string        `json:"entry"`
	Unit  string        `json:"unit"`
	Scale string        `json:"scale"`  // "log" or "linear": how its values are spaced
	InUse *float64      `json:"in_use"` // as described, or as the planner chose it; null where there is no figure
	Cases []AgainstCase `json:"cases"`
}

// AgainstCase is one case over that entry.
type AgainstCase struct {
	Name   string         `json:"name"`
	Points []AgainstPoint `json:"points"`
}

// AgainstPoint is the link at one value of the entry, at the installed length.
type AgainstPoint struct {
	Value float64 `json:"value"`
	Point Point   `json:"point"`
}

// Acceptance is what the first day should show, and what the running link
// does show where it was measured.
type Acceptance struct {
	Rows       []AcceptanceRow `json:"rows"`
	CHSH       *Expected       `json:"chsh"`
	Visibility *PerBasis       `json:"visibility"`
	FiveSigmaS *float64        `json:"five_sigma_s"` // counting time until CHSH at worst is five standard deviations above 2; null where it is not above
	LevelsOf   *string         `json:"levels_of"`    // state of need_lost_at and key_lost_at: "given", or the first of "at_worst", "nominal", "at_best" that meets the need (without a need or where none does: makes key) at these settings; null where none makes key
	Findings   []string        `json:"findings"`     // what the measured figures point to, in words
	Sentence   string          `json:"sentence"`
}

// AcceptanceRow is one figure to read on the first day.
type AcceptanceRow struct {
	Figure       string   `json:"figure"` // singles_alice_hz, qber_key, ...
	Label        string   `json:"label"`  // the figure in words
	Unit         string   `json:"unit"`   // "" for a ratio
	Expected     float64  `json:"expected"`
	From         float64  `json:"from"` // tolerance: counting for a minute, the deviations stated, the members
	To           float64  `json:"to"`
	NeedLostAt   *float64 `json:"need_lost_at"` // its level when what most naturally moves it has grown until the need is just met; null where that never happens, or has
	KeyLostAt    *float64 `json:"key_lost_at"`  // and until there is just key
	PointsTo     string   `json:"points_to"`    // what a deviation points to
	Measured     *float64 `json:"measured"`
	MeasuredSays *string  `json:"measured_says"` // as expected, or the dB or the error that is missing
}

// Expected is a figure with its interval over the members of the state.
type Expected struct {
	AtWorst float64 `json:"at_worst"`
	Nominal float64 `json:"nominal"`
	AtBest  float64 `json:"at_best"`
}

// PerBasis is a figure of each basis, nominal.
type PerBasis struct {
	Key   float64 `json:"key"`
	Check float64 `json:"check"`
}
