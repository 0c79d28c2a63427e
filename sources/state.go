package sources

import "math"

// Member is one of the states that the figures given leave open. Where the
// state itself was given all members are the same.
type Member int

// The members. AtBest is not one state: it is whichever of BestDephased and
// BestEven makes more key.
const (
	Nominal      Member = iota // Werner's state, or the given one
	AtWorst                    // the least key of all states with these figures
	BestDephased               // pure dephasing: one basis without error
	BestEven                   // both bases with the same, least error
)

// Knowledge says how far a source's state is known.
type Knowledge int

// The degrees of knowledge.
const (
	Unknown Knowledge = iota // nothing said of entanglement
	Bounded                  // a tangle, a concurrence or a fidelity: an interval
	Given                    // visibilities in two bases or a density matrix
)

// Kind says which figures describe a state.
type Kind int

// The kinds of description.
const (
	NoState           Kind = iota // nothing
	TangleKind                    // Figure is the tangle, 0 to 1
	ConcurrenceKind               // Figure is the concurrence, 0 to 1
	FidelityKind                  // Figure is the fidelity to the intended Bell state, above 1/2
	VisibilityKind                // VisibilityHV and VisibilityDA, 0 to 1
	DensityMatrixKind             // Matrix
)

// State is what is known of the state of one pair. It is a plain value: copy
// it, change a field, ask again. The zero State is unknown.
type State struct {
	Kind                       Kind
	Figure                     float64 // the tangle, concurrence or fidelity
	VisibilityHV, VisibilityDA float64
	Matrix                     DensityMatrix

	// gain is what taking accidentals out of a figure multiplies the
	// correlations by, less 1, so that nothing taken out is the zero value.
	gain float64
}

// FromTangle returns a state of which only the tangle t is known, 0 to 1.
func FromTangle(t float64) State { return State{Kind: TangleKind, Figure: t} }

// FromConcurrence returns a state of which only the concurrence c is known,
// 0 to 1.
func FromConcurrence(c float64) State { return State{Kind: ConcurrenceKind, Figure: c} }

// FromFidelity returns a state of which only the fidelity f to the intended
// Bell state is known. Up to 1/2 it says nothing: such a state has no errors.
func FromFidelity(f float64) State { return State{Kind: FidelityKind, Figure: f} }

// FromVisibilities returns a state known by its visibilities in the two bases
// of the key, 0 to 1 each.
func FromVisibilities(hv, da float64) State {
	return State{Kind: VisibilityKind, VisibilityHV: hv, VisibilityDA: da}
}

// FromDensityMatrix returns the state rho.
func FromDensityMatrix(rho DensityMatrix) State {
	return State{Kind: DensityMatrixKind, Matrix: rho}
}

// Knowledge returns how far the state is known.
func (s State) Knowledge() Knowledge {
	switch s.Kind {
	case TangleKind, ConcurrenceKind, FidelityKind:
		return Bounded
	case VisibilityKind, DensityMatrixKind:
		return Given
	}
	return Unknown
}

// Concurrence returns the concurrence, 0 to 1, of a state known by its tangle,
// its concurrence or its density matrix; NaN for the others, whose figures
// leave it open. Accidentals taken out of a tangle or a concurrence do not
// change it: what they do to it depends on the state.
func (s State) Concurrence() float64 {
	switch s.Kind {
	case TangleKind:
		return within(math.Sqrt(s.Figure), 0, 1)
	case ConcurrenceKind:
		return within(s.Figure, 0, 1)
	case DensityMatrixKind:
		return s.Matrix.Concurrence()
	}
	return math.NaN()
}

// Errors returns the bit error probabilities of member m, 0 to 1/2, that of the
// key basis first: e1 ≤ e2. They are NaN when the state is unknown or a figure
// lies outside its range.
//
// Of a density matrix they are those after the best alignment of the analysers,
// and members of a tangle or a concurrence are understood so too. It makes no
// allocation.
func (s State) Errors(m Member) (e1, e2 float64) {
	switch s.Kind {
	case TangleKind, ConcurrenceKind:
		return concurrenceErrors(s.Concurrence(), s.gain, m)
	case FidelityKind:
		return fidelityErrors(s.Figure, s.gain, m)
	case VisibilityKind:
		a := (1 - within(s.VisibilityHV, 0, 1)) / 2
		b := (1 - within(s.VisibilityDA, 0, 1)) / 2
		return min(a, b), max(a, b)
	case DensityMatrixKind:
		return s.Matrix.AlignedErrors()
	}
	return math.NaN(), math.NaN()
}

// within returns x, or NaN if it lies outside lo to hi.
func within(x, lo, hi float64) float64 {
	if x >= lo && x <= hi {
		return x
	}
	return math.NaN()
}
