package report

import "pairspan/scenarios/source"

// scanSection is what a power scan says.
type scanSection struct {
	Curves        *figure
	Parameters    table
	Correlation   *table
	Facts         table
	Told, NotTold []string
	Doubts        []doubt
}

func scanOf(s *source.ScanResult) *scanSection {
	if s == nil {
		return nil
	}
	return &scanSection{
		Curves: scanFigure(s), Parameters: parameterTable(s), Correlation: correlationTable(s), Facts: scanFacts(s),
		Told: sentences(s.Told), NotTold: sentences(s.NotTold),
	}
}

// scanFigure draws the singles of both arms and the coincidences against power.
func scanFigure(s *source.ScanResult) *figure {
	if len(s.Points) == 0 {
		return nil
	}
	f := &figure{
		ID: "scan", Title: "Rates against pump power", Finding: scanFinding(s),
		Reading: "Dots: measured, with the error of the counting; line: the fit. Below each: measured less fitted in standard deviations; the shade holds ±2.",
		Tables:  []table{scanTable(s), pairsTable(s)},
	}
	panels := []panel{{Name: "Alice’s singles, Hz"}, {Name: "Bob’s singles, Hz"}, {Name: "Coincidences less accidentals, Hz"}}
	for i := range s.Points {
		p := &s.Points[i]
		panels[0].Points = append(panels[0].Points, panelPoint{p.PowerMW, p.SinglesHz.Alice, p.SinglesSDHz.Alice, p.SinglesResidual.Alice})
		panels[1].Points = append(panels[1].Points, panelPoint{p.PowerMW, p.SinglesHz.Bob, p.SinglesSDHz.Bob, p.SinglesResidual.Bob})
		panels[2].Points = append(panels[2].Points, panelPoint{p.PowerMW, p.TrueHz, p.TrueSDHz, p.TrueResidual})
	}
	for i := range s.Fitted {
		p := &s.Fitted[i]
		panels[0].Fit = append(panels[0].Fit, [2]float64{p.PowerMW, p.SinglesHz.Alice})
		panels[1].Fit = append(panels[1].Fit, [2]float64{p.PowerMW, p.SinglesHz.Bob})
		panels[2].Fit = append(panels[2].Fit, [2]float64{p.PowerMW, p.TrueHz})
	}
	for _, z := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, drawPanels(f, z, "pump power, mW", panels))
	}
	return f
}

// scanFinding says how well the fit describes the points, and of how much light.
func scanFinding(s *source.ScanResult) string {
	least, most := s.Points[0].PowerMW, s.Points[0].PowerMW
	for i := range s.Points {
		least, most = min(least, s.Points[i].PowerMW), max(most, s.Points[i].PowerMW)
	}
	said := itoa(len(s.Points)) + " points from " + digits(least, 3) + " to " + digits(most, 3) + nbsp + "mW"
	if s.PairsHzPerMWk.Value != nil {
		said += ": " + measured(s.PairsHzPerMWk, 1) + " pairs per second at 1" + nbsp + "mW, growing as " + orderWords(s.Order)
	} else if s.Slopes != nil && s.Slopes.PairsAtMostHzPerMW.Value != nil {
		said += ": at most " + measured(s.Slopes.PairsAtMostHzPerMW, 1) + " pairs per second and mW"
	}
	if s.Chi2PerDof != nil {
		said += "; χ² per degree of freedom " + grouped(*s.Chi2PerDof, 3)
	}
	return said + "."
}

func orderWords(order int) string {
	switch order {
	case 1:
		return "the power"
	case 2:
		return "the square of the power"
	}
	return "the " + ordinal(order) + " power of the power"
}

func hertz(v float64) string { return grouped(v, 5) }

// scanTable lists the points as counted and as fitted.
func scanTable(s *source.ScanResult) table {
	t := table{ID: "scan-data", Caption: "Rates measured and fitted, Hz; residuals in standard deviations", Wide: true, Head: []string{
		"Power, mW", "Alice’s singles", "error", "fitted", "residual", "Bob’s singles", "error", "fitted", "residual",
		"Coincidences", "Accidentals taken out", "Rest", "error", "fitted", "residual",
	}}
	two := func(v float64) string { return grouped(v, 2) }
	for i := range s.Points {
		p := &s.Points[i]
		t.add(digits(p.PowerMW, 4),
			hertz(p.SinglesHz.Alice), orNone(p.SinglesSDHz.Alice, two), hertz(p.SinglesFitHz.Alice), orNone(p.SinglesResidual.Alice, signed),
			hertz(p.SinglesHz.Bob), orNone(p.SinglesSDHz.Bob, two), hertz(p.SinglesFitHz.Bob), orNone(p.SinglesResidual.Bob, signed),
			hertz(p.CoincidencesHz), hertz(p.AccidentalsHz), hertz(p.TrueHz), orNone(p.TrueSDHz, two), hertz(p.TrueFitHz), orNone(p.TrueResidual, signed))
	}
	return t
}

