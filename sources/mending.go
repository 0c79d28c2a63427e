package sources

import (
	"fmt"
	"strings"
)

// Mending says how far a matrix, or a state without its accidentals, was off a
// physical one, and so what was done to it. The zero value says that nothing
// was amiss.
type Mending struct {
	TraceOff           float64 // |trace − 1|
	HermitianOff       float64 // the largest |ρ_ij − ρ_ji*|
	LowestEigenvalue   float64 // of the Hermitian part divided by its trace; no state has a negative one
	VisibilityAboveOne float64 // how far a visibility came out above 1 without the accidentals
}

// worthSaying is how far off is more than rounding, and is told.
const worthSaying = 1e-9

// Any tells whether something was off by more than rounding, 1e-9.
func (m Mending) Any() bool {
	return m.TraceOff > worthSaying || m.HermitianOff > worthSaying ||
		m.LowestEigenvalue < -worthSaying || m.VisibilityAboveOne > worthSaying
}

// Sentence says in plain words what was off and what was done about it; it is
// empty when Any is false.
func (m Mending) Sentence() string {
	var parts []string
	if m.TraceOff > worthSaying {
		parts = append(parts, fmt.Sprintf("the trace of the density matrix was off 1 by %.2g, so all entries were divided by it", m.TraceOff))
	}
	if m.HermitianOff > worthSaying {
		parts = append(parts, fmt.Sprintf("entries across the diagonal were off complex conjugates by up to %.2g, so their mean was taken", m.HermitianOff))
	}
	if m.LowestEigenvalue < -worthSaying {
		parts = append(parts, fmt.Sprintf("the density matrix had an eigenvalue of %.2g, which no state has, so the nearest physical state was taken", m.LowestEigenvalue))
	}
	if m.VisibilityAboveOne > worthSaying {
		parts = append(parts, fmt.Sprintf("with the accidentals taken out a visibility came out above 1 by %.2g and counts as 1, so the coincidence-to-accidental ratio may be too low", m.VisibilityAboveOne))
	}
	return strings.Join(parts, "; ")
}
