package report

import (
	"math"

	"pairspan/scenarios/source"
)

// stateSection is what a pair is.
type stateSection struct {
	Matrix    []matrixRow // empty where the matrix is not known
	Full      string      // what a whole bar is worth
	Facts     table
	Aligned   *figure // nil where no errors are known
	Aligning  string
	Rotations *table
	Members   *table
}

func stateOf(s *source.State) *stateSection {
	if s == nil {
		return nil
	}
	t := &stateSection{Facts: stateTable(s), Aligned: alignedFigure(s), Aligning: typeset(sentence(s.Aligning)), Rotations: rotationTable(s.Alignment), Members: membersTable(s.Members)}
	if s.Aligning == "" {
		t.Aligning = ""
	}
	if s.DensityMatrix != nil {
		var full float64
		t.Matrix, full = matrixRows(s.DensityMatrix)
		t.Full = digits(full, 2)
	}
	return t
}

// valueHead heads a column of figures.
func valueHead(some []source.Figure) string {
	for _, f := range some {
		if f.SD != nil {
			return "Value ± one standard deviation"
		}
	}
	return "Value"
}

// stateTable lists the measures of the state that are known.
func stateTable(s *source.State) table {
	t := table{ID: "state-figures", Caption: "Figures of the state"}
	var known []source.Figure
	add := func(name, note string, f source.Figure) {
		if f.Value != nil {
			known = append(known, f)
			t.Rows = append(t.Rows, row{Head: name, Note: note, Cells: []string{measured(f, 1)}, Main: name == "Tangle"})
		}
	}
	add("Tangle", "the square of the concurrence", s.Tangle)
	add("Concurrence", "", s.Concurrence)
	add("Fidelity", "to the nearest maximally entangled state"+rangeWords(s.FidelityRange), s.Fidelity)
	if s.BellState != nil {
		add("Fidelity with "+bellName(*s.BellState), "the nearest Bell state in the laboratory’s axes", s.BellFidelity)
	}
	add("CHSH", "2 at most without entanglement, 2√2 at most with it", s.CHSH)
	add("Entanglement of formation", "", s.EntanglementOfFormation)
	add("Purity", "1/4 for light without order, 1 for a pure state", s.Purity)
	add("Entropy", "bits, 0 to 2", s.Entropy)
	add("Linear entropy", "0 for a pure state, 1 for light without order", s.LinearEntropy)
	t.Head = []string{"Figure", valueHead(known)}
	return t
}

func rangeWords(r *source.Range) string {
	if r == nil {
		return ""
	}
	return "; any state of this concurrence has from " + digits(r.From, 3) + " to " + digits(r.To, 3)
}

// bellName sets a Bell state in letters.
func bellName(s string) string {
	switch s {
	case "Phi+":
		return "Φ⁺"
	case "Phi-":
		return "Φ⁻"
	case "Psi+":
		return "Ψ⁺"
	case "Psi-":
		return "Ψ⁻"
	}
	return s
}

// alignedFigure compares errors and secret fraction in the laboratory's axes
// with those of the best alignment.
func alignedFigure(s *source.State) *figure {
	errors := dots{Unit: "%", Title: "QBER, %"}
	add := func(label string, f source.Figure, strong bool) {
		if f.Value != nil {
			errors.Rows = append(errors.Rows, dotRow{Label: label, At: 100 * valueOf(f), SD: 100 * sdOf(f), Value: inPerCents(f), Strong: strong})
		}
	}
	add("H/V, laboratory", s.QBERLab.HV, false)
	add("D/A, laboratory", s.QBERLab.DA, false)
	add("R/L, laboratory", s.QBERLab.RL, false)
	add("key basis, aligned", s.QBERAligned.Key, true)
	add("check basis, aligned", s.QBERAligned.Check, true)
	if len(errors.Rows) == 0 {
		return nil
	}
	secret := dots{Title: "secret bits per sifted bit", Max: 1}
	for _, x := range []struct {
		label string
		f     source.Figure
	}{{"laboratory", s.SecretFraction.Lab}, {"aligned", s.SecretFraction.Aligned}} {
		if x.f.Value != nil {
			secret.Rows = append(secret.Rows, dotRow{Label: x.label, At: valueOf(x.f), SD: sdOf(x.f), Value: measured(x.f, 1), Strong: x.label == "aligned"})
		}
	}
	f := &figure{
		ID: "aligned", Title: "Laboratory against aligned", Finding: alignedFinding(s),
		Reading: "Secret bits per sifted bit are those of an ideal link: error correction at the Shannon limit and no error but the state’s.",
		Tables:  []table{errors.table("aligned-errors", "Error rates of the state", "Bases", "QBER"), secret.table("aligned-fractions", "Secret bits per sifted bit", "Axes", "Secret fraction")},
	}
	for _, z := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, drawDots(f, z, errors, secret))
	}
	return f
}

