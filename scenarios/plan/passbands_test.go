package plan

import (
	"encoding/csv"
	"io/fs"
	"math"
	"strconv"
	"strings"
	"testing"

	"pairspan/scenarios"
)

// TestPassBands: the shares of the pairs that pass are those of the map's bins,
// summed from its file.
func TestPassBands(t *testing.T) {
	p, err := New(t.Context(), mapped(t), "", nil)
	if err != nil {
		t.Fatal(err)
	}
	all, both, alice, bob := bandShares(t, func(nm float64) bool { return nm > 1547.2 && nm < 1548.4 }, func(nm float64) bool { return nm > 1551.6 })
	near := func(what string, got, want float64) {
		if math.Abs(got/want-1) > 1e-9 {
			t.Errorf("%s: %v, want %v", what, got, want)
		}
	}
	c := &p.Cases[0]
	near("share", c.PassBands.Share, both/all)
	near("Alice's alone", c.PassBands.UnpairedShare.Alice, alice/all)
	near("Bob's alone", c.PassBands.UnpairedShare.Bob, bob/all)
	near("pairs", c.PassBands.PairRateHz, 2e6*both/all)
	near("Alice's upper end", c.PassBands.Alice.ToNm, 1548.4)
	near("Bob's upper end", c.PassBands.Bob.ToNm, 1553.6)
	for _, e := range p.Entries {
		if of := e.Entry; strings.HasPrefix(of, "source.wavelength_nm.") || strings.HasPrefix(of, "source.bandwidth_fwhm_nm.") {
			if e.KnownBy == nil || *e.KnownBy != Measured {
				t.Errorf("%s is known by %v, and the map tells it", of, e.KnownBy)
			}
		}
	}
	if other := planned(t); other.Cases[0].PassBands != nil {
		t.Errorf("%+v without a map", other.Cases[0].PassBands)
	}
}

// TestMapCannotBeVaried: what a map tells is refused in place of distance, and
// so is what is used where its file is read.
func TestMapCannotBeVaried(t *testing.T) {
	s := mapped(t)
	for entry, want := range map[string]string{
		"source.wavelength_nm.bob": "the spectral map tells it", "source.bandwidth_fwhm_nm": "the spectral map tells it",
		"source.spectral_map.to_nm.bob": "no rate depends on it",
	} {
		if _, err := NewAxis(s, entry, "", ""); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", entry, err)
		}
	}
	if _, err := NewAxis(s, "source.pair_rate_hz", "", ""); err != nil {
		t.Error(err)
	}
}

// mapped is base behind pass bands of the sample map.
func mapped(t *testing.T) *scenarios.Scenario {
	t.Helper()
	text := strings.Replace(base, "state: { tangle: 0.86 }\n  wavelength_nm: { alice: 1550, bob: 1550 }\n  bandwidth_fwhm_nm: 0.8\n",
		"spectral_map: { file: spectral-map.csv, from_nm: { alice: 1547.2, bob: 1551.6 }, to_nm: { alice: 1548.4 } }\n", 1)
	s, err := scenarios.Read(scenarios.Examples, "x.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// bandShares sums the shares of the sample map: of all bins, of those in both
// bands, in Alice's alone, in Bob's alone.
func bandShares(t *testing.T, inAlice, inBob func(nm float64) bool) (all, both, alice, bob float64) {
	text, err := fs.ReadFile(scenarios.Examples, "spectral-map.csv")
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(strings.NewReader(string(text))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range rows[1:] {
		if r[3] != "0" || r[4] != "0" { // one row a bin
			continue
		}
		var x [3]float64
		for i := range x {
			x[i], _ = strconv.ParseFloat(r[i], 64)
		}
		all += x[2]
		switch a, b := inAlice(x[0]), inBob(x[1]); {
		case a && b:
			both += x[2]
		case a:
			alice += x[2]
		case b:
			bob += x[2]
		}
	}
	return all, both, alice, bob
}
