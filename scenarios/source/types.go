package source

import "pairspan/scenarios/plan"

// Format is the source_format that this program writes.
const Format = 1

// Form is what kind of file a source was described by.
type Form string

// The forms.
const (
	FormDensityMatrix Form = "density_matrix"
	FormTomography    Form = "tomography"
	FormPowerScan     Form = "power_scan"
	FormDelays        Form = "delays"
	FormSpectralMap   Form = "spectral_map"
	FormScenario      Form = "scenario"
)

// Result is everything that pairspan says of one source. Its JSON is an
// interface: fields may be added, never renamed or given another meaning within
// a source_format. A pointer is null where the figure does not apply or is not
// known; no figure is ever NaN or infinite.
type Result struct {
	SourceFormat int              `json:"source_format"` // 1
	Program      plan.Program     `json:"program"`
	Title        string           `json:"title"`  // the scenario's; of a laboratory file its name
	Form         Form             `json:"form"`   // what the file was
	Inputs       []plan.Input     `json:"inputs"` // the file, then the link's scenario and the files that they name
	Warnings     []Warning        `json:"warnings"`
	Cautions     []plan.Caution   `json:"cautions"` // about light, and trust where there is key
	References   []plan.Reference `json:"references"`
	Sentence     string           `json:"sentence"`    // what the source is
	InScenario   *string          `json:"in_scenario"` // what stands under a scenario's source for the file to be read there; null of a scenario, and of delays without a link
	State        *State           `json:"state"`       // null where the file says nothing of it
	Fit          *Fit             `json:"fit"`         // of a tomography
	PowerScan    *ScanResult      `json:"power_scan"`
	Delays       *DelayResult     `json:"delays"`
	SpectralMap  *SpectralMap     `json:"spectral_map"`
	Link         *Link            `json:"link"` // null without one
}

// Warning is something doubtful in the file, or something that was assumed.
type Warning struct {
	Rule     string `json:"rule"`  // what kind of doubt it is
	Entry    string `json:"entry"` // of the scenario; "" for a laboratory file
	Sentence string `json:"sentence"`
}

// Figure is a value and one standard deviation of it, both in the unit that the
// name of the field ends in.
type Figure struct {
	Value *float64 `json:"value"` // null where it is not known
	SD    *float64 `json:"sd"`    // null where nothing was counted
}

// PerArm is a figure of each arm.
type PerArm struct {
	Alice Figure `json:"alice"`
	Bob   Figure `json:"bob"`
}

// Complex is one entry of a density matrix.
type Complex struct {
	Re float64 `json:"re"`
	Im float64 `json:"im"`
}

// Knowledge says how far a state is known.
type Knowledge string

// The degrees of knowledge.
const (
	Whole        Knowledge = "matrix"       // the density matrix: everything follows
	Visibilities Knowledge = "visibilities" // the errors in two bases
	Bounded      Knowledge = "bounded"      // a tangle, concurrence or fidelity alone: an interval
)

// State is the state of one pair. Figures that the file does not tell are null.
type State struct {
	Known                   Knowledge      `json:"known"`
	DensityMatrix           *[4][4]Complex `json:"density_matrix"`            // rows and columns HH HV VH VV, Alice's photon first
	Tangle                  Figure         `json:"tangle"`                    // 0 to 1
	Concurrence             Figure         `json:"concurrence"`               // 0 to 1
	Fidelity                Figure         `json:"fidelity"`                  // to the nearest maximally entangled state, 1/4 to 1
	Purity                  Figure         `json:"purity"`                    // 1/4 to 1
	Entropy                 Figure         `json:"entropy"`                   // bits, 0 to 2
	LinearEntropy           Figure         `json:"linear_entropy"`            // 0 to 1
	EntanglementOfFormation Figure         `json:"entanglement_of_formation"` // 0 to 1
	CHSH                    Figure         `json:"chsh"`                      // 0 to 2 sqrt 2
	QBERLab                 QBERLab        `json:"qber_lab"`                  // in the laboratory's axes, 0 to 1/2
	QBERAligned             QBERAligned    `json:"qber_aligned"`              // after the best alignment, 0 to 1/2
	SecretFraction          SecretFraction `json:"secret_fraction"`           // secret bits of a sifted bit at f = 1 and no other error, 0 to 1
	BellState               *string        `json:"bell_state"`                // nearest in the laboratory's axes: Phi+, Phi-, Psi+ or Psi-
	BellFidelity            Figure         `json:"bell_fidelity"`             // with that state, 1/4 to 1
	Alignment               *Alignment     `json:"alignment"`                 // null unless the matrix is known
	FidelityRange           *Range         `json:"fidelity_range"`            // what the concurrence leaves open; null where it is not known
	Members                 *Members       `json:"members"`                   // the interval; null unless known is "bounded"
	Conversions             string         `json:"conversions"`               // one line: tangle 0.86 = concurrence 0.927; fidelity between 0.927 and 0.964
	Aligning                string         `json:"aligning"`                  // what aligning the analysers is worth; "" where that is not known
}

