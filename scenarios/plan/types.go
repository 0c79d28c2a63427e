package plan

// Plan is everything pairspan says about one scenario. Its JSON is an
// interface: fields may be added, never renamed or given another meaning
// within a plan_format. A pointer is null where the figure does not apply;
// no figure is ever NaN or infinite.
type Plan struct {
	PlanFormat   int         `json:"plan_format"` // 1
	Title        string      `json:"title"`
	Program      Program     `json:"program"`
	Inputs       []Input     `json:"inputs"`
	Entries      []Entry     `json:"entries"`  // the scenario as filed: all that it states or leaves to a default
	Withheld     []string    `json:"withheld"` // what was left out of this copy, in words; empty for a whole plan
	DefaultsUsed []Default   `json:"defaults_used"`
	Deviations   []Deviation `json:"deviations"`
	Origins      []Origin    `json:"origins"`
	Warnings     []Warning   `json:"warnings"`
	Cautions     []Caution   `json:"cautions"`
	References   []Reference `json:"references"`
	Cases        []Case      `json:"cases"`   // the scenario as filed, then the compared ones in file order
	Needs        *Needs      `json:"needs"`   // null without a need
	Buying       *Buying     `json:"buying"`  // null where no price is stated
	Against      *Against    `json:"against"` // null unless asked for
}

// Program names what made the plan.
type Program struct {
	Name    string `json:"name"`
	Version string `json:"version"`
}

// Input is one file the plan was made from.
type Input struct {
	Name   string `json:"name"`
	SHA256 string `json:"sha256"` // of the bytes read, hexadecimal
	Text   string `json:"text"`
}

// Entry is one entry of the scenario as filed, stated or at its default.
type Entry struct {
	Entry         string   `json:"entry"`
	Value         string   `json:"value"` // a number in the unit, or a word
	Unit          string   `json:"unit"`  // "" for a pure number or a word
	Meaning       string   `json:"meaning"`
	SD            *float64 `json:"sd"`             // standard deviation as stated
	Origin        *string  `json:"origin"`         // where it comes from, in the person's words
	DefaultSource *string  `json:"default_source"` // null where the file states the entry
	KnownBy       *string  `json:"known_by"`       // measured, document, stated, assumed or default; null where it is no input of the link
}

// Default is an entry that the file left out and the value used instead.
type Default struct {
	Entry  string `json:"entry"`
	Value  string `json:"value"` // in the unit that ends the entry's name
	Source string `json:"source"`
}

// Deviation is one standard deviation stated with an entry.
type Deviation struct {
	Entry string  `json:"entry"`
	Value float64 `json:"value"`
	SD    float64 `json:"sd"`
}

// Origin says where a figure comes from, in the person's words.
type Origin struct {
	Entry string `json:"entry"`
	Text  string `json:"text"`
}

// Warning is doubtful but possible input, with what the doubt is worth.
type Warning struct {
	Rule          string   `json:"rule"`
	Entry         string   `json:"entry"`
	Sentence      string   `json:"sentence"`
	UsableRateBps *float64 `json:"usable_rate_bps"` // with the suspected value in place; null where there is none to try
}

// Caution is a hazard, or a limit to the trust in a plan.
type Caution struct {
	About    string `json:"about"` // light, cold, trust
	Sentence string `json:"sentence"`
}

// Reference is a published source of the formulas used.
type Reference struct {
	ID   string `json:"id"`
	Text string `json:"text"`
}