// pairsTable lists what the source makes at each power.
func pairsTable(s *source.ScanResult) table {
	t := table{
		ID: "scan-pairs", Caption: "Inside the source at each power, before any loss", Wide: true,
		Head: []string{"Power, mW", "Pairs, Hz", "Unpaired photons to Alice, Hz", "Unpaired photons to Bob, Hz"},
	}
	for i := range s.Points {
		p := &s.Points[i]
		t.add(digits(p.PowerMW, 4), measured(p.PairRateHz, 1), measured(p.UnpairedPhotonsHz.Alice, 1), measured(p.UnpairedPhotonsHz.Bob, 1))
	}
	return t
}

func parameterTable(s *source.ScanResult) table {
	t := table{ID: "parameters", Caption: "Parameters of the fit", Head: []string{"Parameter", "Value ± one standard deviation", "Unit"}, Words: []bool{false, true}, Stack: true}
	for _, p := range s.Parameters {
		r := row{Head: sentenceHead(p.Name), Cells: []string{measured(source.Figure{Value: p.Value, SD: p.SD}, 1), p.Unit}}
		if p.AtBound {
			r.Note = "held at an end of its range"
		}
		t.Rows = append(t.Rows, r)
	}
	return t
}

// sentenceHead begins a heading with a capital.
func sentenceHead(s string) string {
	s = sentence(s)
	if n := len(s); n > 0 && s[n-1] == '.' {
		s = s[:n-1]
	}
	return s
}

// correlationTable sets the correlations of the errors, the parameters numbered
// as in their table.
func correlationTable(s *source.ScanResult) *table {
	if len(s.Correlation) < 2 {
		return nil
	}
	t := &table{ID: "correlation", Caption: "Correlation of the errors, −1 to 1", Wide: true, Head: []string{"Parameter"}}
	for i := range s.Correlation {
		t.Head = append(t.Head, itoa(i+1))
	}
	for i, line := range s.Correlation {
		cells := make([]string, len(line))
		for j, c := range line {
			cells[j] = orNone(c, func(v float64) string { return decimals(v, 2) })
		}
		name := itoa(i + 1)
		if i < len(s.Parameters) {
			name += nbsp + " " + s.Parameters[i].Name
		}
		t.Rows = append(t.Rows, row{Head: name, Cells: cells})
	}
	return t
}

// scanFacts lists what the parameters mean for source and arms.
func scanFacts(s *source.ScanResult) table {
	t := table{ID: "scan-figures", Caption: "Source and arms", Head: []string{"Figure", "Alice", "Bob"}, Stack: true}
	arms := func(name, note string, x source.PerArm, scale float64) {
		if x.Alice.Value != nil || x.Bob.Value != nil {
			t.Rows = append(t.Rows, row{Head: name, Note: note, Cells: []string{measured(x.Alice, scale), measured(x.Bob, scale)}})
		}
	}
	arms("Efficiency, %", "chance that a photon of a pair is counted: coupling, filters, detector", s.Efficiency, 100)
	if e := s.DetectorEfficiency; e != nil {
		t.Rows = append(t.Rows, row{Head: "of which the detector’s, %", Cells: []string{digits(100*e.Alice, 3), digits(100*e.Bob, 3)}, Sub: true})
	}
	arms("Collection loss, dB", "from the source to the detector, the detector’s efficiency taken out", s.CollectionLossDB, 1)
	arms("Linear noise, Hz per mW", "photons without a partner inside the source, before any loss", s.LinearNoise, 1)
	arms("Constant counts, Hz", "that do not depend on the power", s.ConstantHz, 1)
	if z := s.Slopes; z != nil {
		arms("Growth of the singles, Hz per mW", "", z.SinglesHzPerMW, 1)
		arms("Efficiency at least, %", "as if all that grows were pairs", z.EfficiencyAtLeast, 100)
	}
	t.Rows = append(t.Rows, row{Head: "Share of the pairs in the window, %", Cells: []string{digits(100*s.WindowShare, 3), digits(100*s.WindowShare, 3)}})
	return t
}