// QBERLab is the error of each pair of bases in the laboratory's axes.
type QBERLab struct {
	HV Figure `json:"hv"`
	DA Figure `json:"da"`
	RL Figure `json:"rl"`
}

// QBERAligned is the error of the two best bases.
type QBERAligned struct {
	Key   Figure `json:"key"`
	Check Figure `json:"check"`
}

// SecretFraction is the secret key that a sifted bit gives; the laboratory's
// axes use H/V and D/A.
type SecretFraction struct {
	Lab     Figure `json:"lab"`
	Aligned Figure `json:"aligned"`
}

// Alignment is the pair of rotations after which the analysers measure with the
// least errors that any pair of bases has.
type Alignment struct {
	Alice    Rotation `json:"alice"`
	Bob      Rotation `json:"bob"`
	KeyBasis string   `json:"key_basis"` // "HV" or "DA": the one with the smaller error afterwards
}

// Rotation is a rotation of the Poincare sphere.
type Rotation struct {
	Axis     [3]float64 `json:"axis"`      // of length 1, along D, L and H
	AngleDeg float64    `json:"angle_deg"` // 0 to 180, counter-clockwise for one who looks against the axis
}

// Range is where a figure must lie.
type Range struct {
	From float64 `json:"from"`
	To   float64 `json:"to"`
}

// Members are the states that a tangle, a concurrence or a fidelity leaves open.
type Members struct {
	AtWorst Member `json:"at_worst"`
	Nominal Member `json:"nominal"` // Werner's state
	AtBest  Member `json:"at_best"` // pure dephasing
}

// Member is one of them, analysers aligned.
type Member struct {
	QBERKey        float64 `json:"qber_key"`
	QBERCheck      float64 `json:"qber_check"`
	SecretFraction float64 `json:"secret_fraction"` // f = 1, no other error
}

// Fit is the likeliest state of a tomography.
type Fit struct {
	LogLikelihood    float64   `json:"log_likelihood"` // natural logarithm
	Chi2             float64   `json:"chi2"`
	DegreesOfFreedom int       `json:"degrees_of_freedom"`
	Chi2PerDof       *float64  `json:"chi2_per_dof"` // null with 16 settings
	PValue           *float64  `json:"p_value"`      // chance of a larger chi2, or an upper bound of it; null with 16 settings
	Optimality       float64   `json:"optimality"`   // most that any other state could add to log_likelihood
	Iterations       int       `json:"iterations"`
	PairsPerExposure float64   `json:"pairs_per_exposure"` // coincidences without analysers per second of exposure
	BootstrapDraws   int       `json:"bootstrap_draws"`    // 0: none
	BootstrapSeed    int       `json:"bootstrap_seed"`
	Settings         []Setting `json:"settings"` // in file order
	Sentence         string    `json:"sentence"` // how good the fit is, in words
}

// Setting is one setting of the two analysers, counted and as fitted.
type Setting struct {
	Alice       string   `json:"alice"` // as the file names the analyser
	Bob         string   `json:"bob"`
	Counts      float64  `json:"counts"` // accidentals included
	Accidentals float64  `json:"accidentals"`
	Exposure    float64  `json:"exposure"` // seconds x efficiency
	Expected    float64  `json:"expected"` // counts that the fit expects, accidentals included
	Residual    *float64 `json:"residual"` // counted less expected, in standard deviations; null where none are expected
}
