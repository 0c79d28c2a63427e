package scenarios

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestNumbersAreRead(t *testing.T) {
	for _, c := range []struct {
		text      string
		value, sd float64
	}{
		{"6.2", 6.2, math.NaN()},
		{"+6.2", 6.2, math.NaN()},
		{"-6.2", -6.2, math.NaN()},
		{"0", 0, math.NaN()},
		{"-0", 0, math.NaN()},
		{".5", 0.5, math.NaN()},
		{"5.", 5, math.NaN()},
		{"2.0e+6", 2e6, math.NaN()},
		{"2E6", 2e6, math.NaN()},
		{"1e-30", 1e-30, math.NaN()},
		{"0e0", 0, math.NaN()},
		{"0.86 +- 0.02", 0.86, 0.02},
		{"0.86+-0.02", 0.86, 0.02},
		{"0.86 ± 2e-2", 0.86, 0.02},
		{"-3.5 ± .1", -3.5, 0.1},
	} {
		n, problem, _ := parseNumber(c.text, "km")
		if problem != "" || n.value != c.value || n.sd != c.sd && !(math.IsNaN(n.sd) && math.IsNaN(c.sd)) {
			t.Errorf("%q: got %v, %q", c.text, n, problem)
		}
		if math.Signbit(n.value) && n.value == 0 {
			t.Errorf("%q: minus zero", c.text)
		}
	}
}

// Whatever a float's text, it is read back as that float; so is a standard
// deviation beside it.
func TestNumbersRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64().Draw(t, "x")
		sd := rapid.Float64Range(math.SmallestNonzeroFloat64, math.MaxFloat64).Draw(t, "sd")
		if math.IsInf(x, 0) || math.IsNaN(x) {
			t.Skip()
		}
		form := rapid.SampledFrom([]byte("ge")).Draw(t, "form")
		text := strconv.FormatFloat(x, form, -1, 64) + " +- " + strconv.FormatFloat(sd, form, -1, 64)
		n, problem, _ := parseNumber(text, "")
		if problem != "" || n.value != x || n.sd != sd {
			t.Fatalf("%q: got %v, %q", text, n, problem)
		}
		n, problem, _ = parseNumber(figure(x), "")
		if problem != "" || n.value != x {
			t.Fatalf("figure %q: got %v, %q", figure(x), n, problem)
		}
	})
}

func TestHintsSayWhatToWrite(t *testing.T) {
	for _, c := range []struct{ text, hint string }{
		{"0,86", "a point is decimal: 0.86"},
		{"1,000", "a point is decimal: 1.000, or 1000 if thousands were set apart"},
		{"010", "write it without the zero in front: 10"},
		{"-010", "write it without the zero in front: -10"},
		{"00.5", "write it without the zero in front: 0.5"},
		{"000", "write it without the zero in front: 0"},
		{"1_000", "write it without: 1000"},
		{"85 %", "write a fraction: 0.85"},
		{"0.1 per cent", "write a fraction: 0.001"},
		{"6.2 km", "write the number alone, in km"},
		{"6.2km", "write the number alone, in km"},
		{"3 °C", "write the number alone, in km"},
	} {
		if _, problem, hint := parseNumber(c.text, "km"); problem == "" || hint != c.hint {
			t.Errorf("%q: %q, hint %q", c.text, problem, hint)
		}
	}
}

func FuzzNumber(f *testing.F) {
	for _, s := range []string{"0.86 +- 0.02", "±", "+-", "1e999", "010", "0x1", "85 %", "1,000.5", "6 km", ".nan", "−5", "\x00", "0.2 +- 0.1 ± 3"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		n, problem, hint := parseNumber(text, "km")
		if problem != "" {
			if hint == "" {
				t.Errorf("%q: %q without a hint", text, problem)
			}
			return
		}
		if math.IsNaN(n.value) || math.IsInf(n.value, 0) || n.sd <= 0 || math.IsInf(n.sd, 0) {
			t.Errorf("%q: accepted as %v", text, n)
		}
		// What is accepted means the same to Go's own parser.
		value, _, _ := cutDeviation(text)
		if x, err := strconv.ParseFloat(value, 64); err != nil || x != n.value || strings.ContainsAny(value, "xX_") {
			t.Errorf("%q: read as %v, by Go as %v, %v", text, n.value, x, err)
		}
	})
}
