package sources

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// CSVError is what is wrong with a laboratory file, and where.
type CSVError struct {
	Line, Column int    // from 1; 0 where the file or the line as a whole is meant
	Value        string // the value seen, shortened; empty where there is none
	Problem      string // what is wrong, the value included
	Hint         string // what to do next; may be empty
}

// Error returns place, problem and hint on one line.
func (e *CSVError) Error() string {
	text := e.Problem
	switch {
	case e.Line > 0 && e.Column > 0:
		text = fmt.Sprintf("line %d, column %d: %s", e.Line, e.Column, text)
	case e.Line > 0:
		text = fmt.Sprintf("line %d: %s", e.Line, text)
	}
	if e.Hint != "" {
		text += "; " + e.Hint
	}
	return text
}

// csvForm is one form of laboratory file.
type csvForm struct {
	name    string   // what the file holds, with its article
	columns []string // the header, which may stand in any order
	about   string   // one clause on the values
	maxRows int
	maxSize int // bytes
}

// header says how the form's header reads.
func (f csvForm) header() string {
	return fmt.Sprintf("%s has the header %s, in any order", f.name, strings.Join(f.columns, ","))
}

// csvCell is one value and where it stands.
type csvCell struct {
	text         string
	line, column int
}

// fail returns the error that this cell has the problem: the value, then what
// is said of it.
func (c csvCell) fail(said, hint string) error {
	value := shown(c.text)
	return &CSVError{Line: c.line, Column: c.column, Value: value, Problem: value + " " + said, Hint: hint}
}

// readTable returns the rows of a file of the given form, the cells of each in
// the order of the form's columns, without blanks around them. Errors are of
// type *CSVError unless r itself fails.
func readTable(r io.Reader, form csvForm) ([][]csvCell, error) {
	text, err := readText(r, form)
	if err != nil {
		return nil, err
	}
	reader := csv.NewReader(bytes.NewReader(text))
	reader.FieldsPerRecord = -1
	reader.TrimLeadingSpace = true
	header, err := readRow(reader)
	if errors.Is(err, io.EOF) {
		return nil, &CSVError{Problem: "the file is empty", Hint: form.header()}
	}
	if err != nil {
		return nil, err
	}
	order, err := form.place(header)
	if err != nil {
		return nil, err
	}
	var rows [][]csvCell
	for {
		cells, err := readRow(reader)
		if errors.Is(err, io.EOF) {
			return rows, nil
		}
		if err != nil {
			return nil, err
		}
		if len(cells) != len(order) {
			return nil, ragged(cells, len(order))
		}
		if len(rows) == form.maxRows {
			return nil, &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("too many rows: %s has at most %d below the header", form.name, form.maxRows), Hint: "remove the others"}
		}
		row := make([]csvCell, len(order))
		for i, at := range order {
			row[i] = cells[at]
		}
		rows = append(rows, row)
	}
}

// readText returns the whole file with plain line ends and without a byte-order
// mark.
func readText(r io.Reader, form csvForm) ([]byte, error) {
	text, err := io.ReadAll(io.LimitReader(r, int64(form.maxSize)+1))
	if err != nil {
		return nil, fmt.Errorf("the file cannot be read: %w", err)
	}
	if len(text) > form.maxSize {
		return nil, &CSVError{Problem: fmt.Sprintf("the file is larger than %d bytes", form.maxSize),
			Hint: fmt.Sprintf("%s has at most %d rows; is this the right file?", form.name, form.maxRows)}
	}
	text = bytes.TrimPrefix(text, []byte("\ufeff"))
	if !utf8.Valid(text) || bytes.IndexByte(text, 0) >= 0 {
		return nil, &CSVError{Problem: "the file is not plain text", Hint: "save it as CSV in UTF-8"}
	}
	text = bytes.ReplaceAll(text, []byte("\r\n"), []byte("\n"))
	return bytes.ReplaceAll(text, []byte("\r"), []byte("\n")), nil
}

// readRow returns the next row that is not blank.
func readRow(reader *csv.Reader) ([]csvCell, error) {
	for {
		fields, err := reader.Read()
		var bad *csv.ParseError
		if errors.As(err, &bad) {
			return nil, &CSVError{Line: bad.Line, Column: bad.Column, Problem: "a quotation mark stands where none belongs", Hint: "write names and numbers without quotation marks"}
		}
		if err != nil {
			return nil, err
		}
		cells := make([]csvCell, len(fields))
		for i, field := range fields {
			line, column := reader.FieldPos(i)
			cells[i] = csvCell{strings.TrimSpace(field), line, column}
		}
		if len(cells) > 1 || cells[0].text != "" {
			return cells, nil
		}
	}
}

// place returns for each column of the form where it stands in the header.
func (f csvForm) place(header []csvCell) ([]int, error) {
	if len(header) == 1 {
		for _, separator := range []struct{ mark, name string }{{";", "semicolons"}, {"\t", "tabs"}} {
			if strings.Contains(header[0].text, separator.mark) {
				return nil, &CSVError{Line: header[0].line, Problem: "columns are separated by " + separator.name, Hint: "separate them by commas, and write decimal points"}
			}
		}
	}
	order := make([]int, len(f.columns))
	for i := range order {
		order[i] = -1
	}
	for at, cell := range header {
		i := slices.Index(f.columns, cell.text)
		switch {
		case i < 0 && isNumber(cell.text):
			return nil, cell.fail("stands where the header belongs", f.header())
		case i < 0:
			return nil, cell.fail("is not a known column", f.header())
		case order[i] >= 0:
			return nil, cell.fail("stands twice in the header", "remove one of the two columns")
		}
		order[i] = at
	}
	if i := slices.Index(order, -1); i >= 0 {
		return nil, &CSVError{Line: header[0].line, Problem: "the column " + f.columns[i] + " is missing", Hint: f.header()}
	}
	return order, nil
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

// shown returns text in a form that can stand in a message: not too long, on
// one line, visible.
func shown(text string) string {
	const most = 40
	if text == "" {
		return "an empty value"
	}
	runes := []rune(text)
	cut := len(runes) > most
	runes = runes[:min(len(runes), most)]
	for i, r := range runes {
		if !unicode.IsPrint(r) {
			runes[i] = unicode.ReplacementChar
		}
	}
	if cut {
		return string(runes) + "..."
	}
	return string(runes)
}
