package sources

import (
	"fmt"
	"io"
	"math"
)

// What a spectral map may hold.
const (
	spectralMostBins = 100 // of each arm
	spectralMostRows = 16 * spectralMostBins * spectralMostBins
	spectralMostSize = 16 << 20
	spectralLeastNm  = 100
	spectralMostNm   = 10_000
)

var spectralForms = []csvForm{{
	name:    "a spectral map",
	columns: []string{"alice_nm", "bob_nm", "share", "row", "col", "re", "im"},
	maxRows: spectralMostRows,
	maxSize: spectralMostSize,
}, {
	columns: []string{"alice_nm", "bob_nm", "share", "tangle"},
}}

// ReadSpectralMap reads a spectral map. The file is CSV with one of the headers
//
//	alice_nm,bob_nm,share,row,col,re,im
//	alice_nm,bob_nm,share,tangle
//
// columns in any order. alice_nm and bob_nm are the middle of a bin of Alice's
// and of one of Bob's photon, written alike wherever the bin comes up, and share
// is how many of all pairs have their photons in these two bins. All pairs are
// those that the stated pair rate counts, that is of the whole map, so that the
// shares add up to 1; a sum within 1 % of 1 is divided out, and told. Pairs of
// bins that are not in the file have no pairs.
//
// With matrices, each row holds one entry of the bins' density matrix: all
// sixteen, or the ten of the upper triangle, as in ReadDensityMatrix, with the
// same share in each row. Matrices are mended as NewDensityMatrix does. Where
// the share is 0 the matrix has no weight and need not be whole.
//
// A bin reaches midway to its neighbours, the outermost as far out as in.
//
// What is wrong with the file is a *CSVError; it may hold up to 100 bins of each
// arm and 16 MiB.
func ReadSpectralMap(r io.Reader) (*SpectralMap, error) {
	table, err := readTable(r, spectralForms...)
	if err != nil {
		return nil, err
	}
	reader := spectralReader{tangles: table.form == 1, at: map[[2]float64]int{}}
	for _, cells := range table.rows {
		if err := reader.row(cells); err != nil {
			return nil, err
		}
	}
	return reader.finish()
}

// spectralReader collects the rows of a file by bins.
type spectralReader struct {
	tangles bool
	bins    []spectralRows
	at      map[[2]float64]int // place in bins, by the centres
}

// spectralRows is what the file says of one bin.
type spectralRows struct {
	nm     [2]float64
	share  float64
	at     [2]csvCell // centres, on the bin's first row
	raw    [4][4]complex128
	lines  [4][4]int // where each entry of the matrix stands, 0 if nowhere
	tangle float64
}

func (r *spectralReader) row(cells []csvCell) error {
	bin := spectralRows{at: [2]csvCell{cells[0], cells[1]}}
	for arm := range bin.nm {
		nm, err := cells[arm].between(spectralLeastNm, spectralMostNm, "wavelengths are in nm")
		if err != nil {
			return err
		}
		bin.nm[arm] = nm
	}
	share, err := cells[2].notNegative("a share of the pairs is 0 or more")
	if err != nil {
		return err
	}
	bin.share = share
	place, known := r.at[bin.nm]
	if !known {
		place = len(r.bins)
		r.at[bin.nm] = place
		r.bins = append(r.bins, bin)
	}
	if r.tangles {
		return r.bins[place].setTangle(cells, known)
	}
	return r.bins[place].setEntry(cells, share)
}

func (b *spectralRows) setTangle(cells []csvCell, known bool) (err error) {
	if known {
		return &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("%s was given already on line %d", b.name(), b.at[0].line), Hint: "remove one of the two"}
	}
	b.tangle, err = cells[3].between(0, 1, "a tangle is the concurrence squared, 0 to 1")
	return err
}

func (b *spectralRows) setEntry(cells []csvCell, share float64) error {
	if share != b.share {
		return cells[2].fail(fmt.Sprintf("is not the share that %s has on line %d", b.name(), b.at[0].line), "repeat the bin's share in each of its rows")
	}
	i, j, x, err := matrixEntry(cells[3:])
	if err != nil {
		return err
	}
	if b.lines[i][j] > 0 {
		return &CSVError{Line: cells[0].line, Problem: fmt.Sprintf("row %d, column %d of %s was given already on line %d", i, j, b.name(), b.lines[i][j]), Hint: "remove one of the two"}
	}
	b.raw[i][j], b.lines[i][j] = x, cells[0].line
	return nil
}

// name says which bin it is.
func (b *spectralRows) name() string {
	return fmt.Sprintf("the bin of Alice's %s nm and Bob's %s nm", shown(b.at[0].text), shown(b.at[1].text))
}

// bin returns the bin with its state, and how the matrix was mended.
func (b *spectralRows) bin(tangles bool) (SpectralBin, Mending, error) {
	bin := SpectralBin{Share: b.share, Tangle: math.NaN()}
	switch {
	case b.share == 0:
		return bin, Mending{}, nil
	case tangles:
		bin.Tangle = b.tangle
		bin.Rho = Werner((1 + 2*math.Sqrt(b.tangle)) / 3)
		return bin, Mending{}, nil
	}
	raw, err := completed(b.raw, b.lines)
	if err != nil {
		e := err.(*CSVError)
		return bin, Mending{}, &CSVError{Line: b.at[0].line, Problem: b.name() + ": " + e.Problem, Hint: e.Hint}
	}
	rho, mending, err := NewDensityMatrix(raw)
	if err != nil {
		return bin, mending, &CSVError{Line: b.at[0].line, Problem: b.name() + ": " + err.Error()}
	}
	bin.Rho, bin.Tangle = rho, rho.Tangle()
	return bin, mending, nil
}