// alignedFinding says what aligning brings.
func alignedFinding(s *source.State) string {
	lab, aligned := s.SecretFraction.Lab, s.SecretFraction.Aligned
	if s.QBERAligned.Key.Value == nil || s.QBERAligned.Check.Value == nil {
		return "The error rates of the state, as far as they are known."
	}
	said := "Aligned, the QBER is " + bothFigures(s.QBERAligned.Key, s.QBERAligned.Check)
	if s.QBERLab.HV.Value != nil && s.QBERLab.DA.Value != nil {
		said += ", in the laboratory’s axes " + inPerCents(s.QBERLab.HV) + " in H/V and " + inPerCents(s.QBERLab.DA) + " in D/A"
	}
	if lab.Value != nil && aligned.Value != nil {
		said += "; a sifted bit gives " + measured(aligned, 1) + " secret bits instead of " + measured(lab, 1)
		if math.Abs(*lab.Value-*aligned.Value) < 5e-4 {
			said = said[:len(said)-len(" instead of "+measured(lab, 1))] + " either way"
		}
	}
	return said + "."
}

func bothFigures(key, check source.Figure) string {
	if inPerCents(key) == inPerCents(check) {
		return inPerCents(key) + " in both bases"
	}
	return inPerCents(key) + " in the key basis and " + inPerCents(check) + " in the check basis"
}

// rotationTable lists the rotations that align the analysers.
func rotationTable(a *source.Alignment) *table {
	if a == nil {
		return nil
	}
	t := &table{
		ID: "rotations", Caption: "Rotations of the Poincaré sphere that align the analysers; the key basis is then " + basisName(a.KeyBasis),
		Head: []string{"Arm", "Axis along D", "along L", "along H", "Angle"}, Stack: true,
	}
	for _, arm := range []struct {
		name string
		r    source.Rotation
	}{{"Alice", a.Alice}, {"Bob", a.Bob}} {
		t.add(arm.name, decimals(arm.r.Axis[0], 3), decimals(arm.r.Axis[1], 3), decimals(arm.r.Axis[2], 3), decimals(arm.r.AngleDeg, 1)+"°")
	}
	return t
}

func basisName(s string) string {
	switch s {
	case "HV":
		return "H/V"
	case "DA":
		return "D/A"
	}
	return s
}

// membersTable lists the states that one figure leaves open.
func membersTable(m *source.Members) *table {
	if m == nil {
		return nil
	}
	t := &table{
		ID: "members", Caption: "What the figure leaves open, analysers aligned", Stack: true,
		Head: []string{"State", "QBER, key basis", "QBER, check basis", "Secret bits per sifted bit"},
	}
	add := func(name, note string, x source.Member) {
		t.Rows = append(t.Rows, row{Head: name, Note: note, Cells: []string{perCent(x.QBERKey), perCent(x.QBERCheck), digits(x.SecretFraction, 3)}})
	}
	add("At worst", "the least key that any such state gives", m.AtWorst)
	add("Werner state", "nominal: a Bell state and white noise", m.Nominal)
	add("At best", "pure dephasing", m.AtBest)
	return t
}