// Case is one scenario planned: as filed, or with the changes of a compared case.
type Case struct {
	Name             string         `json:"name"`
	Changes          []Change       `json:"changes"` // empty for the scenario as filed
	Lengthen         string         `json:"lengthen"`
	ErrorCorrectionF float64        `json:"error_correction_f"`
	QBERThreshold    float64        `json:"qber_threshold"` // equal QBER of both bases above which f leaves no key
	DutyCycle        float64        `json:"duty_cycle"`
	LossBudget       LossBudget     `json:"loss_budget"`
	PassBands        *PassBands     `json:"pass_bands"` // of a spectral map; null without one
	Installed        Point          `json:"installed"`
	Curve            []Point        `json:"curve"`
	QBERParts        *QBERParts     `json:"qber_parts"` // key basis, nominal state, installed; null without a state
	Answer           Answer         `json:"answer"`
	Best             *Best          `json:"best"`          // null without a state
	Limits           *Limits        `json:"limits"`        // of the scenario as filed; null elsewhere and without a state
	Serves           []Serve        `json:"serves"`        // of the scenario as filed
	Elasticities     []Elasticity   `json:"elasticities"`  // of the scenario as filed, the greatest first
	TangleNeeded     []TangleNeeded `json:"tangle_needed"` // of the scenario as filed
	Block            *Block         `json:"block"`         // null without finite_key or a state
	Uncertainty      *Uncertainty   `json:"uncertainty"`   // of the scenario as filed; null where nothing is uncertain
	Acceptance       *Acceptance    `json:"acceptance"`    // of the scenario as filed; null without a state
}

// Change is one entry that a compared case sets.
type Change struct {
	Entry string `json:"entry"`
	Value string `json:"value"`
}

// LossBudget lists each arm's optical loss: the fixed part, then the run.
type LossBudget struct {
	Alice []LossItem `json:"alice"`
	Bob   []LossItem `json:"bob"`
}

// PassBands are what a spectral map tells of the bands in front of the source.
// pair_rate_hz counts the pairs of the whole map.
type PassBands struct {
	Alice         PassBand `json:"alice"`
	Bob           PassBand `json:"bob"`
	Share         float64  `json:"share"`          // of the pairs: both photons pass
	UnpairedShare PerArm   `json:"unpaired_share"` // of the pairs: this arm's photon passes alone
	PairRateHz    float64  `json:"pair_rate_hz"`   // of those that pass both, at the installed length
}

// PassBand is one arm's; a map of a single bin tells no width, and both ends
// are its middle.
type PassBand struct {
	FromNm float64 `json:"from_nm"`
	ToNm   float64 `json:"to_nm"`
}

// LossItem is one part of an arm.
type LossItem struct {
	Item   string  `json:"item"`
	LossDB float64 `json:"loss_db"`
}

// QBERParts adds up to the key basis's QBER.
type QBERParts struct {
	State         float64 `json:"state"`
	Alignment     float64 `json:"alignment"`
	MultiPair     float64 `json:"multi_pair"`
	DetectorNoise float64 `json:"detector_noise"`
	OutsideLight  float64 `json:"outside_light"`
}

// PerArm is a figure of each arm.
type PerArm struct {
	Alice float64 `json:"alice"`
	Bob   float64 `json:"bob"`
}

// PerArmCount is a whole number of each arm.
type PerArmCount struct {
	Alice int `json:"alice"`
	Bob   int `json:"bob"`
}

// QBER is the error rate of each basis, 0 to 1/2; 1/2 where nothing is sifted.
type QBER struct {
	Key   float64 `json:"key"`
	Check float64 `json:"check"`
}

// Point is the link at one distance. Its top-level figures are of the
// nominal state; Bounds is null where the state is known or unknown.
type Point struct {
	DistanceKm          float64     `json:"distance_km"`
	LengthKm            PerArm      `json:"length_km"`
	LossDB              PerArm      `json:"loss_db"`
	PairRateHz          float64     `json:"pair_rate_hz"` // the ceiling where it is to be searched but no state is known
	PairsPerSlot        *float64    `json:"pairs_per_slot"`
	SlotsHz             *float64    `json:"slots_hz"`
	WindowPs            *float64    `json:"window_ps"`
	WindowShare         *float64    `json:"window_share"`
	KeyBasisShare       float64     `json:"key_basis_share"`
	CountsPerDetectorHz PerArm      `json:"counts_per_detector_hz"`
	LiveShare           PerArm      `json:"live_share"`
	DetectorsNeeded     PerArmCount `json:"detectors_needed"`
	SinglesHz           PerArm      `json:"singles_hz"`
	CoincidencesHz      *float64    `json:"coincidences_hz"`
	AccidentalsHz       *float64    `json:"accidentals_hz"`
	CAR                 *float64    `json:"car"` // true to accidental; null without accidentals
	SiftedBps           *float64    `json:"sifted_bps"`
	QBER                *QBER       `json:"qber"`
	SecretRateBps       *float64    `json:"secret_rate_bps"`
	FiniteSecretRateBps *float64    `json:"finite_secret_rate_bps"`    // null where no block is stated
	KeyBasisSecretBps   *float64    `json:"key_basis_secret_rate_bps"` // asymptotic, of the key basis alone
	UsableRateBps       *float64    `json:"usable_rate_bps"`
	Bounds              *Bounds     `json:"bounds"`
}

