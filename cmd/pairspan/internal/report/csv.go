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
	c := csv.NewWriter(w)
	header := append([]string{"case"}, paths(reflect.TypeFor[plan.Point](), "")...)
	if err := c.Write(header); err != nil {
		return err
	}
	for i := range p.Cases {
		for j := range p.Cases[i].Curve {
			row := append(make([]string, 0, len(header)), guarded(p.Cases[i].Name))
			row = appendCells(row, reflect.ValueOf(p.Cases[i].Curve[j]))
			if err := c.Write(row); err != nil {
				return err
			}
		}
	}
	c.Flush()
	return c.Error()
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
