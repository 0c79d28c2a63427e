package sources

import (
	"fmt"
	"io"
	"strings"
)

// The two forms of a table of counts, by letters and by wave plates.
var (
	countsOptional = []string{"accidentals", "seconds", "efficiency"}
	countsForms    = []csvForm{
		{
			name:     "a table of tomography counts",
			columns:  []string{"alice", "bob", "counts"},
			optional: countsOptional,
			maxRows:  4096,
			maxSize:  1 << 20,
		},
		{
			columns:  []string{"alice_hwp_deg", "alice_qwp_deg", "bob_hwp_deg", "bob_qwp_deg", "counts"},
			optional: countsOptional,
		},
	}
)

const platesForm = 1 // the place of the form by wave plates in countsForms

// ReadCounts reads the coincidences of a two-photon tomography. The file is CSV
// with one of the headers
//
//	alice,bob,counts[,accidentals][,seconds][,efficiency]
//	alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts[,accidentals][,seconds][,efficiency]
//
// columns in any order, those in brackets optional. Alice's and Bob's analysers
// are given by a letter (see LetterAnalyser) or by the angles of their wave
// plates, −360 to 360 (see Plates). Counts are whole, 0 or more, as they were
// counted; accidentals are the number expected among them, 0 or more, default 0;
// seconds are above 0, default 1; efficiency is the setting's own share of the
// coincidences that are counted, above 0 to 1, default 1. Line ends of any
// system and a byte-order mark are understood.
//
// A setting that is given twice is an error, and so are angles that look like
// radians, and counts that are all 0. What is wrong with the file is a
// *CSVError; the file may hold up to 4096 rows and 1 MiB. Whether the settings
// are enough for a state, LinearInversion and MaximumLikelihood say.
func ReadCounts(r io.Reader) (Counts, error) {
	table, err := readTable(r, countsForms...)
	if err != nil {
		return Counts{}, err
	}
	read := letterSetting
	if table.form == platesForm {
		if err := radiansIn(table.rows); err != nil {
			return Counts{}, err
		}
		read = platesSetting
	}
	var counts Counts
	seen := map[[2]string]Setting{}
	for _, row := range table.rows {
		s, rest, err := read(row)
		if err == nil {
			err = s.fill(rest)
		}
		if err != nil {
			return Counts{}, err
		}
		if before, twice := seen[s.Names]; twice {
			return Counts{}, givenTwice(row[0], before, s)
		}
		seen[s.Names] = s
		counts.Settings = append(counts.Settings, s)
	}
	if counts.Total() == 0 {
		return Counts{}, &CSVError{Problem: "no coincidences were counted in any setting", Hint: "check the file, or count for longer"}
	}
	return counts, nil
}

// letterSetting returns the setting that a row of the form by letters names, and
// the rest of the row.
func letterSetting(row []csvCell) (s Setting, rest []csvCell, err error) {
	for side, analyser := range []*Analyser{&s.Alice, &s.Bob} {
		cell := row[side]
		known := false
		if *analyser, known = LetterAnalyser(cell.text); !known {
			return s, nil, cell.fail("is not one of the letters H V D A R L", letterHint(cell.text))
		}
		s.Names[side] = cell.text
	}
	return s, row[2:], nil
}

// letterHint guesses what a person meant by a text that is not an analyser's
// letter.
func letterHint(text string) string {
	letters := strings.ToUpper(text)
	switch {
	case letters != "" && strings.Trim(letters, analyserLetters) == "" && len(letters) == 1:
		return "write it as a capital: " + letters
	case letters != "" && strings.Trim(letters, analyserLetters) == "" && len(letters) == 2:
		return "give one letter in the column alice and one in the column bob"
	case isNumber(text):
		return "angles of wave plates stand in the columns alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg"
	}
	return "D and A are at +45 and -45 degrees, R and L are circular"
}

// platesSetting returns the setting that a row of the form by wave plates names,
// and the rest of the row.
func platesSetting(row []csvCell) (s Setting, rest []csvCell, err error) {
	var angles [4]float64
	for i := range angles {
		if angles[i], err = row[i].between(-360, 360, "angles of fast axes are in degrees from H"); err != nil {
			return s, nil, err
		}
	}
	for side, analyser := range []*Analyser{&s.Alice, &s.Bob} {
		plates := Plates{HWPDeg: angles[2*side], QWPDeg: angles[2*side+1]}
		*analyser, s.Names[side] = plates.Analyser(), plates.name()
	}
	return s, row[4:], nil
}

// radiansIn returns an error where all angles of the rows look like radians.
func radiansIn(rows [][]csvCell) error {
	var angles []csvCell
	for _, row := range rows {
		angles = append(angles, row[:4]...)
	}
	return radians(angles)
}

// fill sets what was counted from the cells counts, accidentals, seconds and
// efficiency.
func (s *Setting) fill(cells []csvCell) (err error) {
	s.line = cells[0].line
	if s.Counts, err = cells[0].count(); err != nil {
		return err
	}
	accidentals := cells[1].or("0")
	if s.Accidentals, err = accidentals.notNegative("give the number of accidentals expected among the counts"); err != nil {
		return err
	}
	if s.Accidentals > maxCount {
		return accidentals.fail("is too large", "check the exponent")
	}
	seconds, err := cells[2].or("1").positive("give the seconds counted at this setting")
	if err != nil {
		return err
	}
	if seconds > maxSeconds || seconds < 1/maxSeconds {
		return cells[2].fail("is not a time that anybody counts for", "give the seconds counted at this setting")
	}
	efficiency, err := cells[3].or("1").positive("leave the setting out if nothing could be counted there")
	if err != nil {
		return err
	}
	if efficiency > 1 || efficiency < minEfficiency {
		return cells[3].fail(fmt.Sprintf("is outside %g to 1", minEfficiency), efficiencyHint(efficiency))
	}
	s.Exposure = seconds * efficiency
	return nil
}

// Bounds of one setting's exposure.
const (
	maxSeconds    = 1e9
	minEfficiency = 1e-6
)

func efficiencyHint(x float64) string {
	if x > 2 && x <= 100 {
		return fmt.Sprintf("efficiency is a fraction: %g", x/100)
	}
	return "only ratios matter: divide all efficiencies by the largest"
}

// givenTwice returns the error that a setting, in the row that begins with the
// cell, was given before.
func givenTwice(cell csvCell, before, again Setting) error {
	hint := "remove one of the two"
	if before.Counts != again.Counts || before.Exposure != again.Exposure || before.Accidentals != again.Accidentals {
		hint = "add them up in one row: counts, accidentals, and seconds too, 1 each where none are given"
	}
	name := strings.Join(again.Names[:], ", ")
	return &CSVError{Line: cell.line, Column: cell.column, Value: name, Hint: hint, Problem: fmt.Sprintf(
		"the setting %s was given already on line %d (counts %.0f there, %.0f here)", name, before.line, before.Counts, again.Counts)}
}
