package sources

import (
	"fmt"
	"io"
	"math/cmplx"
	"strings"
)

var matrixForm = csvForm{
	name:    "a density matrix",
	columns: []string{"row", "col", "re", "im"},
	maxRows: 16,
	maxSize: 64 << 10,
}

const matrixOrder = "rows and columns count from 0 in the order HH, HV, VH, VV"

// ReadDensityMatrix reads a density matrix as it was written, to be judged by
// NewDensityMatrix. The file is CSV with the header row,col,re,im, columns in
// any order; rows and columns run from 0 to 3 in the order HH, HV, VH, VV. It
// holds all sixteen entries, or the ten of the upper triangle, from which the
// others follow. Line ends of any system and a byte-order mark are understood.
//
// What is wrong with the file is a *CSVError; the file may hold up to 64 KiB.
func ReadDensityMatrix(r io.Reader) ([4][4]complex128, error) {
	var raw [4][4]complex128
	var lines [4][4]int // where each entry stands, 0 if nowhere
	table, err := readTable(r, matrixForm)
	if err != nil {
		return raw, err
	}
	for _, cells := range table.rows {
		i, j, x, err := matrixEntry(cells)
		if err != nil {
			return [4][4]complex128{}, err
		}
		if lines[i][j] > 0 {
			return [4][4]complex128{}, &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("row %d, column %d was given already on line %d", i, j, lines[i][j]), Hint: "remove one of the two"}
		}
		raw[i][j], lines[i][j] = x, cells[0].line
	}
	return completed(raw, lines)
}

// matrixEntry returns the entry that one row of the file holds.
func matrixEntry(cells []csvCell) (i, j int, x complex128, err error) {
	if i, err = cells[0].index(3, matrixOrder); err != nil {
		return 0, 0, 0, err
	}
	if j, err = cells[1].index(3, matrixOrder); err != nil {
		return 0, 0, 0, err
	}
	re, err := cells[2].number()
	if err != nil {
		return 0, 0, 0, err
	}
	im, err := cells[3].number()
	return i, j, complex(re, im), err
}

// completed fills the lower triangle from the upper one where none of it was
// given, and returns an error for entries that are missing.
func completed(raw [4][4]complex128, lines [4][4]int) ([4][4]complex128, error) {
	upperOnly := true
	for i := range lines {
		for j := range i {
			upperOnly = upperOnly && lines[i][j] == 0
		}
	}
	var missing []string
	for i := range lines {
		for j := range lines[i] {
			switch {
			case lines[i][j] > 0:
			case upperOnly && j < i:
				raw[i][j] = cmplx.Conj(raw[j][i])
			default:
				missing = append(missing, fmt.Sprintf("%d,%d", i, j))
			}
		}
	}
	if len(missing) > 0 {
		return [4][4]complex128{}, &CSVError{
			Problem: "entries are missing (row,col): " + strings.Join(missing, " "),
			Hint:    "give all sixteen, or the ten of the upper triangle (col not below row)",
		}
	}
	return raw, nil
}
