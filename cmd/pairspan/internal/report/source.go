package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"strconv"

	"pairspan/scenarios/source"
)

// SourceJSON writes what a source is as it is, indented.
func SourceJSON(w io.Writer, r *source.Result) error { return writeJSON(w, r) }

// SourceCSV writes the density matrix of a source as a laboratory file, every
// digit of it. It returns an error where the matrix is not known (see HasMatrix).
func SourceCSV(w io.Writer, r *source.Result) error {
	if !r.HasMatrix() {
		return fmt.Errorf("%s tells no density matrix", r.Title)
	}
	c := csv.NewWriter(w)
	full := func(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
	_ = c.Write([]string{"row", "col", "re", "im"}) // Error tells
	for i, row := range r.State.DensityMatrix {
		for j, x := range row {
			_ = c.Write([]string{strconv.Itoa(i), strconv.Itoa(j), full(x.Re), full(x.Im)})
		}
	}
	c.Flush()
	return c.Error()
}

// SourcePage is the name of a source's page in its folder.
const SourcePage = "source.html"

// sourceFiles are what a folder about a source holds, the one to open last.
var sourceFiles = []file[*source.Result]{{"source.json", SourceJSON}, {SourcePage, SourceHTML}}

// SourceFolder writes what a source is into dir, as Folder does a plan, and
// returns the name of the file to open.
func SourceFolder(dir string, r *source.Result) (toOpen string, err error) {
	return sourceFiles[len(sourceFiles)-1].name, writeFolder(dir, sourceFiles, r)
}
