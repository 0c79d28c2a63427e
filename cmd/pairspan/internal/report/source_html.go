package report

import (
	"bytes"
	"fmt"
	"html/template"
	"io"

	"pairspan/scenarios/plan"
	"pairspan/scenarios/source"
)

// SourceHTML writes the report of a measured source as one page that needs no
// other file and no network. Its drawings are made here, so that it needs no
// chart library either. The same result gives the same bytes. The page is built
// in memory first, so that w receives all of it or nothing. It returns an error
// where w fails.
func SourceHTML(w io.Writer, r *source.Result) error {
	var page bytes.Buffer
	page.Grow(128 << 10)
	if err := pageTemplates().ExecuteTemplate(&page, "source-page.html", newSourcePage(r)); err != nil {
		return fmt.Errorf("page of the source: %w", err)
	}
	_, err := w.Write(page.Bytes())
	return err
}

// sourcePage is what the template of a source shows, section by section; what
// the file does not tell is nil or empty and left out.
type sourcePage struct {
	Policy  string
	Style   template.CSS
	Save    template.JS
	Notices []notice // of no library

	Title, About, Sentence string
	Program                plan.Program
	Conversions            string

	State    *stateSection
	Fit      *fitSection
	Scan     *scanSection
	Delays   *delaySection
	Spectral *spectralSection
	Link     *linkSection

	InScenario string
	Light      string  // the caution about light, beside powers
	Doubts     []doubt // all
	Named      []doubt // the first of each name
	Rest       []doubt // those that stand beside no figure
	Cautions   []plan.Caution
	References []plan.Reference
	Inputs     []inputFile
}

func newSourcePage(r *source.Result) *sourcePage {
	g := &sourcePage{
		Title: r.Title, About: "Source of photon pairs, as read from " + formWords(r.Form), Sentence: typeset(r.Sentence), Program: r.Program,
		Style: template.CSS(pageText("style.css") + pageText("source.css")),
		Save:  template.JS(pageText("save.js")),
		State: stateOf(r.State), Fit: fitOf(r.Fit), Scan: scanOf(r.PowerScan), Delays: delaysOf(r.Delays),
		Spectral: spectralOf(r.SpectralMap), Link: linkOf(r.Link),
		Light: cautionAbout(r.Cautions, "light"), Cautions: r.Cautions, References: r.References, Inputs: inputFiles(r.Inputs),
	}
	if r.State != nil {
		g.Conversions = typeset(sentence(r.State.Conversions))
	}
	if r.SpectralMap != nil && g.State != nil {
		g.State.Facts.Caption += ", of the pairs that pass " + bandsMeant(r.SpectralMap)
	}
	if r.InScenario != nil {
		g.InScenario = *r.InScenario
	}
	g.sortDoubts(r)
	for i, f := range g.figures() {
		f.Number = i + 1
	}
	g.Policy = policy(string(g.Style), string(g.Save))
	return g
}

// figures lists the figures in the order of the page.
func (g *sourcePage) figures() []*figure {
	var all []*figure
	add := func(some ...*figure) {
		for _, f := range some {
			if f != nil {
				all = append(all, f)
			}
		}
	}
	if s := g.Spectral; s != nil {
		add(s.Maps...)
		add(s.Frontier)
	}
	if s := g.State; s != nil {
		add(s.Aligned)
	}
	if s := g.Fit; s != nil {
		add(s.Counts)
	}
	if s := g.Scan; s != nil {
		add(s.Curves)
	}
	if s := g.Delays; s != nil {
		add(s.Histogram)
	}
	if s := g.Link; s != nil {
		add(s.Pump)
	}
	return all
}

// With hands a figure to its template; none of this page's needs a library.
func (g *sourcePage) With(f *figure) shown { return shown{f, true} }

// bandsMeant names the pass bands whose pairs a result describes.
func bandsMeant(m *source.SpectralMap) string {
	if m.Best != nil {
		return "the best pass bands"
	}
	return "the whole map"
}

// cautionAbout finds a caution by what it is about.
func cautionAbout(cautions []plan.Caution, what string) string {
	for _, c := range cautions {
		if c.About == what {
			return c.Sentence
		}
	}
	return ""
}

// inputFile is one file as the page shows it.
type inputFile struct {
	Name, SHA256, Text string
	Cut                string // says that Text is a part; "" where it is whole
}

// mostInputBytes is how much of a file's text a page repeats.
const mostInputBytes = 48 << 10

func inputFiles(inputs []plan.Input) []inputFile {
	out := make([]inputFile, len(inputs))
	for i, in := range inputs {
		out[i] = inputFile{Name: in.Name, SHA256: in.SHA256, Text: in.Text}
		if len(in.Text) > mostInputBytes {
			lines := bytes.LastIndexByte([]byte(in.Text[:mostInputBytes]), '\n') + 1
			if lines == 0 {
				lines = len(validPrefix(in.Text, mostInputBytes))
			}
			out[i].Text = in.Text[:lines]
			out[i].Cut = "The first " + grouped(float64(lines), 9) + " of " + grouped(float64(len(in.Text)), 9) + " bytes; the SHA-256 is of them all."
		}
	}
	return out
}
