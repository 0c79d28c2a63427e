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
	Library template.JS
	Boot    template.JS
	Notices []notice
	Charts  bool

	Title   string
	Program plan.Program

	Sentence, RestsOn, InTheWay string

	Facts      facts
	Warnings   []warning
	Figures    []*figure
	Compared   *table // nil where nothing is compared
	Parts      *table // nil where there is no rate to raise
	Installed  table
	ErrorParts *table
	Losses     []table
	Defaults   *table
	Deviations *table
	Origins    *table
	Cautions   []plan.Caution
	References []plan.Reference
	Inputs     []plan.Input
}

// newPage gathers the sections of a plan with at least one case.
func newPage(p *plan.Plan, lib library) *page {
	filed := &p.Cases[0]
	g := &page{
		Title: p.Title, Program: p.Program, Sentence: filed.Answer.Sentence,
		RestsOn:    sentence(strings.TrimPrefix(filed.Answer.RestsOn, "Rests on ")), // under a heading that says so
		InTheWay:   sentence(filed.Answer.InTheWay),
		Style:      template.CSS(pageText("style.css")),
		Facts:      answerFacts(filed),
		Warnings:   warnings(p),
		Figures:    []*figure{rateFigure(p), qberFigure(p)},
		Compared:   comparedTable(p),
		Parts:      partsTable(filed),
		Installed:  installedTable(filed),
		ErrorParts: errorPartsTable(filed),
		Losses:     lossTables(filed),
		Defaults:   defaultsTable(p),
		Deviations: deviationsTable(p),
		Origins:    originsTable(p),
		Cautions:   p.Cautions,
		References: p.References,
		Inputs:     p.Inputs,
	}
	for i, f := range g.Figures {
		f.number(i+1, lib)
	}
	g.addCharts(lib)
	return g
}

// addCharts puts in the library and the boot script where the library is there
// and a figure needs it, and the policy that allows exactly these bytes.
func (g *page) addCharts(lib library) {
	g.Charts = lib.Script != ""
	needed := false
	for _, f := range g.Figures {
		needed = needed || f.Option != ""
	}
	if !needed {
		g.Policy = policy(string(g.Style))
		return
	}
	g.Library, g.Boot, g.Notices = template.JS(lib.Script), template.JS(pageText("boot.js")), lib.Notices
	g.Policy = policy(string(g.Style), string(g.Library), string(g.Boot))
}