// Bounds is the interval that a tangle, a concurrence or a fidelity leaves open.
type Bounds struct {
	AtWorst Bound `json:"at_worst"`
	AtBest  Bound `json:"at_best"`
}

// Bound is one end of the interval, at its own settings.
type Bound struct {
	WindowPs      float64 `json:"window_ps"`
	PairRateHz    float64 `json:"pair_rate_hz"`
	KeyBasisShare float64 `json:"key_basis_share"`
	QBER          QBER    `json:"qber"`
	SecretRateBps float64 `json:"secret_rate_bps"`
	UsableRateBps float64 `json:"usable_rate_bps"`
}

// Outcome is the answer in one word; the constants stand in the order in which they apply.
type Outcome string

// The outcomes.
const (
	StateUnknown Outcome = "state_unknown"
	NoKey        Outcome = "no_key"
	NoNeed       Outcome = "no_need"
	Met          Outcome = "met"
	MetIfNominal Outcome = "met_if_nominal"
	MetIfBest    Outcome = "met_if_best"
	NotMet       Outcome = "not_met"
)

// Answer says whether the need is met, by how much and what stands in the way.
type Answer struct {
	Outcome           Outcome       `json:"outcome"`
	Judged            string        `json:"judged"` // "asymptotic" or "finite"
	State             *string       `json:"state"`  // "given" or "at_worst"; null where unknown
	UsableRateBps     *float64      `json:"usable_rate_bps"`
	NeedBps           *float64      `json:"need_bps"`
	TimesNeed         *float64      `json:"times_need"`
	MarginDB          *float64      `json:"margin_db"`
	MarginReason      *string       `json:"margin_reason"` // "no_loss_helps" or "beyond_search"
	MarginAs          *MarginAs     `json:"margin_as"`
	ReachKm           *float64      `json:"reach_km"`
	ReachReason       *string       `json:"reach_reason"` // "not_at_zero_km" or "beyond_search"
	LeastTangle       *float64      `json:"least_tangle"`
	LeastTangleAtBest *float64      `json:"least_tangle_at_best"`
	Nominal           *MemberAnswer `json:"nominal"`
	AtBest            *MemberAnswer `json:"at_best"`
	FirstInTheWay     *PartFactor   `json:"first_in_the_way"`
	Parts             []PartFactor  `json:"parts"`      // every part, the one that would change most first
	Sentence          string        `json:"sentence"`   // the answer in words
	RestsOn           string        `json:"rests_on"`   // what the answer is based on, in words
	InTheWay          string        `json:"in_the_way"` // first_in_the_way in words; "" where nothing is
}

// MarginAs is the margin in field units of the arm that lengthens; a unit
// without loss is null.
type MarginAs struct {
	Km             *float64 `json:"km"`
	ConnectorPairs *float64 `json:"connector_pairs"`
	Splices        *float64 `json:"splices"`
}

// MemberAnswer is the same question asked of another member of the interval.
type MemberAnswer struct {
	UsableRateBps float64  `json:"usable_rate_bps"`
	MarginDB      *float64 `json:"margin_db"`
	MarginReason  *string  `json:"margin_reason"`
	ReachKm       *float64 `json:"reach_km"`
	ReachReason   *string  `json:"reach_reason"`
}

// PartFactor is a part of the link whose ideal version would raise the
// usable rate by Factor; null from a zero rate.
type PartFactor struct {
	Part   string   `json:"part"`
	Factor *float64 `json:"factor"`
}
