package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"strconv"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// TestCSVIsTheJSON: every cell of the table is the figure at its path in the
// plan's JSON, a null an empty cell.
func TestCSVIsTheJSON(t *testing.T) {
	for name, p := range samplePlans() {
		rows := readCSV(t, p)
		var whole struct {
			Cases []struct {
				Name  string
				Curve []any
			}
		}
		text, err := json.Marshal(p)
		if err != nil {
			t.Fatal(err)
		}
		if err := json.Unmarshal(text, &whole); err != nil {
			t.Fatal(err)
		}
		i := 1
		for _, c := range whole.Cases {
			for _, point := range c.Curve {
				flat := map[string]string{}
				flatten(point, "", flat)
				if rows[i][0] != guarded(c.Name) {
					t.Fatalf("%s: row %d is of %q, want %q", name, i, rows[i][0], c.Name)
				}
				for j, column := range rows[0][1:] {
					if got, want := rows[i][j+1], flat[column]; got != want {
						t.Errorf("%s: row %d, %s: %q, want %q", name, i, column, got, want)
					}
				}
				i++
			}
		}
		if i != len(rows) {
			t.Errorf("%s: %d rows, want %d", name, len(rows), i)
		}
	}
}

func readCSV(t *testing.T, p *plan.Plan) [][]string {
	t.Helper()
	var b bytes.Buffer
	if err := CSV(&b, p); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(&b).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// flatten lists the figures below a JSON value by path with underscores.
func flatten(v any, path string, into map[string]string) {
	switch v := v.(type) {
	case map[string]any:
		for key, below := range v {
			flatten(below, strings.TrimPrefix(path+"_"+key, "_"), into)
		}
	case float64:
		into[path] = strconv.FormatFloat(v, 'g', -1, 64)
	}
}

// TestCSVGuardsFormulas: a spreadsheet must not run a name.
func TestCSVGuardsFormulas(t *testing.T) {
	for _, name := range []string{"=1+1", "+1", "-1", "@x", "\tx"} {
		if got := guarded(name); got != "'"+name {
			t.Errorf("%q becomes %q", name, got)
		}
	}
	if got := guarded("as filed"); got != "as filed" {
		t.Errorf("a plain name becomes %q", got)
	}
}
