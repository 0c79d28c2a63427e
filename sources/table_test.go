package sources

import (
	"errors"
	"strings"
	"testing"
)

var twoForms = []csvForm{
	{name: "a test table", columns: []string{"x", "y"}, optional: []string{"z"}, maxRows: 2, maxSize: 64},
	{columns: []string{"x_nm", "y_nm", "y"}},
}

func TestReadTable(t *testing.T) {
	for _, row := range []struct {
		name, text string
		form       int
		want       string // the first row's cells
	}{
		{"without optional column", "x,y\n1,2\n", 0, "1 2 ?"},
		{"with optional column", "x,y,z\n1,2,3\n", 0, "1 2 3"},
		{"other order", "z,y,x\n1,2,3\n", 0, "3 2 1"},
		{"other form", "y,x_nm,y_nm\n1,2,3\n", 1, "2 3 1"},
		{"byte-order mark and blanks", "\ufeff x , y \r\n 1 , 2 \r\n", 0, "1 2 ?"},
	} {
		table, err := readTable(strings.NewReader(row.text), twoForms...)
		if err != nil {
			t.Errorf("%s: %v", row.name, err)
			continue
		}
		var got []string
		for _, cell := range table.rows[0] {
			got = append(got, cell.or("?").text)
		}
		expect(t, strings.Join(got, " "), row.want)
		if table.form != row.form {
			t.Errorf("%s: form %d, want %d", row.name, table.form, row.form)
		}
	}
}

// An empty value in a column that the file has is not an absent one.
func TestEmptyOptionalValueIsNotAbsent(t *testing.T) {
	table, err := readTable(strings.NewReader("x,y,z\n1,2,\n"), twoForms...)
	if err != nil {
		t.Fatal(err)
	}
	if cell := table.rows[0][2]; cell.absent() || cell.or("1").text != "" {
		t.Errorf("got %+v", cell)
	}
}

func TestReadTableErrors(t *testing.T) {
	const headers = "a test table has the header x,y[,z] or x_nm,y_nm,y, in any order, those in brackets where wanted"
	for _, row := range []struct{ name, text, want string }{
		{"empty", "", "the file is empty; " + headers},
		{"unknown column", "x,y,w\n", "line 1, column 5: w is not a known column; " + headers},
		{"capitals", "x,Y\n", "line 1, column 3: Y is not a known column; write y"},
		{"missing column", "x,z\n", "line 1: the column y is missing; " + headers},
		{"missing column of the other form", "x_nm,y\n", "line 1: the column y_nm is missing; " + headers},
		{"mixed forms", "x,z,y_nm,y\n", "line 1, column 5: y_nm belongs to another form of header than the columns beside it; " + headers},
		{"twice", "x,y,z,z\n", "line 1, column 7: z stands twice in the header; remove one of the two columns"},
		{"no header", "1,2\n", "line 1, column 1: 1 stands where the header belongs; " + headers},
		{"one row too many", "x,y\n1,2\n3,4\n5,6\n", "line 4: too many rows: a test table has at most 2 below the header; remove the others"},
		{"too large", strings.Repeat("x", 65), "the file is larger than 64 bytes; a test table has at most 2 rows; is this the right file?"},
		{"ragged", "x,y,z\n1,2\n", "line 2: the row has 2 values, and the header has 3; give every value; write 0 where it is zero"},
	} {
		_, err := readTable(strings.NewReader(row.text), twoForms...)
		var bad *CSVError
		switch {
		case !errors.As(err, &bad):
			t.Errorf("%s: %v does not say where", row.name, err)
		case err.Error() != row.want:
			t.Errorf("%s:\ngot  %s\nwant %s", row.name, err, row.want)
		}
	}
}

func TestCellNumbers(t *testing.T) {
	type reading func(csvCell) (float64, error)
	count := csvCell.count
	positive := func(c csvCell) (float64, error) { return c.positive("hint") }
	notNegative := func(c csvCell) (float64, error) { return c.notNegative("hint") }
	between := func(c csvCell) (float64, error) { return c.between(-1, 2, "hint") }
	for _, row := range []struct {
		read       reading
		text, want string // the error, empty for none
		value      float64
	}{
		{count, "0", "", 0},
		{count, "-0", "", 0},
		{count, "1.2e3", "", 1200},
		{count, "9007199254740992", "", 1 << 53},
		{count, "9007199254740994", "line 3, column 7: 9007199254740994 is too large; check the exponent", 0},
		{count, "-1", "line 3, column 7: -1 is below 0; give the counts as they were counted, accidentals not subtracted", 0},
		{count, "1.5", "line 3, column 7: 1.5 is not a whole number; give the counts as they were counted: not per second, accidentals not subtracted", 0},
		{count, "NaN", "line 3, column 7: NaN is not a finite number; give the measured value", 0},
		{count, "nil", "line 3, column 7: nil is not a number; write it like -0.0123 or 1.2e-3", 0},
		{positive, "1e-300", "", 1e-300},
		{positive, "0", "line 3, column 7: 0 is not above 0; hint", 0},
		{positive, "1,5", "line 3, column 7: 1,5 is not a number; write a decimal point: 1.5", 0},
		{notNegative, "0", "", 0},
		{notNegative, "-1e-9", "line 3, column 7: -1e-9 is below 0; hint", 0},
		{between, "-1", "", -1},
		{between, "2.001", "line 3, column 7: 2.001 is outside -1 to 2; hint", 0},
		{between, "", "line 3, column 7: an empty value is not a number; give every value; write 0 where it is zero", 0},
	} {
		got, err := row.read(csvCell{row.text, 3, 7})
		message := ""
		if err != nil {
			message = err.Error()
		}
		expect(t, message, row.want)
		if got != row.value {
			t.Errorf("%s is read as %g, want %g", row.text, got, row.value)
		}
	}
}
