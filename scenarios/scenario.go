package scenarios

import (
	"math"
	"slices"

	"pairspan/link"
	"pairspan/sources"
)

// Alice and Bob index everything that a scenario holds once per arm.
const (
	Alice = iota
	Bob
)

// A Scenario is one link as its file describes it, in the file's own units.
// Every number is a plain float64; NaN means "not stated" (see Stated), and
// standard deviations stand beside in Deviations, so that no formula speaks
// of value and error. The table of entries (entries.go) says where each
// number lives, its range and its default.
type Scenario struct {
	Title     string
	Source    Source
	Arms      [2]Arm     // Alice, Bob
	Detectors []Detector // in file order

	WindowAuto                 bool    // the planner searches the coincidence window
	WindowPs                   float64 // full width, ps, > 0; NaN where WindowAuto
	ClockJitterFWHMPs          float64 // FWHM of the clocks against each other, ps
	KeyShareAuto               bool    // the planner searches the share
	KeyBasisShare              float64 // probability of the key basis, 0.5 to 0.99; NaN where KeyShareAuto
	ErrorCorrectionF           float64 // leak over the Shannon limit, >= 1
	DutyCycle                  float64 // share of the time that makes key, 0 to 1
	SiftedBitsPerBlock         float64 // finite-size block, bits; NaN: asymptotic
	EpsilonTotal               float64 // failure probability of a block; NaN: asymptotic
	AuthenticationBitsPerBlock float64 // secret bits a block's messages use up; NaN: asymptotic
	NeedBps                    float64 // secret bits per second needed; NaN: not stated so (see Need)
	AES256RenewalS             float64 // seconds after which a connection takes a new key; NaN: not stated so
	EncryptedConnections       float64 // with AES256RenewalS
	KeyBitsPerDay              float64 // secret bits per day needed; NaN: not stated so
	Budget                     float64 // for all detectors, any currency; NaN: none
	Draws, Seed                float64 // of the uncertainty
	TomographyRepeated         bool    // its counting errors are drawn
	Measured                   Measured
	ToKm                       float64 // end of the curve, km; NaN: the planner's choice
	Points                     float64 // distances on the curve
	Lengthen                   Lengthen

	Deviations   []Deviation // in file order
	Origins      []Origin    // in file order
	DefaultsUsed []Default   // in the order of the table of entries
	Repairs      []Repair    // what had to be mended in a measured state
	Compare      []Case      // in file order, each a complete scenario
	Inputs       []Input     // the files read, the scenario first

	document *Document // what the scenario was read from
}

// Source is the photon-pair source as described.
type Source struct {
	PumpAuto         bool    // the planner searches the pair rate up to its ceiling
	PairRateHz       float64 // continuous: pairs per second made inside; NaN: pulsed or counted
	PulseRateHz      float64 // pulsed: pulses per second; NaN: continuous
	PairsPerPulse    float64 // pulsed; NaN: continuous or counted
	SchmidtNumber    float64 // modes per polarisation, >= 1; NaN: Poisson
	Counted          Counted // where the emission was counted at the source
	PowerScan        PowerScan
	MaxPairRateHz    float64 // ceiling of a continuous source; NaN: not stated
	MaxPairsPerPulse float64 // ceiling of a pulsed source; NaN: not stated

	State           sources.State
	Counts          *sources.Counts // of the tomography that gave the state; nil without one
	MeasuredCAR     float64         // coincidences to accidentals left in the state; NaN: taken out
	UnpairedHz      [2]float64      // light without a partner, photons/s before any loss
	WavelengthNm    [2]float64
	PumpPulseFWHMPs float64
	BandwidthFWHMNm [2]float64 // Bob's is NaN where it follows by energy conservation
	SpectralMap     SpectralMap
	Delays          Delays
}

// Counted is what was counted at the source, without analysers and with one
// detector an arm.
type Counted struct {
	Used           bool
	SinglesHz      [2]float64
	CoincidencesHz float64
	WindowPs       float64
	BackgroundHz   [2]float64 // source blocked, dark counts included
	Detector       [2]string  // names in Scenario.Detectors
}

