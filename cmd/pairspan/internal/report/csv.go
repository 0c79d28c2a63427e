package report

import (
	"encoding/csv"
	"io"
	"reflect"
	"strconv"
	"strings"

	"pairspan/scenarios/plan"
)

// CSV writes the curves of all cases: first the case's name, then every
// figure of a point under its JSON path with underscores. A null is empty.
func CSV(w io.Writer, p *plan.Plan) error {
	t := newPointTable(w, "case")
	for i := range p.Cases {
		for j := range p.Cases[i].Curve {
			t.row(&p.Cases[i].Curve[j], guarded(p.Cases[i].Name))
		}
	}
	return t.end()
}

// AgainstCSV is CSV over another entry in place of distance, whose name and
// value stand second and third.
func AgainstCSV(w io.Writer, p *plan.Plan) error {
	t := newPointTable(w, "case", "entry", "value")
	for _, c := range p.Against.Cases {
		for i := range c.Points {
			at := &c.Points[i]
			t.row(&at.Point, guarded(c.Name), p.Against.Entry, strconv.FormatFloat(at.Value, 'g', -1, 64))
		}
	}
	return t.end()
}

// pointTable is a table of points, each behind a few cells of its own.
type pointTable struct {
	csv *csv.Writer
	err error
}

func newPointTable(w io.Writer, first ...string) *pointTable {
	t := &pointTable{csv: csv.NewWriter(w)}
	t.err = t.csv.Write(append(first, paths(reflect.TypeFor[plan.Point](), "")...))
	return t
}

func (t *pointTable) row(p *plan.Point, first ...string) {
	if t.err == nil {
		t.err = t.csv.Write(appendCells(first, reflect.ValueOf(*p)))
	}
}

func (t *pointTable) end() error {
	t.csv.Flush()
	if t.err != nil {
		return t.err
	}
	return t.csv.Error()
}

// paths lists the JSON paths of a struct's figures, in order.
func paths(t reflect.Type, prefix string) []string {
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	if t.Kind() != reflect.Struct {
		return []string{prefix}
	}
	var found []string
	for i := range t.NumField() {
		name, _, _ := strings.Cut(t.Field(i).Tag.Get("json"), ",")
		if prefix != "" {
			name = prefix + "_" + name
		}
		found = append(found, paths(t.Field(i).Type, name)...)
	}
	return found
}

// appendCells adds the figures of a value in the order of paths.
func appendCells(row []string, v reflect.Value) []string {
	t := v.Type()
	if t.Kind() == reflect.Pointer {
		if v.IsNil() {
			return append(row, make([]string, len(paths(t, "")))...)
		}
		v = v.Elem()
	}
	switch v.Kind() {
	case reflect.Struct:
		for i := range v.NumField() {
			row = appendCells(row, v.Field(i))
		}
		return row
	case reflect.Int:
		return append(row, strconv.FormatInt(v.Int(), 10))
	}
	return append(row, strconv.FormatFloat(v.Float(), 'g', -1, 64))
}

// guarded keeps a spreadsheet from taking a name for a formula.
func guarded(s string) string {
	if s != "" && strings.ContainsRune("=+-@\t\r", rune(s[0])) {
		return "'" + s
	}
	return s
}
