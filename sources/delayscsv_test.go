package sources

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"strings"
	"testing"
)

const delayText = "delay_ps,counts\n-20,3\n-10,5\n0,41\n10,120\n20,38\n30,4\n40,2\n50,6\n"

var delayOf = DelayHistogram{[]float64{-20, -10, 0, 10, 20, 30, 40, 50}, []float64{3, 5, 41, 120, 38, 4, 2, 6}}

func TestDelayReads(t *testing.T) {
	for name, text := range map[string]string{
		"as it is":        delayText,
		"byte-order mark": "\ufeff" + delayText,
		"CRLF":            strings.ReplaceAll(delayText, "\n", "\r\n"),
		"CR":              strings.ReplaceAll(delayText, "\n", "\r"),
		"blank lines":     strings.ReplaceAll(delayText, "\n", "\n\n"),
		"other order":     "counts,delay_ps\n6,50\n3,-20\n5,-1e1\n41,0\n120,10\n38,20\n2,40\n4,30\n",
	} {
		got, err := ReadDelayHistogram(strings.NewReader(text))
		if err != nil || !reflect.DeepEqual(got, delayOf) {
			t.Errorf("%s: %v, %+v", name, err, got)
		}
	}
}

func TestDelayReadErrors(t *testing.T) {
	for _, x := range []struct{ name, text, want string }{
		{"empty", "", "the file is empty; a delay histogram has the header delay_ps,counts, in any order"},
		{"header only", "delay_ps,counts\n", "the histogram has 0 bins; it takes 8 to 100000"},
		{"missing column", "delay_ps\n1\n", "line 1: the column counts is missing"},
		{"other file", scanText, "line 1, column 1: power_mw is not a known column"},
		{"seconds", "delay_s,counts\n", "line 1, column 1: delay_s is not a known column"},
		{"semicolons", "delay_ps;counts\n1;2\n", "columns are separated by semicolons"},
		{"decimal commas", "delay_ps,counts\n1,5,20\n", "line 2: the row has 3 values, and the header has 2; write decimal points"},
		{"ragged", "delay_ps,counts\n1\n", "line 2: the row has 1 values, and the header has 2"},
		{"negative", delayText + "60,-1\n", "line 10, column 4: -1 is below 0; give the counts as they were counted"},
		{"fraction", delayText + "60,1.5\n", "line 10, column 4: 1.5 is not a whole number"},
		{"NaN", delayText + "60,nan\n", "line 10, column 4: nan is not a finite number"},
		{"delay NaN", delayText + "NaN,1\n", "line 10, column 1: NaN is not a finite number"},
		{"far", delayText + "1e20,1\n", "line 10, column 1: 1e20 is outside -1e+15 to 1e+15; delays are in ps"},
		{"twice", delayText + "10.0,7\n", "line 10, column 1: 10.0 was given already on line 5; remove one of the two"},
		{"few", strings.Replace(delayText, "50,6\n", "", 1), "the histogram has 7 bins"},
		{"one missing", strings.Replace(delayText, "30,4\n", "", 1) + "60,1\n", "not of equal width: most are 10 ps, but not the one at 40 ps"},
		{"too many", "delay_ps,counts\n" + strings.Repeat("1,1\n", 100_001), "line 100002: too many rows"},
	} {
		got, err := ReadDelayHistogram(strings.NewReader(x.text))
		var bad *CSVError
		if !errors.As(err, &bad) || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%s:\ngot  %v\nwant %s", x.name, err, x.want)
		}
		if got.DelayPs != nil || got.Counts != nil {
			t.Errorf("%s: half a histogram is returned", x.name)
		}
	}
}

// Whatever the file, it is read or refused; what is read can be fitted, and what
// comes out is in range.
func FuzzDelayRead(f *testing.F) {
	f.Add([]byte(delayText), 0.0)
	f.Add([]byte("\ufeffcounts,delay_ps\r\n1,0\r\n"), 25.0)
	comb := delayTruth{bins: 60, bin: 10, delay: 300, fwhm: 20, pairs: 300, side: 80, period: 120, floor: 1}
	f.Add([]byte(histogramText(comb.histogram(math.Round))), 40.0)
	f.Add([]byte("delay_ps,counts\n"+strings.Repeat("0,9e15\n", 9)), 1.0)
	var huge strings.Builder
	huge.WriteString("delay_ps,counts\n")
	for i := range 12 {
		fmt.Fprintf(&huge, "%de12,%d\n", i, 9_000_000_000_000_000*(i%2))
	}
	f.Add([]byte(huge.String()), 1e15)
	f.Fuzz(func(t *testing.T, text []byte, window float64) {
		h, err := ReadDelayHistogram(strings.NewReader(string(text)))
		if err != nil {
			var bad *CSVError
			if !errors.As(err, &bad) || bad.Problem == "" || len(err.Error()) > 1000 {
				t.Fatalf("%#v", err)
			}
			return
		}
		r, err := h.Fit(DelayOptions{})
		if err != nil {
			t.Fatalf("a histogram that was read is not fitted: %v", err)
		}
		if len(r.Fitted) != len(h.Counts) || len(r.Told) == 0 {
			t.Fatalf("%+v", r)
		}
		for _, e := range []Estimate{r.FWHMPs, r.Coincidences, r.FloorPerBin, r.AccidentalsInWindow, r.SidePeak, r.WindowShare} {
			if e.Value < 0 || e.SD < 0 || math.IsInf(e.Value, 0) {
				t.Fatalf("%+v", r)
			}
		}
		if r.Kind != NoPeak && !(r.Coincidences.Known() && r.DelayPs.Known() && r.FWHMPs.Known()) {
			t.Fatalf("%+v", r)
		}
		h.Fit(DelayOptions{WindowPs: window})
	})
}