// Arm is the way of one photon from the source to its detectors.
type Arm struct {
	LengthKm            float64
	Fibre               string  // name of a link.Class
	LossDBPerKm         float64 // NaN: the class's
	DispersionPsPerNmKm float64 // NaN: the class's
	PMDPsPerSqrtKm      float64 // NaN: the class's
	ConnectorPairs      float64 // whole number
	ConnectorPairLossDB float64
	Splices             float64 // whole number
	SpliceLossDB        float64
	MeasuredLossDB      float64 // the run as measured; NaN: itemised
	FixedLossDB         float64 // NaN where FixedLossFromCounts
	FixedLossFromCounts bool
	MisalignmentError   float64
	BackgroundCountsHz  float64 // per detector
	Detector            string  // a name in Scenario.Detectors
	Passive             bool    // beam splitter: four detectors; else two
}

// Detector is one named kind of detector, every figure per detector.
type Detector struct {
	Name  string
	Class string // silicon, ingaas, superconducting, or "" where not stated
	link.Detector
	Price     float64 // of one piece, any currency; NaN: not stated
	SitePrice float64 // once per end with such detectors; NaN: not stated
}

// Measured is what the running link shows; NaN where it was not stated.
type Measured struct {
	SinglesHz           [2]float64 // of all the arm's detectors
	CoincidencesHz, CAR float64
	SiftedBps           float64
	QBERKey, QBERCheck  float64
}

// Lengthen says whose fibre grows along the distance axis.
type Lengthen string

// The three choices of Lengthen.
const (
	LengthenAlice Lengthen = "alice"
	LengthenBob   Lengthen = "bob"
	LengthenBoth  Lengthen = "both"
)

// Deviation is one standard deviation stated with a number.
type Deviation struct {
	Entry string
	SD    float64
}

// Origin says where a figure comes from, in the person's own words.
type Origin struct{ Entry, Text string }

// Default is an entry the file left out, with the value used instead.
type Default struct{ Entry, Value, Source string }

// Repair is a doubtful figure that was mended while reading, and how.
type Repair struct{ Rule, Entry, Sentence string }

// RepairRules are the rules of all repairs.
var RepairRules = []string{stateMended, stateFitsBadly, scanDoubtful, delaysDoubtful, spectralDoubtful}

// Case is one compared case: the scenario after its changes.
type Case struct {
	Name     string
	Changes  []Change
	Scenario *Scenario // its own Compare is empty
}

// Change sets one entry, by dotted name, to the text of a value.
type Change struct{ Entry, Value string }

// Input is one file that was read, as it was read.
type Input struct {
	Name  string // as named by the person or by the scenario
	Text  string
	Entry string // that names it; "" of a file that no entry names
}

// AES256Bits is the length of an AES-256 key.
const AES256Bits = 256

// SecondsPerDay turns a daily need into a rate.
const SecondsPerDay = 86400

// Need returns the secret bits per second needed, in whatever form it was
// stated; NaN where there is no need.
func (s *Scenario) Need() float64 {
	switch {
	case Stated(s.AES256RenewalS):
		return AES256Bits * s.EncryptedConnections / s.AES256RenewalS
	case Stated(s.KeyBitsPerDay):
		return s.KeyBitsPerDay / SecondsPerDay
	}
	return s.NeedBps
}

// Stated reports whether a number was given; absent numbers are NaN.
func Stated(x float64) bool { return !math.IsNaN(x) }

// Detector returns the detector of that name, nil if there is none.
func (s *Scenario) Detector(name string) *Detector {
	i := slices.IndexFunc(s.Detectors, func(d Detector) bool { return d.Name == name })
	if i < 0 {
		return nil
	}
	return &s.Detectors[i]
}

// Pulsed reports whether the source is pumped by pulses.
func (s *Scenario) Pulsed() bool { return Stated(s.Source.PulseRateHz) }

// Finite reports whether the key is made in blocks of a stated size.
func (s *Scenario) Finite() bool { return Stated(s.SiftedBitsPerBlock) }

// Clone returns a copy that can be edited without touching s.
func (s *Scenario) Clone() *Scenario {
	c := *s
	c.Detectors = slices.Clone(s.Detectors)
	c.Deviations = slices.Clone(s.Deviations)
	return &c
}
