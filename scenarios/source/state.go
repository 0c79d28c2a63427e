package source

import (
	"fmt"
	"math"

	"pairspan/keyrate"
	"pairspan/sources"
)

// figuresOf lists the figures of a state in the order in which a bootstrap
// returns their deviations.
func figuresOf(rho sources.DensityMatrix) []float64 {
	_, bell := rho.NearestBell()
	return append(rho.Figures().List(), bell)
}

// stateOf describes a density matrix; deviations are those of figuresOf, nil
// where nothing was counted.
func stateOf(rho sources.DensityMatrix, deviations []float64) *State {
	d := sources.Describe(rho)
	s := &State{Known: Whole, DensityMatrix: new([4][4]Complex), BellState: &d.BellState}
	for i, row := range rho {
		for j, x := range row {
			s.DensityMatrix[i][j] = Complex{real(x) + 0, imag(x) + 0} // no negative zeros
		}
	}
	for i, value := range figuresOf(rho) {
		f := s.places()[i]
		f.Value = number(value)
		if deviations != nil {
			f.SD = number(deviations[i])
		}
	}
	s.Alignment = &Alignment{rotation(d.Alignment.Alice), rotation(d.Alignment.Bob), d.Alignment.KeyBasis}
	s.FidelityRange = fidelityRange(d.Concurrence)
	s.Conversions = fmt.Sprintf("tangle %s = concurrence %s; fidelity %s, between %s and %s for any state of that tangle",
		three(d.Tangle), three(d.Concurrence), three(d.Fidelity), three(s.FidelityRange.From), three(s.FidelityRange.To))
	s.Aligning = s.aligning()
	return s
}

// HasMatrix reports whether the density matrix is known.
func (r *Result) HasMatrix() bool { return r.State != nil && r.State.DensityMatrix != nil }

// places are the figures in the order of figuresOf.
func (s *State) places() [16]*Figure {
	return [...]*Figure{
		&s.Tangle, &s.Concurrence, &s.Fidelity, &s.Purity, &s.Entropy, &s.LinearEntropy, &s.EntanglementOfFormation, &s.CHSH,
		&s.QBERLab.HV, &s.QBERLab.DA, &s.QBERLab.RL, &s.QBERAligned.Key, &s.QBERAligned.Check,
		&s.SecretFraction.Lab, &s.SecretFraction.Aligned, &s.BellFidelity,
	}
}

func rotation(r sources.Rotation) Rotation { return Rotation(r) }

// fidelityRange returns where the fidelity to the nearest maximally entangled
// state lies for a concurrence c, 0 to 1:
//
//	max(c, (1 + c)/4) ≤ F ≤ (1 + c)/2
//
// Source: [1]. It is nil where c is not known.
//
// [1] Verstraete, Verschelde (2002). "Fidelity of mixed states of two qubits". Phys. Rev. A 66, 022307.
func fidelityRange(c float64) *Range {
	if math.IsNaN(c) {
		return nil
	}
	return &Range{max(c, (1+c)/4), (1 + c) / 2}
}

// aligning says what aligning the analysers is worth.
func (s *State) aligning() string {
	lab, aligned := s.SecretFraction.Lab, s.SecretFraction.Aligned
	text := fmt.Sprintf("In the laboratory's axes the QBER is %s in H/V and %s in D/A, and a sifted bit gives at most %s secret bits; with the analysers aligned %s and %s, and %s.",
		perCent(*s.QBERLab.HV.Value), perCent(*s.QBERLab.DA.Value), three(*lab.Value),
		perCent(*s.QBERAligned.Key.Value), perCent(*s.QBERAligned.Check.Value), three(*aligned.Value))
	const worthSaying = 0.0005
	if gain := *aligned.Value - *lab.Value; gain >= worthSaying {
		return text + fmt.Sprintf(" Aligning them is worth %s secret bits per sifted bit.", three(gain))
	}
	if *s.QBERLab.HV.Value+*s.QBERLab.DA.Value > *s.QBERAligned.Key.Value+*s.QBERAligned.Check.Value+worthSaying {
		return text + " There is no key either way, but aligning them lowers the errors."
	}
	return text + " They are aligned already."
}

// sentence says what the state is.
func (s *State) sentence() string {
	return fmt.Sprintf("A pair of tangle %s (concurrence %s), nearest to %s with a fidelity of %s: with the analysers aligned a QBER of %s and %s, at most %s secret bits per sifted bit.",
		s.Tangle.Text(), s.Concurrence.Text(), *s.BellState, s.BellFidelity.Text(),
		s.QBERAligned.Key.PerCent(), s.QBERAligned.Check.PerCent(), s.SecretFraction.Aligned.Text())
}

// stated describes a state as a scenario knows it; nil where it is unknown.
func describe(state sources.State) *State {
	switch state.Knowledge() {
	case sources.Unknown:
		return nil
	case sources.Bounded:
		return interval(state)
	}
	if state.Kind == sources.VisibilityKind {
		return visibilities(state)
	}
	return stateOf(state.Matrix, nil)
}

// interval describes a state of which one figure alone is known.
func interval(state sources.State) *State {
	s := &State{Known: Bounded, Members: &Members{member(state, sources.AtWorst), member(state, sources.Nominal), member(state, sources.BestDephased)}}
	if state.Kind == sources.FidelityKind {
		f := state.Figure
		s.Fidelity = exactly(f)
		// C ≥ 2F − 1: the same source as the range of the fidelity.
		s.Conversions = fmt.Sprintf("fidelity %s: concurrence at least %s, tangle at least %s", three(f), three(2*f-1), three((2*f-1)*(2*f-1)))
		return s
	}
	c := state.Concurrence()
	s.Concurrence, s.Tangle = exactly(c), exactly(c*c)
	s.EntanglementOfFormation = exactly(sources.Dephased(c).EntanglementOfFormation()) // of any state of that concurrence
	s.FidelityRange = fidelityRange(c)
	s.Conversions = fmt.Sprintf("tangle %s = concurrence %s; fidelity between %s and %s", three(c*c), three(c), three(s.FidelityRange.From), three(s.FidelityRange.To))
	return s
}

// visibilities describes a state known in two bases. Its fidelity is at least
// the mean of the visibilities, since of the three correlations of a state
// |t3| ≥ |t1| + |t2| − 1 with the sign that helps, and C ≥ 2F − 1.
func visibilities(state sources.State) *State {
	s := &State{Known: Visibilities}
	hv, da := state.VisibilityHV, state.VisibilityDA
	key, check := state.Errors(sources.Nominal)
	s.QBERLab.HV, s.QBERLab.DA = exactly((1-hv)/2), exactly((1-da)/2)
	s.QBERAligned = QBERAligned{exactly(key), exactly(check)}
	s.SecretFraction.Aligned = exactly(secretFraction(key, check))
	s.SecretFraction.Lab = s.SecretFraction.Aligned
	f := (hv + da) / 2
	c := max(0, 2*f-1)
	s.Conversions = fmt.Sprintf("visibilities %s and %s: fidelity at least %s, concurrence at least %s, tangle at least %s", three(hv), three(da), three(f), three(c), three(c*c))
	return s
}

func member(state sources.State, m sources.Member) Member {
	e1, e2 := state.Errors(m)
	return Member{e1, e2, secretFraction(e1, e2)}
}

// secretFraction returns how much secret key a sifted bit gives at best, 0 to 1:
// f = 1 and no other error.
func secretFraction(e1, e2 float64) float64 { return max(0, keyrate.SecretFraction(e1, e2, 1)) }
