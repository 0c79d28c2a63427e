package report

import (
	"encoding/json"
	"io"

	"pairspan/scenarios/plan"
)

// JSON writes the plan as it is, indented.
func JSON(w io.Writer, p *plan.Plan) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(p)
}
