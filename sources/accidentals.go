package sources

// WithoutAccidentals returns the state without the accidentals that were left
// in when it was measured with the ratio car > 0 of true coincidences to
// accidentals, and what had to be put right.
//
// Uniform accidentals shrink all correlations by CAR/(1+CAR), so
//
//	ρ = ((1 + CAR) ρ_measured − I/4)/CAR
//
// and visibilities grow alike. A density matrix that is not physical afterwards
// is replaced by the nearest physical one, a visibility above 1 is set to 1;
// Mending says so. A tangle, concurrence or fidelity stays as it is: the
// correction is made in each member's errors, when they are asked for (see
// concurrenceErrors and fidelityErrors), and floored at 0. Mending then tells
// whether Werner's state of that figure could have been measured at all.
//
// An infinite car changes nothing; with a car that is not above 0 the state
// returned is unknown.
func (s State) WithoutAccidentals(car float64) (State, Mending) {
	if !(car > 0) {
		return State{}, Mending{}
	}
	gain := 1 / car
	switch s.Kind {
	case DensityMatrixKind:
		var mending Mending
		s.Matrix, mending = s.Matrix.withoutAccidentals(gain)
		return s, mending
	case VisibilityKind:
		hv, da := within(s.VisibilityHV, 0, 1)*(1+gain), within(s.VisibilityDA, 0, 1)*(1+gain)
		s.VisibilityHV, s.VisibilityDA = min(hv, 1), min(da, 1)
		return s, Mending{VisibilityAboveOne: max(excess(hv-1), excess(da-1))}
	}
	measured := s
	measured.gain = 0
	e, _ := measured.Errors(Nominal)
	s.gain += gain * (1 + s.gain)
	return s, Mending{VisibilityAboveOne: excess((1-2*e)*(1+s.gain) - 1)}
}

// excess returns x where it is positive, else 0 (also for NaN).
func excess(x float64) float64 {
	if x > 0 {
		return x
	}
	return 0
}

// cleared returns the error e once the correlation 1 − 2e has grown by the
// factor 1 + gain, not below 0. With gain = 1/CAR it is
// (e − 1/(2(CAR+1))) (CAR+1)/CAR.
func cleared(e, gain float64) float64 {
	if gain == 0 {
		return e
	}
	return max(0, e-gain*(1-2*e)/2)
}

// withoutAccidentals returns the nearest physical state to
// (1 + gain) ρ − gain I/4.
func (rho DensityMatrix) withoutAccidentals(gain float64) (DensityMatrix, Mending) {
	for i := range rho {
		for j := range rho[i] {
			rho[i][j] *= complex(1+gain, 0)
		}
		rho[i][i] -= complex(gain/4, 0)
	}
	state, lowest := nearestPhysical(rho)
	return state, Mending{LowestEigenvalue: lowest}
}
