package report

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"pairspan/scenarios/source"
)

// SourceText writes what a source is for a terminal: at most 40 lines of 90
// columns, in ASCII but for the person's own words.
func SourceText(w io.Writer, r *source.Result) error {
	t := &textPage{}
	t.line(r.Title + ": " + formWords(r.Form))
	t.gap()
	t.wrap(r.Sentence, "")
	t.carried(r.Link)
	if r.InScenario != nil {
		t.wrap(inScenario+*r.InScenario, "  ")
	}
	t.bands(r.SpectralMap)
	t.state(r)
	if f := r.Fit; f != nil {
		t.gap()
		t.wrap(f.Sentence, "")
	}
	t.scan(r.PowerScan)
	t.delays(r.Delays)
	end := &textPage{}
	end.gap()
	end.wrap(lightCaution, "")
	t.doubts(r, mostLines-len(t.lines)-len(end.lines))
	t.lines = append(t.lines, end.lines...)
	_, err := io.WriteString(w, strings.Join(t.lines, "\n")+"\n")
	return err
}

// inScenario leads to what makes a file the source of a scenario.
const inScenario = "Under source in a scenario: "

const lightCaution = "An estimate, not a security claim. Pump powers and open fibre ends: invisible laser radiation (IEC 60825-1 and -2); local rules and licensed persons decide."

// formWords names a form of file.
func formWords(f source.Form) string {
	switch f {
	case source.FormDensityMatrix:
		return "a density matrix"
	case source.FormTomography:
		return "counts of a tomography"
	case source.FormPowerScan:
		return "a power scan"
	case source.FormDelays:
		return "a delay histogram"
	case source.FormSpectralMap:
		return "a spectral map"
	case source.FormScenario:
		return "the source of a scenario"
	}
	return spaced(string(f))
}

// carried says what the source can carry on a link.
func (t *textPage) carried(l *source.Link) {
	if l == nil {
		return
	}
	if p := l.Pump; p != nil {
		t.wrap(p.Sentence, "")
	}
	t.gap()
	t.wrap("On "+l.Title+": "+l.Sentence, "  ")
	if l.Outcome == source.NotTold {
		return
	}
	end := "  Margin " + marginCell(l.MarginDB, l.MarginReason) + "; reach "
	if l.ReachKm != nil {
		end += km(*l.ReachKm)
	} else {
		end += reachWords(l.ReachReason)
	}
	if l.QBER != nil {
		end += "; QBER " + perCent(l.QBER.Key) + " and " + perCent(l.QBER.Check)
	}
	t.line(end)
}

// state shows a state as far as it is known. Of a spectral map the pass bands
// take the place of the matrix, which --format csv prints.
func (t *textPage) state(r *source.Result) {
	s := r.State
	if s == nil {
		return
	}
	t.gap()
	if r.SpectralMap == nil {
		t.matrix(s.DensityMatrix)
	}
	if s.DensityMatrix != nil {
		t.figures(s)
		t.gap()
		t.alignment(s)
	} else {
		t.members(s)
	}
	t.wrap(sentence(s.Conversions), "  ")
}

// matrix shows a density matrix as a table of complex numbers.
func (t *textPage) matrix(m *[4][4]source.Complex) {
	if m == nil {
		return
	}
	names := [4]string{"HH", "HV", "VH", "VV"}
	head := pad("Density matrix", 16)
	for _, name := range names {
		head += pad("   "+name, matrixCell)
	}
	t.line(strings.TrimRight(head, " "))
	for i, row := range m {
		line := pad("  "+names[i], 16)
		for _, x := range row {
			line += pad(fmt.Sprintf("%+.3f %+.3fi", withoutSign(x.Re), withoutSign(x.Im)), matrixCell)
		}
		t.line(strings.TrimRight(line, " "))
	}
}

const matrixCell = 17

// withoutSign drops the sign of what is shown as zero.
func withoutSign(x float64) float64 {
	const shownAsZero = 0.0005
	if x > -shownAsZero && x <= 0 {
		return 0
	}
	return x
}

