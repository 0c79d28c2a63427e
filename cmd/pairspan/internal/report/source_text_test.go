package report

import (
	"bytes"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
	"pairspan/scenarios/source"
)

// sampleSources are results of every shape, with and without what may be missing.
func sampleSources() map[string]*source.Result {
	value, sd := 0.86123, 0.0123
	f := source.Figure{Value: &value, SD: &sd}
	bell := "Phi+"
	state := &source.State{
		Known: source.Whole, DensityMatrix: &[4][4]source.Complex{{{Re: 0.5}, {}, {}, {Re: 0.45, Im: -0.00001}}},
		Tangle: f, BellState: &bell, Alignment: &source.Alignment{KeyBasis: "DA", Alice: source.Rotation{AngleDeg: 12, Axis: [3]float64{1}}},
		Conversions: strings.Repeat("a conversion ", 20),
	}
	many := []source.Warning{}
	for range 40 {
		many = append(many, source.Warning{Rule: "r", Entry: "arms.alice.fixed_loss_db", Sentence: strings.Repeat("long ", 60)})
	}
	reason := "no_loss_helps"
	link := &source.Link{Title: "A link \x1b[31m", Outcome: plan.NotMet, Sentence: strings.Repeat("a sentence ", 25), MarginReason: &reason, ReachReason: &reason, QBER: &plan.QBER{Key: 0.02, Check: 0.03}}
	scan := &source.ScanResult{Order: 2, Told: []string{strings.Repeat("told ", 40)}, NotTold: []string{"that"}}
	for range 7 {
		scan.Parameters = append(scan.Parameters, source.ScanParameter{Name: "pairs", Unit: "/s per mW", Value: &value, AtBound: true})
	}
	return map[string]*source.Result{
		"bare":     {Form: source.FormTomography},
		"state":    {Title: strings.Repeat("long name ", 20), Form: source.FormTomography, Sentence: strings.Repeat("a word ", 30), State: state, Link: link, Warnings: many, Fit: &source.Fit{Sentence: strings.Repeat("a fit ", 40)}},
		"scan":     {Title: "scan\n.csv", Form: source.FormPowerScan, PowerScan: scan, Link: &source.Link{Outcome: source.NotTold, Sentence: "no"}, Warnings: many},
		"delays":   {Form: source.FormDelays, Delays: &source.DelayResult{Kind: "none", Told: []string{"nothing"}}},
		"interval": {Form: source.FormScenario, State: &source.State{Known: source.Bounded, Members: &source.Members{}}},
		"map":      {Form: source.FormSpectralMap, SpectralMap: &source.SpectralMap{ByWidth: bandsOf(30)}, State: state, Warnings: many},
		"one bin":  {Form: source.FormSpectralMap, SpectralMap: &source.SpectralMap{ByWidth: bandsOf(1)}},
		"odd form": {Form: "something_else"},
	}
}

// bandsOf are pairs of pass bands, narrower and narrower, without edges.
func bandsOf(n int) (bands []source.SpectralBand) {
	for k := range n {
		bands = append(bands, source.SpectralBand{Alice: source.PassBand{Bins: n - k}, Share: 1, OnLink: &source.BandOnLink{UsableRateBps: 1e6}})
	}
	return bands
}

// TestSourceTextOfEverySample fits one screen, whatever the result holds, and
// keeps control characters out.
func TestSourceTextOfEverySample(t *testing.T) {
	for name, r := range sampleSources() {
		var b bytes.Buffer
		if err := SourceText(&b, r); err != nil {
			t.Fatal(err)
		}
		fitsOneScreen(t, name, b.String())
		if !strings.Contains(b.String(), "IEC 60825-1") {
			t.Errorf("%s:\n%s", name, b.String())
		}
	}
}

// TestBandsListed: the first and the last, and the best.
func TestBandsListed(t *testing.T) {
	for n := 1; n < 40; n++ {
		for best := -1; best < n; best++ {
			m := &source.SpectralMap{ByWidth: bandsOf(n)}
			if best >= 0 {
				m.Best = &m.ByWidth[best]
			}
			places := spread(m)
			if len(places) != min(n, mostBands) || places[0] != 0 || places[len(places)-1] != n-1 {
				t.Fatalf("%d bands: %v", n, places)
			}
			found := best < 0
			for k, place := range places {
				found = found || place == best
				if k > 0 && place <= places[k-1] {
					t.Fatalf("%d bands: %v", n, places)
				}
			}
			if !found {
				t.Fatalf("the best of %d is %d: %v", n, best, places)
			}
		}
	}
}

// TestSourceCSV prints every digit, and only a matrix that is known.
func TestSourceCSV(t *testing.T) {
	var b bytes.Buffer
	if err := SourceCSV(&b, &source.Result{}); err == nil {
		t.Error("a matrix from nothing")
	}
	third := 1.0 / 3
	if err := SourceCSV(&b, &source.Result{State: &source.State{DensityMatrix: &[4][4]source.Complex{1: {2: {Re: third, Im: -1e-17}}}}}); err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(b.String(), "row,col,re,im\n0,0,0,0\n") || !strings.Contains(b.String(), "\n1,2,0.3333333333333333,-1e-17\n") {
		t.Error(b.String())
	}
}
