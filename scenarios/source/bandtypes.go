package source

import "pairspan/scenarios/plan"

// SpectralMap is what a spectral map says.
type SpectralMap struct {
	Known         Knowledge      `json:"known"`    // "matrix", or "bounded" where each bin's tangle alone is known
	AliceNm       []float64      `json:"alice_nm"` // middles of Alice's bins, rising
	BobNm         []float64      `json:"bob_nm"`
	AliceEdgesNm  []float64      `json:"alice_edges_nm"` // around and between the bins
	BobEdgesNm    []float64      `json:"bob_edges_nm"`
	ShareSum      float64        `json:"share_sum"` // of the shares as given; those below add up to 1
	Bins          []SpectralBin  `json:"bins"`      // those with pairs, by Alice's wavelength, then Bob's
	Whole         SpectralBand   `json:"whole"`
	Best          *SpectralBand  `json:"best"`           // the pair of pass bands with most key; null without a link or a key
	ByWidth       []SpectralBand `json:"by_width"`       // the best of each number of bins, both bands' together, from the whole map to single bins; empty without a link
	BandsCompared int            `json:"bands_compared"` // pairs of pass bands with any pairs; 0 without a link
	Sentence      string         `json:"sentence"`
	Told          []string       `json:"told"`   // sentences: what was done with the figures given, and what they leave open
	Doubts        []string       `json:"doubts"` // sentences: what looks amiss
}

// SpectralBin is the pairs in one bin of Alice's and one of Bob's.
type SpectralBin struct {
	AliceNm     float64    `json:"alice_nm"`
	BobNm       float64    `json:"bob_nm"`
	Share       float64    `json:"share"`        // of all pairs, 0 to 1
	Tangle      float64    `json:"tangle"`       // 0 to 1
	QBERLab     *QBERAxes  `json:"qber_lab"`     // in the laboratory's axes; null where the tangle alone is known
	QBERAligned *plan.QBER `json:"qber_aligned"` // with the analysers aligned to this bin; null likewise
}

// QBERAxes is the error of each pair of bases in the laboratory's axes, 0 to 1/2.
type QBERAxes struct {
	HV float64 `json:"hv"`
	DA float64 `json:"da"`
	RL float64 `json:"rl"`
}

// SpectralBand is a pair of pass bands and the state of the pairs that pass
// both. Figures that the tangles of several bins leave open are null.
type SpectralBand struct {
	Alice         PassBand    `json:"alice"`
	Bob           PassBand    `json:"bob"`
	Share         float64     `json:"share"`          // of all pairs: both photons pass
	UnpairedShare plan.PerArm `json:"unpaired_share"` // of all pairs: this arm's photon passes, the other does not
	Tangle        *float64    `json:"tangle"`         // 0 to 1
	TangleAtMost  *float64    `json:"tangle_at_most"` // where tangles alone are known: the square of the mean concurrence
	Concurrence   *float64    `json:"concurrence"`
	Fidelity      *float64    `json:"fidelity"`     // to the nearest maximally entangled state
	QBERLab       *QBERAxes   `json:"qber_lab"`     // of the state, in the laboratory's axes
	QBERAligned   plan.QBER   `json:"qber_aligned"` // of the state, analysers aligned; nominal where tangles alone are known
	OnLink        *BandOnLink `json:"on_link"`      // null without a link
}

// PassBand is the pass band of one arm.
type PassBand struct {
	FirstBin int      `json:"first_bin"` // from 0, in alice_nm or bob_nm
	Bins     int      `json:"bins"`
	FromNm   *float64 `json:"from_nm"` // null where the map has a single bin, whose width it does not tell
	ToNm     *float64 `json:"to_nm"`
	WidthNm  *float64 `json:"width_nm"`
	CentreNm float64  `json:"centre_nm"`
}

// BandOnLink is what a pair of pass bands gives on a link at its installed
// length, at the best setting of what the scenario leaves to the planner.
// Figures are nominal where tangles alone are known.
type BandOnLink struct {
	SourcePairRateHz     float64     `json:"source_pair_rate_hz"` // of the whole map, inside the source
	PairRateHz           float64     `json:"pair_rate_hz"`        // of those that pass both bands
	UnpairedPhotonsHz    plan.PerArm `json:"unpaired_photons_hz"` // of pairs that one band parts, besides what the scenario states
	WindowPs             float64     `json:"window_ps"`
	KeyBasisShare        float64     `json:"key_basis_share"`
	QBER                 plan.QBER   `json:"qber"`
	SecretRateBps        float64     `json:"secret_rate_bps"`
	FiniteSecretRateBps  *float64    `json:"finite_secret_rate_bps"` // null where no block is stated
	UsableRateBps        float64     `json:"usable_rate_bps"`
	UsableRateAtWorstBps *float64    `json:"usable_rate_at_worst_bps"` // of the least favourable state of a bin whose tangle alone is known; null for several bins, of which tangles give none
	UsableRateAtBestBps  *float64    `json:"usable_rate_at_best_bps"`  // where tangles alone are known
}
