package sources

import (
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"
)

const scanText = `power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz,accidentals_hz,seconds,window_ps
0,410,690,0.2,0.3,10,1000
0.5,2700,3900,190,10,10,1000
1,11200,14900,810,160,10,1000
1,11150,15010,790,170,20,1000
`

// scanOf is what scanText holds.
var scanOf = PowerScan{HasAccidentals: true, HasSeconds: true, HasWindow: true, Points: []ScanPoint{
	{0, [2]float64{410, 690}, 0.2, 0.3, 10, 1000},
	{0.5, [2]float64{2700, 3900}, 190, 10, 10, 1000},
	{1, [2]float64{11200, 14900}, 810, 160, 10, 1000},
	{1, [2]float64{11150, 15010}, 790, 170, 20, 1000},
}}

func TestScanReads(t *testing.T) {
	for name, text := range map[string]string{
		"as it is":        scanText,
		"byte-order mark": "\ufeff" + scanText,
		"CRLF":            strings.ReplaceAll(scanText, "\n", "\r\n"),
		"blanks":          strings.ReplaceAll(scanText, ",", " , "),
		"other order": `seconds,coincidences_hz,window_ps,singles_bob_hz,power_mw,accidentals_hz,singles_alice_hz
10,0.2,1e3,690,0,0.3,410
10,190,1e3,3900,0.5,10,2700
10,810,1e3,14900,1,160,11200
20,790,1e3,15010,1,170,11150
`,
	} {
		got, err := ReadPowerScan(strings.NewReader(text))
		if err != nil || !reflect.DeepEqual(got, scanOf) {
			t.Errorf("%s: %v, %+v", name, err, got)
		}
	}
	bare, err := ReadPowerScan(strings.NewReader("power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz\n1,2,3,4\n"))
	if err != nil || !reflect.DeepEqual(bare, PowerScan{Points: []ScanPoint{{1, [2]float64{2, 3}, 4, 0, 0, 0}}}) {
		t.Errorf("without optional columns: %v, %+v", err, bare)
	}
}

func TestScanReadErrors(t *testing.T) {
	const header = "power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz"
	for _, x := range []struct{ name, text, want string }{
		{"empty", "", "the file is empty; a power scan has the header " + header + "[,accidentals_hz][,seconds][,window_ps]"},
		{"header only", header + "\n", "the power scan has no point; give one row for each power"},
		{"missing column", "power_mw,singles_alice_hz,coincidences_hz\n1,2,3\n", "the column singles_bob_hz is missing"},
		{"unknown column", header + ",counts\n1,2,3,4,5\n", "line 1, column 58: counts is not a known column"},
		{"semicolons", strings.ReplaceAll(header, ",", ";") + "\n1;2;3;4\n", "columns are separated by semicolons"},
		{"decimal commas", header + "\n0,5,100,100,3\n", "line 2: the row has 5 values, and the header has 4; write decimal points"},
		{"ragged", header + "\n1,2,3\n", "line 2: the row has 3 values, and the header has 4"},
		{"negative power", header + "\n-1,2,3,4\n", "line 2, column 1: -1 is below 0; powers and rates are 0 or more"},
		{"negative rate", header + "\n1,2,-3,4\n", "line 2, column 5: -3 is below 0"},
		{"NaN", header + "\n1,2,3,NaN\n", "line 2, column 7: NaN is not a finite number"},
		{"infinite", header + "\n1,2,3,inf\n", "line 2, column 7: inf is not a finite number"},
		{"empty value", header + "\n1,,3,4\n", "an empty value is not a number"},
		{"no seconds", header + ",seconds\n1,2,3,4,0\n", "line 2, column 9: 0 is not above 0; give the counting time in seconds"},
		{"no window", header + ",window_ps\n1,2,3,4,0\n", "line 2, column 9: 0 is not above 0"},
		{"too large", header + "\n1,2,3,1e30\n", "line 2, column 7: 1e30 is too large; check the exponent"},
		{"too many rows", header + "\n" + strings.Repeat("1,2,3,4\n", 10_001), "line 10002: too many rows"},
	} {
		got, err := ReadPowerScan(strings.NewReader(x.text))
		var bad *CSVError
		if !errors.As(err, &bad) || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%s:\ngot  %v\nwant %s", x.name, err, x.want)
		}
		if got.Points != nil {
			t.Errorf("%s: half a scan is returned", x.name)
		}
	}
}

// Whatever the file, it is read or refused; what is read is fitted or refused,
// and what is fitted is in range.
func FuzzScanRead(f *testing.F) {
	f.Add([]byte(scanText), 2, 0.0, 1.0)
	f.Add([]byte("\ufeffpower_mw,singles_alice_hz,singles_bob_hz,coincidences_hz\r\n1,1e5,1e5,1e4\r\n2,2e5,2e5,2e4\r\n"), 1, 10.0, 0.5)
	f.Add([]byte("power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz\n1e15,1e-300,1e15,1\n1e-300,0,0,0\n3,1,1,0\n"), 2, 1e15, 1.0)
	f.Add([]byte("coincidences_hz;power_mw\n"), 1, -1.0, 1.0)
	f.Fuzz(func(t *testing.T, text []byte, order int, noise, share float64) {
		scan, err := ReadPowerScan(strings.NewReader(string(text)))
		if err != nil {
			var bad *CSVError
			if !errors.As(err, &bad) || bad.Problem == "" || len(err.Error()) > 1000 {
				t.Fatalf("%#v", err)
			}
			return
		}
		for _, o := range []ScanOptions{
			{Order: order, WindowShare: share}, {Order: order, WindowShare: share, LinearNoisePerMW: [2]*float64{&noise, &noise}},
		} {
			r, err := scan.Fit(o)
			if err != nil {
				continue
			}
			for _, e := range []Estimate{r.Efficiency[0], r.Efficiency[1]} {
				if e.Known() && !(e.Value >= 0 && e.Value <= 1) {
					t.Fatalf("efficiency %v", e)
				}
			}
			for _, e := range []Estimate{r.PairsHzPerMWk, r.ConstantHz[0], r.ConstantHz[1]} {
				if e.Value < 0 || e.SD < 0 {
					t.Fatalf("%+v", r)
				}
			}
			if math.IsNaN(r.ConstantHz[0].Value) || len(r.Points) != len(scan.Points) {
				t.Fatalf("%+v", r)
			}
		}
	})
}
