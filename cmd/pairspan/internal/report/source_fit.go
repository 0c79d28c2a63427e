package report

import (
	"cmp"
	"html/template"
	"math"
	"slices"

	"pairspan/scenarios/source"
)

// fitSection is how well the likeliest state explains a tomography.
type fitSection struct {
	Sentence string
	Facts    table
	Counts   *figure
}

func fitOf(f *source.Fit) *fitSection {
	if f == nil {
		return nil
	}
	return &fitSection{Sentence: typeset(sentence(f.Sentence)), Facts: fitTable(f), Counts: countsFigure(f)}
}

func fitTable(f *source.Fit) table {
	t := table{ID: "fit", Caption: "How good the fit is", Head: []string{"Figure", "Value"}}
	add := func(name, note, cell string) {
		t.Rows = append(t.Rows, row{Head: name, Note: note, Cells: []string{cell}})
	}
	add("Settings counted", "", itoa(len(f.Settings)))
	addQuality(&t, f.Chi2, f.DegreesOfFreedom, f.Chi2PerDof, f.PValue, "; an upper bound, since a state has an edge")
	add("Log-likelihood", "natural logarithm", decimals(f.LogLikelihood, 2))
	add("Distance from the optimum", "most that any other state could add to the log-likelihood", digits(f.Optimality, 2))
	add("Iterations", "", itoa(f.Iterations))
	add("Pairs per exposure", "coincidences without analysers in each second of exposure", grouped(f.PairsPerExposure, 4))
	if f.BootstrapDraws > 0 {
		add("Draws behind the errors", "parametric bootstrap with the seed "+itoa(f.BootstrapSeed), itoa(f.BootstrapDraws))
	} else {
		add("Draws behind the errors", "none: the figures stand without errors", itoa(f.BootstrapDraws))
	}
	return t
}

// addQuality adds the goodness of any fit; note says more of the chance.
func addQuality(t *table, chi2 float64, dof int, perDof, p *float64, note string) {
	t.Rows = append(t.Rows,
		row{Head: "χ²", Note: itoa(dof) + " degrees of freedom", Cells: []string{grouped(chi2, 4)}},
		row{Head: "χ² per degree of freedom", Note: "near 1 where counting alone explains the scatter", Cells: []string{orNone(perDof, func(v float64) string { return grouped(v, 3) })}},
		row{Head: "Chance of a larger χ²", Note: "if the model holds" + note, Cells: []string{orNone(p, chance)}})
}

// mostSettings is how many settings the drawing shows; the table has them all.
const mostSettings = 40

// countsFigure shows what was counted at each setting beside what the fit
// expects.
func countsFigure(f *source.Fit) *figure {
	if len(f.Settings) == 0 {
		return nil
	}
	g := &figure{
		ID: "counts", Title: "Counts measured and fitted", Finding: countsFinding(f),
		Reading: "Left: counts, a dot each, over the bar that the fit expects. Right: counted less expected in standard deviations of the counting; the shade holds ±2.",
		Tables:  []table{settingsTable(f)},
	}
	shown := f.Settings
	if len(shown) > mostSettings {
		shown = farthestSettings(f.Settings)
		g.Reading += " Drawn are the " + itoa(mostSettings) + " settings farthest from the fit; the table has all " + itoa(len(f.Settings)) + "."
	}
	for _, z := range []size{middle, narrow} {
		g.Drawings = append(g.Drawings, drawSettings(g, z, shown))
	}
	return g
}

// farthestSettings picks those with the greatest residuals, in file order.
func farthestSettings(all []source.Setting) []source.Setting {
	at := make([]int, len(all))
	for i := range at {
		at[i] = i
	}
	slices.SortStableFunc(at, func(a, b int) int { return cmp.Compare(away(all[b].Residual), away(all[a].Residual)) })
	at = at[:mostSettings]
	slices.Sort(at)
	out := make([]source.Setting, len(at))
	for i, k := range at {
		out[i] = all[k]
	}
	return out
}

func away(residual *float64) float64 {
	if residual == nil {
		return -1
	}
	return math.Abs(*residual)
}

// countsFinding names the setting that fits least.
func countsFinding(f *source.Fit) string {
	worst := 0
	for i := range f.Settings {
		if away(f.Settings[i].Residual) > away(f.Settings[worst].Residual) {
			worst = i
		}
	}
	s := &f.Settings[worst]
	if s.Residual == nil {
		return "No setting has enough expected counts to compare."
	}
	return "Of " + itoa(len(f.Settings)) + " settings the fit misses " + settingName(s) + " most: " + grouped(s.Counts, 6) + " counted, " +
		grouped(s.Expected, 4) + " expected, " + signed(*s.Residual) + " standard deviations."
}

func settingName(s *source.Setting) string { return s.Alice + slash + s.Bob }

func settingsTable(f *source.Fit) table {
	t := table{
		ID: "counts-data", Caption: "Counts of each setting, in file order", Wide: true,
		Head: []string{"Alice / Bob", "Counted", "Accidentals", "Exposure", "Expected", "Residual"},
	}
	for i := range f.Settings {
		s := &f.Settings[i]
		t.add(settingName(s), grouped(s.Counts, 9), grouped(s.Accidentals, 4), digits(s.Exposure, 4), grouped(s.Expected, 5), orNone(s.Residual, signed))
	}
	return t
}

// drawSettings draws a row for each setting.
func drawSettings(g *figure, z size, settings []source.Setting) template.HTML {
	const pitch, head = 17.0, 22.0
	d := &drawing{width: z.Width}
	label := 96.0
	if z == narrow {
		label = 66
	}
	for i := range settings {
		label = max(label, min(z.Width/3, 8+wordWidth(settingName(&settings[i]))))
	}
	residuals := 0.32 * (z.Width - label)
	foot := head + pitch*float64(len(settings))
	high, off := 0.0, 3.0
	for i := range settings {
		s := &settings[i]
		high = max(high, s.Counts, s.Expected)
		off = max(off, away(s.Residual))
	}
	counts := &axes{left: label, right: z.Width - residuals - 26, top: head, bottom: foot}
	counts.xLo, counts.xHi = fromZero(high)
	misses := &axes{left: z.Width - residuals, right: z.Width - 8, top: head, bottom: foot, xLo: -off, xHi: off}
	d.element("rect", "shade", "x", misses.x(-2), "y", head, "width", misses.x(2)-misses.x(-2), "height", foot-head)
	d.line("edge", misses.x(0), head, misses.x(0), foot)
	d.text("soft", fromHere, counts.left, 13, "counts")
	d.text("soft", centred, misses.x(0), 13, "residual, σ")
	for i := range settings {
		s := &settings[i]
		y := head + pitch*(float64(i)+0.5)
		d.text("ink", fromHere, 0, y+4.5, fitting(settingName(s), label-6))
		d.element("rect", "fitted-bar", "x", counts.left, "y", y-5, "width", max(1, counts.x(s.Expected)-counts.left), "height", 10.0)
		d.dot(true, counts.x(s.Counts), y)
		if s.Residual != nil {
			d.element("circle", "dot", "cx", misses.x(*s.Residual), "cy", y, "r", 3.4)
		}
	}
	counts.drawX(d, 62, "", true)
	misses.drawX(d, 36, "", true)
	d.height = foot + 24
	return d.done(g.ID, z.Name, g.Title, g.Finding)
}
