package report

import (
	"encoding/json"
	"io"

	"pairspan/scenarios/plan"
)

// JSON writes the plan as it is, indented.
func JSON(w io.Writer, p *plan.Plan) error { return writeJSON(w, p) }

func writeJSON(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(v)
}
