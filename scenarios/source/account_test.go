package source

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

var update = flag.Bool("update", false, "pin the JSON's paths anew")

// plainLink is an invented link; a source can be put in front of it.
const plainLink = `title: An invented link
source:
  pair_rate_hz: 2.0e+6
  state: { tangle: 0.86 +- 0.02, measured_car: 60 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice: { length_km: 0, fixed_loss_db: 4, detector: a }
  bob: { length_km: 6, fixed_loss_db: 4, detector: a }
detectors:
  a: { efficiency: 0.2, dark_counts_hz: 1000, jitter_fwhm_ps: 200, dead_time_ns: 1000 }
need: { secret_rate_bps: 100 }
`

// written writes a file into the test's own folder.
func written(t testing.TB, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// accounted asks what a file says, with or without a link.
func accounted(t testing.TB, q Request) *Result {
	t.Helper()
	r, err := Account(t.Context(), q)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// matrixText writes a state as a laboratory file.
func matrixText(rho sources.DensityMatrix) string {
	var b strings.Builder
	b.WriteString("row,col,re,im\n")
	for i, row := range rho {
		for j, x := range row {
			fmt.Fprintf(&b, "%d,%d,%v,%v\n", i, j, real(x), imag(x))
		}
	}
	return b.String()
}

// tilted is an invented state whose frames are off by some degrees.
func tilted() sources.DensityMatrix {
	return sources.Werner(0.94).Rotated(sources.Rotation{Axis: [3]float64{0.6, 0, 0.8}, AngleDeg: 24}, sources.Rotation{Axis: [3]float64{0, 0.8, 0.6}, AngleDeg: 17})
}

// countsText is a tomography of 36 settings without any error of counting.
func countsText(rho sources.DensityMatrix, pairs float64) string {
	var b strings.Builder
	b.WriteString("alice,bob,counts\n")
	for _, a := range "HVDARL" {
		for _, c := range "HVDARL" {
			x, _ := sources.LetterAnalyser(string(a))
			y, _ := sources.LetterAnalyser(string(c))
			p := complex(0, 0)
			for i := range rho {
				for j := range rho {
					bra := x[i/2] * y[i%2]
					p += complex(real(bra), -imag(bra)) * rho[i][j] * x[j/2] * y[j%2]
				}
			}
			fmt.Fprintf(&b, "%c,%c,%.0f\n", a, c, pairs*real(p))
		}
	}
	return b.String()
}

// TestMatrixIsDescribed: the figures are those of package sources, and with a
// link the answer is that of a plan from the same matrix.
func TestMatrixIsDescribed(t *testing.T) {
	rho := tilted()
	file, link := written(t, "state.csv", matrixText(rho)), written(t, "link.yaml", plainLink)
	r := accounted(t, Request{File: file, On: link})
	if r.Form != FormDensityMatrix || r.Title != "state.csv" || len(r.Inputs) != 2 || len(r.Inputs[0].SHA256) != 64 {
		t.Errorf("%v %v %v", r.Form, r.Title, r.Inputs)
	}
	for i, want := range rho.Figures().List() {
		if got := r.State.places()[i]; math.Abs(*got.Value-want) > 1e-9 || got.SD != nil {
			t.Errorf("figure %d: %v, want %v", i, *got.Value, want)
		}
	}
	if *r.State.BellState != "Phi+" || r.State.Alignment.Alice.AngleDeg == 0 || !strings.Contains(r.State.Aligning, "worth") {
		t.Errorf("%v %+v %v", *r.State.BellState, r.State.Alignment, r.State.Aligning)
	}

	s, err := scenarios.Load(link)
	if err != nil {
		t.Fatal(err)
	}
	s.Source.State, s.Source.MeasuredCAR, s.Deviations = sources.FromDensityMatrix(rho), math.NaN(), nil
	p, err := plan.New(t.Context(), s, "test", nil)
	if err != nil {
		t.Fatal(err)
	}
	want := p.Cases[0].Answer
	if got := r.Link; got.Outcome != want.Outcome || math.Abs(*got.UsableRateBps/(*want.UsableRateBps)-1) > 1e-12 ||
		math.Abs(*got.MarginDB-*want.MarginDB) > 1e-9 || got.Sentence != want.Sentence || *got.NeedBps != 100 {
		t.Errorf("got %+v\nwant %+v", got, want)
	}
	if len(r.Link.Replaced) != 1 || r.Link.Replaced[0].Entry != "source.state" {
		t.Errorf("%v", r.Link.Replaced)
	}
}

// TestCountsGiveErrorBars: of each figure that of sources' bootstrap.
func TestCountsGiveErrorBars(t *testing.T) {
	text := countsText(tilted(), 900)
	r := accounted(t, Request{File: written(t, "counts.csv", text)})
	counts, err := sources.ReadCounts(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	fit, err := counts.MaximumLikelihood()
	if err != nil {
		t.Fatal(err)
	}
	want, err := counts.FigureDeviations(t.Context(), fit, sources.BootstrapDraws, sources.BootstrapSeed, nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, sd := range want.List() {
		if got := r.State.places()[i].SD; math.Abs(*got-sd) > 1e-12 {
			t.Errorf("figure %d: %v, want %v", i, *got, sd)
		}
	}
	f := r.Fit
	if f.BootstrapDraws != sources.BootstrapDraws || f.BootstrapSeed != sources.BootstrapSeed || len(f.Settings) != 36 || f.Optimality > 1e-6 {
		t.Errorf("%+v", f)
	}
	sum, expected := 0.0, 0.0
	for _, s := range f.Settings {
		sum, expected = sum+s.Counts, expected+s.Expected
	}
	if math.Abs(sum-expected) > 1e-6*sum { // the likelihood's maximum over the total
		t.Errorf("%v counted, %v expected", sum, expected)
	}
}

// TestCountsPlanAsTheirMatrix: a plan from counts is the plan from the density
// matrix that they give, as it is printed.
func TestCountsPlanAsTheirMatrix(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	fromCounts := accounted(t, Request{File: written(t, "counts.csv", countsText(tilted(), 900)), On: link})
	var rho sources.DensityMatrix
	for i, row := range fromCounts.State.DensityMatrix {
		for j, x := range row {
			rho[i][j] = complex(x.Re, x.Im)
		}
	}
	fromMatrix := accounted(t, Request{File: written(t, "state.csv", matrixText(rho)), On: link})
	a, b := fromCounts.Link, fromMatrix.Link
	if math.Abs(*a.UsableRateBps/(*b.UsableRateBps)-1) > 1e-12 || a.Sentence != b.Sentence || a.Outcome != b.Outcome {
		t.Errorf("%v\n%v", a, b)
	}
}

// TestInterrupt ends a bootstrap.
func TestInterrupt(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, err := Account(ctx, Request{File: written(t, "counts.csv", countsText(tilted(), 900))})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// TestProgress is told of all draws.
func TestProgress(t *testing.T) {
	var tasks []string
	last := 0
	accounted(t, Request{File: written(t, "counts.csv", countsText(tilted(), 900)), Progress: func(task string, done, total int) {
		tasks = append(tasks, task)
		last = done * 100 / total
	}})
	if len(tasks) != sources.BootstrapDraws || tasks[0] != "error bars" || last != 100 {
		t.Errorf("%d, %v", len(tasks), last)
	}
}

// TestOptionsGoWithTheirFile and are missed where they are needed.
func TestOptionsGoWithTheirFile(t *testing.T) {
	link, state := written(t, "link.yaml", plainLink), written(t, "state.csv", matrixText(tilted()))
	one := 1.0
	for want, q := range map[string]Request{
		"--order goes with a power scan, and the file is a density matrix":            {File: state, Options: Options{Order: 1}},
		"--window-ps goes with a delay histogram, and the file is a density matrix":   {File: state, Options: Options{WindowPs: 1}},
		"--raman-bob goes with a power scan, and the file is a density matrix":        {File: state, Options: Options{LinearNoiseHzPerMW: [2]*float64{1: &one}}},
		"--efficiency-alice goes with a power scan, and the file is a density matrix": {File: state, Options: Options{DetectorEfficiency: [2]*float64{&one}}},
		"a power scan needs --order":              {File: written(t, "scan.csv", "power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz\n")},
		"do not go with a scenario":               {File: link, Options: Options{Order: 1}},
		"there is no such file":                   {File: "nowhere.csv"},
		"nowhere.yaml:1:1: there is no such file": {File: state, On: "nowhere.yaml"},
		"is not that of a laboratory file":        {File: written(t, "x.csv", "a,b\n1,2\n")},
	} {
		if _, err := Account(t.Context(), q); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", want, err)
		}
	}
}