// figures sets the figures of merit in two columns.
func (t *textPage) figures(s *source.State) {
	left := []string{
		"Tangle", s.Tangle.Text(), "Concurrence", s.Concurrence.Text(), "Fidelity at best", s.Fidelity.Text(),
		"  with " + *s.BellState, s.BellFidelity.Text(), "CHSH at best", s.CHSH.Text(),
	}
	right := []string{
		"Purity", s.Purity.Text(), "Entropy, bits", s.Entropy.Text(), "Linear entropy", s.LinearEntropy.Text(),
		"Entanglement of formation", s.EntanglementOfFormation.Text(),
	}
	for i := 0; i < len(left); i += 2 {
		line := pad("  "+left[i], 22) + pad(left[i+1], columnWidth-22)
		if i < len(right) {
			line += pad(right[i], 26) + right[i+1]
		}
		t.line(strings.TrimRight(line, " "))
	}
}

// alignment compares the laboratory's axes with the analysers aligned.
func (t *textPage) alignment(s *source.State) {
	row := func(cells ...string) {
		line := pad(cells[0], 20)
		for _, cell := range cells[1:] {
			line += pad(cell, 17)
		}
		t.line(strings.TrimRight(line, " "))
	}
	lab, aligned := s.QBERLab, s.QBERAligned
	row("QBER", "H/V", "D/A", "R/L", "secret fraction")
	row("  laboratory's axes", lab.HV.PerCent(), lab.DA.PerCent(), lab.RL.PerCent(), s.SecretFraction.Lab.Text())
	key, check := aligned.Key.PerCent(), aligned.Check.PerCent()
	if s.Alignment.KeyBasis == "DA" {
		key, check = check, key
	}
	row("  aligned", key, check, "", s.SecretFraction.Aligned.Text())
	if a := s.Alignment; a.Alice.AngleDeg < leastTurn && a.Bob.AngleDeg < leastTurn {
		t.line("The analysers are aligned as they stand.")
	} else {
		t.wrap("To align, turn on the Poincare sphere "+turn("Alice's photons", a.Alice)+" and "+turn("Bob's", a.Bob)+".", "  ")
	}
}

// leastTurn is the angle, in degrees, below which a turn shows as none.
const leastTurn = 0.05

// turn says a rotation of one side's photons.
func turn(whose string, r source.Rotation) string {
	if r.AngleDeg < leastTurn {
		return whose + " not at all"
	}
	return fmt.Sprintf("%s by %.1f deg about D %s, L %s, H %s", whose, r.AngleDeg, axisPart(r.Axis[0]), axisPart(r.Axis[1]), axisPart(r.Axis[2]))
}

func axisPart(x float64) string { return decimals(x, 2) }

// members shows what a state may be that is known in part.
func (t *textPage) members(s *source.State) {
	if s.Members == nil {
		return
	}
	t.line(pad("Analysers aligned", 24) + pad("QBER key", 12) + pad("check", 12) + "secret fraction")
	for _, m := range []struct {
		name string
		of   source.Member
	}{{"  at worst", s.Members.AtWorst}, {"  Werner state", s.Members.Nominal}, {"  at best, dephased", s.Members.AtBest}} {
		t.line(pad(m.name, 24) + pad(perCent(m.of.QBERKey), 12) + pad(perCent(m.of.QBERCheck), 12) + digits(m.of.SecretFraction, 3))
	}
}

// doubts shows the warnings, in full where the lines left allow it, else as
// many as fit, one line each.
func (t *textPage) doubts(r *source.Result, room int) {
	if len(r.Warnings) == 0 {
		return
	}
	whole, short := &textPage{}, &textPage{}
	whole.gap()
	short.gap()
	for i, w := range r.Warnings {
		said := "Doubtful: "
		if w.Entry != "" {
			said += w.Entry + ": "
		}
		said = ascii(said + w.Sentence)
		whole.wrap(said, "  ")
		if left := room - len(short.lines); left == 1 && i < len(r.Warnings)-1 {
			short.line(fmt.Sprintf("Doubtful: %d more, see --format json", len(r.Warnings)-i))
			break
		}
		short.line(clip(onOneLine(said), textWidth))
	}
	if len(whole.lines) <= room {
		short = whole
	}
	t.lines = append(t.lines, short.lines[:max(0, min(len(short.lines), room))]...)
}

// list shows sentences, each with what it is.
func (t *textPage) list(what string, sentences []string) {
	for _, s := range sentences {
		t.wrap(what+s, strings.Repeat(" ", min(2, utf8.RuneCountInString(what))))
	}
}
