package plan

import (
	"fmt"
	"math"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// diagnosis compares the running link with the plan. It goes from the singles,
// which depend on least, to the error rates, which depend on all, and takes
// every fault that it has found into what it expects next.
type diagnosis struct {
	*firstDay
	measured sheet // NaN where not stated
	fault    fault // what explains the measured figures so far
	says     [readings]string
	findings []string
}

// noFigures is a sheet on which nothing stands.
func noFigures() (s sheet) {
	for r := range s {
		s[r] = nan
	}
	return s
}

// measuredSheet returns what the scenario states of the running link.
func measuredSheet(m *scenarios.Measured) sheet {
	s := noFigures()
	for i := range m.SinglesHz {
		s[singles.of(i)] = m.SinglesHz[i]
	}
	s[coincidences], s[car], s[sifted] = m.CoincidencesHz, m.CAR, m.SiftedBps
	s[accidentals] = m.CoincidencesHz / (1 + m.CAR)
	s[qberKey], s[qberCheck] = m.QBERKey, m.QBERCheck
	return s
}

// compare adds the measured figures to the sheet, and what they point to.
func (d *firstDay) compare(out *Acceptance) {
	g := &diagnosis{firstDay: d, measured: measuredSheet(&d.s.Measured), fault: sound}
	g.explainSingles()
	g.explainPairs()
	g.explainCAR()
	g.explainErrors()
	i := 0
	for r := range readings {
		if !d.shown(r) {
			continue
		}
		if says := g.saysOf(r); says != "" {
			out.Rows[i].Measured, out.Rows[i].MeasuredSays = number(g.measured[r]), &says
		}
		i++
	}
	out.Findings = append(out.Findings, g.findings...)
}

// saysOf returns what a measured figure says by itself; "" where it was not stated.
func (g *diagnosis) saysOf(r reading) string {
	x := g.measured[r]
	switch {
	case !g.has(r):
		return ""
	case g.says[r] != "":
		return g.says[r]
	case x >= g.from[r] && x <= g.to[r]:
		return "as expected"
	}
	return "as the other figures explain"
}

func (g *diagnosis) has(r reading) bool { return scenarios.Stated(g.measured[r]) }

// add takes a fault into what is expected next.
func (g *diagnosis) add(f fault) { g.fault = both(g.fault, f) }

// now is the sheet that the faults found so far explain.
func (g *diagnosis) now() sheet { return g.nominalWith(g.fault) }

// off says on which side of what is tolerated around a prediction a reading
// lies: -1 below, 1 above, 0 within.
func (g *diagnosis) off(r reading, predicted float64) int {
	from, to := g.tolerated(r, predicted)
	switch x := g.measured[r]; {
	case x < from:
		return -1
	case x > to:
		return 1
	}
	return 0 // or not stated
}

// size returns how large a cause must be on top of the faults found for a
// reading to come out as measured.
func (g *diagnosis) size(r reading, most float64, f func(x float64) fault) (float64, bool) {
	return sizeOf(most, g.measured[r], func(x float64) float64 { return g.nominalWith(both(g.fault, f(x)))[r] })
}

// note writes down a finding, and what the row says.
func (g *diagnosis) note(r reading, finding, says string) {
	g.findings = append(g.findings, finding)
	g.says[r] = says
}

// explainPairs looks for coincidences, or sifted bits where those alone were
// measured, that the singles do not explain.
func (g *diagnosis) explainPairs() {
	r := coincidences
	if !g.has(r) {
		r = sifted
	}
	if g.has(r) {
		g.explain(r)
	}
	if r != sifted && g.has(sifted) {
		g.explainSifting()
	}
}

var pairWord = map[reading]string{coincidences: "Coincidences", sifted: "Sifted bits"}

func (g *diagnosis) explain(r reading) {
	predicted := g.now()[r]
	side := g.off(r, predicted)
	start := pairWord[r] + ": " + compared(g.measured[r], predicted) + " that the plan and the singles explain"
	f, where := g.whereLost()
	if db, ok := g.size(r, mostExtraDB, f); ok {
		g.add(f(db))
		if side < 0 {
			g.note(r, fmt.Sprintf("%s: %s dB lost %s.", start, decibels(db), where), decibels(db)+" dB missing beyond what the singles explain")
		}
		return
	}
	if side < 0 {
		g.note(r, start+": no loss alone explains so few; the window may lie beside the delay altogether.", "next to none")
	}
	if side > 0 {
		g.note(r, start+": a window wider than planned, cross-talk between detectors, or more pairs and more loss than planned.", "more than the singles explain")
	}
}

// whereLost returns what takes coincidences away: the timing, where the
// singles of both arms were measured; else a loss in the arms that were not.
func (g *diagnosis) whereLost() (f func(db float64) fault, where string) {
	const timingToo = " or in timing (window off the delay, clocks, unequal lengths); %s singles will tell"
	a, b := g.has(singles.of(keyrate.Alice)), g.has(singles.of(keyrate.Bob))
	switch {
	case a && b:
		return late, "in timing: the window off the delay, the clocks, or lengths that differ from the plan"
	case a:
		return lossInArm(keyrate.Bob).fault, "in Bob's arm" + fmt.Sprintf(timingToo, "Bob's")
	case b:
		return lossInArm(keyrate.Alice).fault, "in Alice's arm" + fmt.Sprintf(timingToo, "Alice's")
	}
	return func(db float64) fault { return both(lost(keyrate.Alice, db/2), lost(keyrate.Bob, db/2)) },
		"in both arms together" + fmt.Sprintf(timingToo, "the")
}

// explainSifting looks for sifted bits that the coincidences do not explain.
func (g *diagnosis) explainSifting() {
	predicted := g.now()[sifted]
	start := pairWord[sifted] + ": " + compared(g.measured[sifted], predicted) + " that the coincidences explain"
	switch g.off(sifted, predicted) {
	case -1:
		g.note(sifted, start+": the choice of basis, or records of the two ends that do not match.", "fewer than the coincidences explain")
	case 1:
		g.note(sifted, start+": the share of the key basis differs from the plan.", "more than the coincidences explain")
	}
}

// explainCAR looks for accidentals that nothing found so far explains.
func (g *diagnosis) explainCAR() {
	if !g.has(car) {
		return
	}
	predicted := g.now()[car]
	start := fmt.Sprintf("CAR: %s where %s is to be expected", bare(g.measured[car]), bare(predicted))
	switch g.off(car, predicted) {
	case 1:
		g.note(car, start+": fewer pairs per window than planned, or less noise.", "above what the other figures explain")
	case -1:
		g.explainLowCAR(start)
	}
}

func (g *diagnosis) explainLowCAR(start string) {
	background := strayInBoth(keyrate.Alice)
	x, ok := g.size(car, background.most, background.fault)
	if !ok {
		g.note(car, start+": no background alone explains so low a ratio; the window may lie beside the delay.", "below what any background explains")
		return
	}
	hz := bare(strayHz(x)) + " extra counts/s in every detector"
	suffered := both(g.fault, background.fault(x))
	sheet := g.nominalWith(suffered)
	unseen := false
	for i := range g.link.Arms {
		r := singles.of(i)
		unseen = unseen || g.has(r) && g.off(r, sheet[r]) < 0
	}
	if !unseen {
		g.fault = suffered
		g.note(car, start+": "+hz+" (stray light, dark counts) would explain it.", hz)
		return
	}
	why := fmt.Sprintf("%s: %s would explain it, but the singles do not show them", start, hz)
	factor := func(x float64) fault { return widened(math.Pow(10, x)) }
	if x, ok := g.size(car, mostWidening, factor); ok {
		g.add(factor(x))
		wider := bare(math.Pow(10, x))
		if !g.has(coincidences) {
			wider += " times as wide, or pairs lost in timing; the coincidences will tell."
		} else {
			wider += " times as wide."
		}
		g.note(car, why+"; so would a window "+wider, "too many accidentals for these singles")
		return
	}
	g.note(car, why+".", "below what the singles explain")
}

// compared puts a rate beside the one to expect.
func compared(measured, expected float64) string {
	if expected == 0 {
		return bare(measured) + " /s where there should be none"
	}
	return fmt.Sprintf("%s /s, %s times the %s", bare(measured), bare(measured/expected), bare(expected))
}

// decibels are shown to a hundredth.
func decibels(db float64) string { return fmt.Sprintf("%.2f", db) }
