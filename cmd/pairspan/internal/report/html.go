package report

import (
	"bytes"
	"embed"
	"fmt"
	"html/template"
	"io"
	"sync"

	"pairspan/scenarios/plan"
)

//go:embed page
var pageFiles embed.FS

// pageTemplates parses the pieces of the page once; a fault in them is a fault
// of the program, which the tests find.
var pageTemplates = sync.OnceValue(func() *template.Template {
	return template.Must(template.New("report").Funcs(template.FuncMap{
		"lower": lowerFirst,
		"inc":   func(i int) int { return i + 1 },
		"nbsp":  func() string { return nbsp },
	}).ParseFS(pageFiles, "page/*.html"))
})

// HTML writes the report of a plan as one page that needs no other file and
// no network: style, scripts and the chart library stand in it. The same plan
// gives the same bytes. The page is built in memory first, so that w receives
// all of it or nothing. It returns an error where the plan has no case or w fails.
func HTML(w io.Writer, p *plan.Plan) error {
	return writePage(w, p, charting())
}

func writePage(w io.Writer, p *plan.Plan, lib library) error {
	if len(p.Cases) == 0 {
		return fmt.Errorf("the plan holds no case, so there is nothing to report")
	}
	var page bytes.Buffer
	page.Grow(128<<10 + len(lib.Script))
	if err := pageTemplates().ExecuteTemplate(&page, "page.html", newPage(p, lib)); err != nil {
		return fmt.Errorf("report page: %w", err)
	}
	_, err := w.Write(page.Bytes())
	return err
}

// pageText reads a file of the page's own.
func pageText(name string) string {
	text, err := pageFiles.ReadFile("page/" + name)
	if err != nil {
		panic(err) // embedded at build time
	}
	return string(text)
}
