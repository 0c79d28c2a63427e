package scenarios

import (
	"math"
	"slices"
)

// Quantity is a numeric entry of one scenario: what may stand there, and what
// does.
type Quantity struct {
	Entry string
	Range
	Whole    bool // it counts things
	Fraction bool
	Decades  bool    // its values are compared by factors rather than by differences
	InUse    float64 // stated, a default, or derived; NaN where there is none or the planner searches
}

// Quantity describes the numeric entry of that name. The error is Errors.
func (s *Scenario) Quantity(entry string) (Quantity, error) {
	fail := func(problem, hint string) (Quantity, error) {
		at := s.document.root.nearestPlace(entry)
		return Quantity{}, Errors{{s.document.files.scenario, at.line, at.column, escape(shorten(entry)), problem, hint}}
	}
	if problem, hint := s.document.changeable(entry); problem != "" {
		return fail(problem, hint)
	}
	r, i := lookup(s, entry)
	switch {
	case r == nil && isGroup(entry):
		return fail("a group of entries, not a number", "it takes "+someOf(entry))
	case r == nil || r.form != numberForm:
		return fail("not a number", "pairspan entries says what it takes")
	case i < 0:
		return fail("the scenario has no such detector", "it has "+shortList(standsFor(s, anyDetector)))
	}
	q := Quantity{Entry: entry, Whole: r.whole, Fraction: r.fraction, Decades: r.decades(), InUse: math.NaN()}
	q.Range, _ = NumberRange(entry) // it is a number
	if at, err := s.Clone().Fix(entry); err == nil {
		q.InUse = *at
	}
	return q, nil
}

// decades reports whether a row's values are compared by factors: lengths,
// losses, fractions, counts and narrow ranges are not.
func (r *row) decades() bool {
	const narrow = 10
	switch r.unit {
	case "km", "dB", "dB/km":
		return false
	}
	return !r.whole && !r.fraction && r.lo >= 0 && r.hi > narrow*r.lo
}

// Fix is Number for an entry that is to be varied: where the scenario leaves
// it to the fibre's class, to energy conservation or to counts at the source,
// the figure in use takes its place; where it leaves it to the planner, the
// place is NaN and no longer searched.
func (s *Scenario) Fix(entry string) (*float64, error) {
	at, err := s.Number(entry)
	if err != nil {
		return nil, err
	}
	r, i := lookup(s, entry)
	switch r.name {
	case "window_ps":
		s.WindowAuto = false
	case "key_basis_share":
		s.KeyShareAuto = false
	case "source.pair_rate_hz", "source.pairs_per_pulse":
		s.fixPump()
	case "arms." + eitherArm + ".fixed_loss_db":
		s.fixLoss(i)
	default:
		if !Stated(*at) {
			*at = s.derived(r, i)
		}
	}
	return at, nil
}

const bandwidthEntry = "source.bandwidth_fwhm_nm"

// fixPump states the emission as a number of its own.
func (s *Scenario) fixPump() {
	src := &s.Source
	src.PumpAuto = false
	emission, err := s.Emission()
	if !src.EmissionMeasured() || err != nil {
		return
	}
	s.fixLoss(Alice)
	s.fixLoss(Bob)
	src.UnpairedHz = [2]float64{s.Unpaired(Alice), s.Unpaired(Bob)}
	src.Counted.Used, src.PowerScan.Used = false, false
	if s.Pulsed() {
		src.PairsPerPulse = emission.PairRateHz / src.PulseRateHz
	} else {
		src.PairRateHz = emission.PairRateHz
	}
}

// fixLoss states an arm's fixed loss as a number of its own.
func (s *Scenario) fixLoss(i int) {
	s.Arms[i].FixedLossDB = float64(s.FixedLoss(i))
	s.Arms[i].FixedLossFromCounts = false
}

// derived returns the figure in use of an entry that is not stated, NaN where
// there is none.
func (s *Scenario) derived(r *row, i int) float64 {
	const inArm = "arms." + eitherArm + "."
	switch r.name {
	case inArm + "loss_db_per_km":
		return s.Attenuation(i)
	case inArm + "dispersion_ps_per_nm_km":
		return s.dispersion(i)
	case inArm + "pmd_ps_per_sqrt_km":
		return s.pmd(i)
	case bandwidthEntry + "." + eitherArm:
		return s.Bandwidth(i)
	}
	return math.NaN()
}

// Figures lists the measured figures in use: the numeric entries that take a
// standard deviation and are stated, a default or the fibre class's, in the
// order of the table. A figure with two names is listed once, by the name that
// changes no other.
func (s *Scenario) Figures() []string {
	var names []string
	var places []*float64
	each(s, func(r *row, i int, name string) {
		if r.form != numberForm || r.exact {
			return
		}
		at := r.at(s, i)
		if at == nil || slices.Contains(places, at) || name == bandwidthEntry && Stated(s.Source.BandwidthFWHMNm[Bob]) {
			return
		}
		ofBob := at == &s.Source.BandwidthFWHMNm[Bob] // Alice's, unless it is stated
		if Stated(*at) || !ofBob && Stated(s.derived(r, i)) {
			names, places = append(names, name), append(places, at)
		}
	})
	return names
}

// Alone is With for the scenario without its compared cases.
func (s *Scenario) Alone(changes ...Change) (*Scenario, error) {
	d, err := s.document.With(changes...)
	if err != nil {
		return nil, err
	}
	r := d.read(d.root)
	if len(r.errs) > 0 {
		return nil, r.errs.sorted(d.files.scenario)
	}
	return r.s, nil
}
