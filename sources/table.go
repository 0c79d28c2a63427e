package sources

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
)

// csvForm is one form of laboratory file: CSV with a header row that names the
// columns, in any order.
type csvForm struct {
	name     string   // what the file holds, with its article
	columns  []string // those that the header must have
	optional []string // those that it may have
	maxRows  int
	maxSize  int // bytes
}

// csvTable is the content of a laboratory file.
type csvTable struct {
	form int         // which of the forms asked for the header has
	rows [][]csvCell // in each, the form's columns and then its optional ones, in the form's order
}

// readTable reads a file that has one of the given forms, told apart by the
// header. Name and bounds are those of the first form. Cells have no blanks
// around them; one whose optional column is not in the file is absent. Errors
// are of type *CSVError unless r itself fails.
func readTable(r io.Reader, forms ...csvForm) (csvTable, error) {
	text, err := readText(r, forms[0])
	if err != nil {
		return csvTable{}, err
	}
	reader := csv.NewReader(bytes.NewReader(text))
	reader.FieldsPerRecord = -1
	reader.TrimLeadingSpace = true
	header, err := readRow(reader)
	if errors.Is(err, io.EOF) {
		return csvTable{}, &CSVError{Problem: "the file is empty", Hint: headersOf(forms)}
	}
	if err != nil {
		return csvTable{}, err
	}
	form, places, err := recognise(header, forms)
	if err != nil {
		return csvTable{}, err
	}
	table := csvTable{form: form}
	for {
		cells, err := readRow(reader)
		if errors.Is(err, io.EOF) {
			return table, nil
		}
		if err != nil {
			return csvTable{}, err
		}
		if len(cells) != len(header) {
			return csvTable{}, ragged(cells, len(header))
		}
		if len(table.rows) == forms[0].maxRows {
			return csvTable{}, &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("too many rows: %s has at most %d below the header", forms[0].name, forms[0].maxRows), Hint: "remove the others"}
		}
		table.rows = append(table.rows, inOrder(cells, places))
	}
}

// inOrder returns the cells of a row in the order of the form's columns.
func inOrder(cells []csvCell, places []int) []csvCell {
	row := make([]csvCell, len(places))
	for i, at := range places {
		row[i] = csvCell{line: cells[0].line}
		if at >= 0 {
			row[i] = cells[at]
		}
	}
	return row
}

// headersOf says how the header of a file of one of the forms reads.
func headersOf(forms []csvForm) string {
	var headers []string
	order := "in any order"
	for _, f := range forms {
		header := strings.Join(f.columns, ",")
		for _, column := range f.optional {
			header += "[," + column + "]"
			order = "in any order, those in brackets where wanted"
		}
		headers = append(headers, header)
	}
	return fmt.Sprintf("%s has the header %s, %s", forms[0].name, strings.Join(headers, " or "), order)
}

// all returns the form's columns, the optional ones last.
func (f csvForm) all() []string { return slices.Concat(f.columns, f.optional) }

// recognise returns which form a header has, and for each of the form's columns
// where it stands in the header, -1 where an optional one does not.
func recognise(header []csvCell, forms []csvForm) (form int, places []int, err error) {
	if err := wrongSeparator(header); err != nil {
		return 0, nil, err
	}
	form = likeliest(header, forms)
	columns := forms[form].all()
	places = slices.Repeat([]int{-1}, len(columns))
	for at, cell := range header {
		i := slices.Index(columns, cell.text)
		if i < 0 {
			return 0, nil, unknownColumn(cell, columns, forms)
		}
		if places[i] >= 0 {
			return 0, nil, cell.fail("stands twice in the header", "remove one of the two columns")
		}
		places[i] = at
	}
	for i, column := range forms[form].columns {
		if places[i] < 0 {
			return 0, nil, &CSVError{Line: header[0].line, Problem: "the column " + column + " is missing", Hint: headersOf(forms)}
		}
	}
	return form, places, nil
}

// likeliest returns the form that the header is or is meant to be: the one with
// most of the header's columns, and of several the one that lacks least.
func likeliest(header []csvCell, forms []csvForm) int {
	best, mostKnown, leastMissing := 0, -1, 0
	for n, form := range forms {
		known, missing := 0, len(form.columns)
		for _, cell := range header {
			if slices.Contains(form.columns, cell.text) {
				known, missing = known+1, missing-1
			} else if slices.Contains(form.optional, cell.text) {
				known++
			}
		}
		if known > mostKnown || known == mostKnown && missing < leastMissing {
			best, mostKnown, leastMissing = n, known, missing
		}
	}
	return best
}

// unknownColumn returns the error of a header's cell that is none of the form's
// columns.
func unknownColumn(cell csvCell, columns []string, forms []csvForm) error {
	if isNumber(cell.text) {
		return cell.fail("stands where the header belongs", headersOf(forms))
	}
	for _, column := range columns {
		if strings.EqualFold(column, cell.text) {
			return cell.fail("is not a known column", "write "+column)
		}
	}
	for _, other := range forms {
		if slices.Contains(other.all(), cell.text) {
			return cell.fail("belongs to another form of header than the columns beside it", headersOf(forms))
		}
	}
	return cell.fail("is not a known column", headersOf(forms))
}

// wrongSeparator returns an error for a header that is one cell because
// something else than commas stands between the columns.
func wrongSeparator(header []csvCell) error {
	if len(header) != 1 {
		return nil
	}
	for _, separator := range []struct{ mark, name string }{{";", "semicolons"}, {"\t", "tabs"}} {
		if strings.Contains(header[0].text, separator.mark) {
			return &CSVError{Line: header[0].line, Problem: "columns are separated by " + separator.name, Hint: "separate them by commas, and write decimal points"}
		}
	}
	return nil
}

// ragged returns the error of a row that has not as many values as the header.
func ragged(cells []csvCell, want int) error {
	e := &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("the row has %d values, and the header has %d", len(cells), want)}
	switch {
	case len(cells) == 1 && strings.Contains(cells[0].text, ";"):
		e.Hint = "separate them by commas, not semicolons, and write decimal points"
	case len(cells) > want:
		e.Hint = "write decimal points, not commas, and no comma at the end"
	default:
		e.Hint = "give every value; write 0 where it is zero"
	}
	return e
}
