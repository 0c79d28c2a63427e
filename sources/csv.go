package sources

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
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

// csvCell is one value and where it stands. Column is 0 where the file does not
// have the cell's column at all, which only optional columns may lack.
type csvCell struct {
	text         string
	line, column int
}

// absent tells whether the file does not have the cell's column.
func (c csvCell) absent() bool { return c.column == 0 }

// or returns the cell, with the given text where its column is absent.
func (c csvCell) or(text string) csvCell {
	if c.absent() {
		c.text = text
	}
	return c
}

// fail returns the error that this cell has the problem: the value, then what
// is said of it.
func (c csvCell) fail(said, hint string) error {
	value := shown(c.text)
	return &CSVError{Line: c.line, Column: c.column, Value: value, Problem: value + " " + said, Hint: hint}
}

// readText returns the whole file with plain line ends and without a byte-order
// mark.
func readText(r io.Reader, form csvForm) ([]byte, error) {
	text, err := io.ReadAll(io.LimitReader(r, int64(form.maxSize)+1))
	if err != nil {
		return nil, fmt.Errorf("the file cannot be read: %w", err)
	}
	if len(text) > form.maxSize {
		return nil, &CSVError{
			Problem: fmt.Sprintf("the file is larger than %d bytes", form.maxSize),
			Hint:    fmt.Sprintf("%s has at most %d rows; is this the right file?", form.name, form.maxRows),
		}
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
