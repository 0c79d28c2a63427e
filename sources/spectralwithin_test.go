package sources

import (
	"math"
	"strings"
	"testing"
)

// withinMap has pairs on the diagonal of three bins a side alone.
const withinMap = "alice_nm,bob_nm,share,tangle\n1549,1557,0.2,0.9\n1550,1556,0.5,0.81\n1551,1555,0.3,0.7\n"

// TestWithin takes the bins whose middles lie between two wavelengths, both
// inside, and all where none is stated.
func TestWithin(t *testing.T) {
	m, err := ReadSpectralMap(strings.NewReader(withinMap))
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	for _, row := range []struct {
		from, to    [2]float64
		first, last [2]int
		arm         int
		wrong       string
	}{
		{from: [2]float64{nan, nan}, to: [2]float64{nan, nan}, last: [2]int{2, 2}},
		{from: [2]float64{1549.5, nan}, to: [2]float64{nan, 1556.2}, first: [2]int{1, 0}, last: [2]int{2, 1}},
		{from: [2]float64{1550, 1556}, to: [2]float64{1550, 1556}, first: [2]int{1, 1}, last: [2]int{1, 1}},
		{from: [2]float64{1500, 1500}, to: [2]float64{1600, 1600}, last: [2]int{2, 2}},
		{from: [2]float64{1551.2, nan}, to: [2]float64{nan, nan}, arm: 0, wrong: "no bin of Alice's lies there"},
		{from: [2]float64{nan, 1556}, to: [2]float64{nan, 1555.5}, arm: 1, wrong: "no bin of Bob's lies there"},
		{from: [2]float64{1550.5, 1556.5}, to: [2]float64{nan, nan}, arm: -1, wrong: "no pair passes both"},
	} {
		b, arm, err := m.Within(row.from, row.to)
		switch {
		case row.wrong != "":
			if err == nil || arm != row.arm || !strings.Contains(err.Error(), row.wrong) {
				t.Errorf("%v to %v: arm %d, %v", row.from, row.to, arm, err)
			}
		case err != nil || b.First != row.first || b.Last != row.last:
			t.Errorf("%v to %v: %v to %v, %v", row.from, row.to, b.First, b.Last, err)
		}
	}
}

// TestStateOfABand: one bin's tangle is known as it was given, that of several
// is not known.
func TestStateOfABand(t *testing.T) {
	m, err := ReadSpectralMap(strings.NewReader(withinMap))
	if err != nil {
		t.Fatal(err)
	}
	whole, one := m.Whole(), m.Band([2]int{0, 2}, [2]int{1, 2})
	if got := m.State(&whole); got.Knowledge() != Unknown {
		t.Errorf("%+v", got)
	}
	if got := m.State(&one); got != FromTangle(0.9) {
		t.Errorf("%+v", got)
	}
}

// TestPartingKeepsTheCounts: pairs of the parting that lose their photons
// independently give the shares of the band again.
func TestPartingKeepsTheCounts(t *testing.T) {
	b := Band{Share: 0.3, UnpairedShare: [2]float64{0.25, 0.1}}
	p := b.Parting()
	both := p.Pairs * p.Passes[0] * p.Passes[1]
	near(t, "pairs", both, b.Share, 1e-15)
	near(t, "Alice's alone", p.Pairs*p.Passes[0]-both, b.UnpairedShare[0], 1e-15)
	near(t, "Bob's alone", p.Pairs*p.Passes[1]-both, b.UnpairedShare[1], 1e-15)
}
