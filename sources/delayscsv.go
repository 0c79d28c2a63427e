package sources

import (
	"cmp"
	"fmt"
	"io"
	"slices"
)

var delayForm = csvForm{
	name:    "a delay histogram",
	columns: []string{"delay_ps", "counts"},
	maxRows: delayMostBins,
	maxSize: 8 << 20,
}

// ReadDelayHistogram reads a histogram of the delay between Alice's and Bob's
// counts. The file is CSV with the header
//
//	delay_ps,counts
//
// columns in any order, one row for each bin in any order: the middle of the
// bin, and whole counts, 0 or more, as they were counted. Bins are of equal
// width; those with 0 counts belong in the file too. Delays may be rounded by up
// to a quarter of a bin. Line ends of any system and a byte-order mark are
// understood.
//
// What is wrong with the file is a *CSVError; the file may hold up to 100,000
// rows and 8 MiB.
func ReadDelayHistogram(r io.Reader) (DelayHistogram, error) {
	table, err := readTable(r, delayForm)
	if err != nil {
		return DelayHistogram{}, err
	}
	bins := make([]delayBin, len(table.rows))
	for i, cells := range table.rows {
		if bins[i], err = readDelayBin(cells); err != nil {
			return DelayHistogram{}, err
		}
	}
	slices.SortStableFunc(bins, func(a, b delayBin) int { return cmp.Compare(a.delay, b.delay) })
	var h DelayHistogram
	for i, b := range bins {
		if i > 0 && b.delay == bins[i-1].delay {
			return DelayHistogram{}, b.at.fail(fmt.Sprintf("was given already on line %d", bins[i-1].at.line), "remove one of the two")
		}
		h.DelayPs, h.Counts = append(h.DelayPs, b.delay), append(h.Counts, b.counts)
	}
	if err := h.check(); err != nil {
		return DelayHistogram{}, &CSVError{Problem: err.Error()}
	}
	return h, nil
}

// delayBin is one row of the file.
type delayBin struct {
	delay, counts float64
	at            csvCell // the delay's
}

func readDelayBin(cells []csvCell) (b delayBin, err error) {
	b.at = cells[0]
	if b.delay, err = cells[0].between(-delayMostPs, delayMostPs, "delays are in ps"); err != nil {
		return delayBin{}, err
	}
	b.counts, err = cells[1].count()
	return b, err
}
