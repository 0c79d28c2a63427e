package report

import (
	"html/template"
	"strings"

	"pairspan/scenarios/plan"
)

// page is what the template shows, section by section. All figures are text by
// now; the template decides nothing but what stands where.
type page struct {
	Policy  string
	Style   template.CSS
	Save    template.JS
	Library template.JS
	Boot    template.JS
	Notices []notice
	Charts  bool // the library was compiled in

	Title    string
	Program  plan.Program
	Withheld string // what was left out of this copy; "" for a whole report

	Sentence, RestsOn, FirstInTheWay string

	Steps      []step
	StepsOf    string
	Grounds    []ground
	GroundRule string
	Doubts     []doubt
	Beside     map[string][]doubt

	Ruler, Loss, Errors, Rate, QBER *figure

	Compared   *table // nil where nothing is compared
	Parts      *table // nil where there is no rate to raise
	Installed  table
	Deciding   *deciding
	Scenario   []table
	Cautions   []plan.Caution
	References []plan.Reference
	Inputs     []plan.Input
}

// newPage gathers the sections of a plan with at least one case.
func newPage(p *plan.Plan, lib library) *page {
	filed := &p.Cases[0]
	g := &page{
		Title: p.Title, Program: p.Program, Withheld: listOf(p.Withheld, "and"),
		Sentence:      filed.Answer.Sentence,
		RestsOn:       sentence(strings.TrimPrefix(filed.Answer.RestsOn, "Rests on ")), // under a heading that says so
		FirstInTheWay: firstInTheWay(&filed.Answer),
		Style:         template.CSS(pageText("style.css")),
		Save:          template.JS(pageText("save.js")),
		Steps:         steps(filed),
		Grounds:       grounds(p),
		GroundRule:    groundRule,
		Ruler:         rulerFigure(p),
		Loss:          lossFigure(p),
		Errors:        errorsFigure(p),
		Rate:          rateFigure(p),
		QBER:          qberFigure(p),
		Compared:      comparedTable(p),
		Parts:         partsTable(filed),
		Installed:     installedTable(filed),
		Deciding:      newDeciding(p),
		Scenario:      scenarioTables(p),
		Cautions:      p.Cautions,
		References:    p.References,
		Inputs:        p.Inputs,
	}
	g.Doubts, g.Beside = doubts(p)
	for i, f := range g.figures() {
		f.number(i+1, lib)
	}
	g.addScripts(lib)
	return g
}

// figures lists the figures in the order of the page.
func (g *page) figures() []*figure {
	return append([]*figure{g.Ruler, g.Loss, g.Errors, g.Rate, g.QBER}, g.Deciding.figures()...)
}

// With hands a figure to its template, beside what the page knows.
func (g *page) With(f *figure) shown { return shown{f, g.Charts} }

// shown is a figure on a page with or without the chart library.
type shown struct {
	*figure
	Charts bool
}

// addScripts puts in the script that saves, the library and the script of the
// charts where the library is there and a figure needs it, and the policy that
// allows exactly these bytes.
func (g *page) addScripts(lib library) {
	g.Charts = lib.Script != ""
	needed := false
	for _, f := range g.figures() {
		needed = needed || f.Option != ""
	}
	if !needed {
		g.Policy = policy(string(g.Style), string(g.Save))
		return
	}
	g.Library, g.Boot, g.Notices = template.JS(lib.Script), template.JS(pageText("charts.js")), lib.Notices
	g.Policy = policy(string(g.Style), string(g.Library), string(g.Boot), string(g.Save))
}
