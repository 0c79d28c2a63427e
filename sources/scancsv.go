package sources

import "io"

var scanForm = csvForm{
	name:     "a power scan",
	columns:  []string{"power_mw", "singles_alice_hz", "singles_bob_hz", "coincidences_hz"},
	optional: []string{"accidentals_hz", "seconds", "window_ps"},
	maxRows:  10_000,
	maxSize:  2 << 20,
}

// ReadPowerScan reads a power scan. The file is CSV with the header
//
//	power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz[,accidentals_hz][,seconds][,window_ps]
//
// columns in any order, those in brackets optional. Powers and rates are 0 or
// more, seconds and windows above 0; a power may come several times. Line ends
// of any system and a byte-order mark are understood.
//
// What is wrong with the file is a *CSVError; the file may hold up to 10,000
// rows and 2 MiB. Whether the points are enough, PowerScan.Fit says.
func ReadPowerScan(r io.Reader) (PowerScan, error) {
	table, err := readTable(r, scanForm)
	if err != nil {
		return PowerScan{}, err
	}
	if len(table.rows) == 0 {
		return PowerScan{}, &CSVError{Problem: "the power scan has no point", Hint: "give one row for each power"}
	}
	first := table.rows[0]
	scan := PowerScan{HasAccidentals: !first[4].absent(), HasSeconds: !first[5].absent(), HasWindow: !first[6].absent()}
	for _, cells := range table.rows {
		p, err := scanPoint(cells)
		if err != nil {
			return PowerScan{}, err
		}
		scan.Points = append(scan.Points, p)
	}
	return scan, nil
}

// scanPoint returns the point that one row of the file holds.
func scanPoint(cells []csvCell) (p ScanPoint, err error) {
	for i, field := range []*float64{&p.PowerMW, &p.SinglesHz[0], &p.SinglesHz[1], &p.CoincidencesHz, &p.AccidentalsHz, &p.Seconds, &p.WindowPs} {
		switch cell := cells[i]; {
		case cell.absent():
		case i < 5:
			*field, err = scanNumber(cell, csvCell.notNegative, "powers and rates are 0 or more, nothing subtracted")
		default:
			*field, err = scanNumber(cell, csvCell.positive, "give the counting time in seconds, the window in ps")
		}
		if err != nil {
			return ScanPoint{}, err
		}
	}
	return p, nil
}

// scanNumber returns the cell's value, which is not greater than scanMost.
func scanNumber(cell csvCell, read func(csvCell, string) (float64, error), hint string) (float64, error) {
	x, err := read(cell, hint)
	if err == nil && x > scanMost {
		return 0, cell.fail("is too large", "check the exponent")
	}
	return x, err
}
