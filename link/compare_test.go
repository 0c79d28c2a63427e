package link

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"
)

// near reports whether got is want within a relative tolerance.
func near(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance*math.Abs(want)
}

// derivedRow is one row of testdata/derived/timing.csv: a quantity, its one or
// two arguments, and its value worked out with high precision by an
// independent program (see the README there).
type derivedRow struct{ x, y, value float64 }

func derived(t *testing.T, quantity string) []derivedRow {
	t.Helper()
	f, err := os.Open("../testdata/derived/timing.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	number := func(s string) float64 {
		if s == "" {
			return 0 // a function of one argument
		}
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	var rows []derivedRow
	for _, line := range lines[1:] {
		if line[0] == quantity {
			rows = append(rows, derivedRow{number(line[1]), number(line[2]), number(line[3])})
		}
	}
	if len(rows) < 7 {
		t.Fatalf("%s: only %d rows", quantity, len(rows))
	}
	return rows
}
