package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// readPlan writes a plan as plan.json and reads it back.
func readPlan(t *testing.T, p *plan.Plan) *plan.Plan {
	t.Helper()
	var file bytes.Buffer
	if err := JSON(&file, p); err != nil {
		t.Fatal(err)
	}
	back := new(plan.Plan)
	d := json.NewDecoder(&file)
	d.DisallowUnknownFields()
	if err := d.Decode(back); err != nil {
		t.Fatal(err)
	}
	return back
}

// number reads the first figure of a cell as a person does.
func number(t *testing.T, cell string) float64 {
	t.Helper()
	text := strings.NewReplacer("−", "-", "×10", "e", "⁻", "-", "⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9").Replace(cell)
	parts := strings.Split(text, nbsp)
	digits := parts[0]
	for _, p := range parts[1:] { // groups of three
		if len(p) != 3 || strings.Trim(p, "0123456789") != "" {
			break
		}
		digits += p
	}
	v, err := strconv.ParseFloat(strings.TrimSuffix(digits, ","), 64)
	if err != nil {
		t.Fatalf("no number in %q", cell)
	}
	return v
}

// near checks a figure of the page against the plan, to its digits.
func near(t *testing.T, what, cell string, want, relative, absolute float64) {
	t.Helper()
	if got := number(t, cell); math.Abs(got-want) > relative*math.Abs(want)+absolute {
		t.Errorf("%s reads %s, plan.json has %g", what, cell, want)
	}
}

// rows returns the cells of a table of the page.
func rows(b *tab, id string) [][]string {
	b.t.Helper()
	return ask[[][]string](b, `[...document.querySelectorAll("#`+id+` tbody tr")].map(r => [...r.cells].map(c => c.textContent))`)
}

// The figures that the page of the demo shows are those of its plan.json.
func TestBrowserFiguresAreThePlan(t *testing.T) {
	b := demoTab(t)
	p := readPlan(t, demoPlan(t))
	filed := &p.Cases[0]
	const three = 5e-3 // three digits, rounded

	steps := rows(b, "steps")
	near(t, "pairs made", steps[0][1], filed.Installed.PairRateHz, three, 0)
	near(t, "coincidences", steps[3][1], *filed.Installed.CoincidencesHz, three, 0)
	near(t, "sifted", steps[4][1], *filed.Installed.SiftedBps, three, 0)
	near(t, "secret", steps[6][1], filed.Installed.Bounds.AtWorst.SecretRateBps, three, 0)
	near(t, "usable", steps[7][1], filed.Installed.Bounds.AtWorst.UsableRateBps, three, 0)

	for i, c := range byMargin(p.Cases) {
		r, a := rows(b, "compared")[i], p.Cases[c].Answer
		if name := p.Cases[c].Name; c > 0 && !strings.HasPrefix(r[0], name) {
			t.Errorf("row %d is %q, want %s", i, r[0], name)
		}
		near(t, r[0]+", usable", r[1], *a.UsableRateBps, three, 0)
		near(t, r[0]+", margin", r[3], *a.MarginDB, 0, 0.051)
		near(t, r[0]+", reach", r[4], *a.ReachKm, three, 0)
	}

	sum := 0.0
	for i, r := range rows(b, "loss-bob")[:len(filed.LossBudget.Bob)] {
		sum += filed.LossBudget.Bob[i].LossDB
		near(t, r[0], r[1], filed.LossBudget.Bob[i].LossDB, 0, 0.0051)
		near(t, r[0]+", so far", r[2], sum, 0, 0.0051)
	}
	parts := rows(b, "error-parts")
	q := filed.QBERParts
	for i, want := range []float64{q.State, q.Alignment, q.MultiPair, q.DetectorNoise, q.OutsideLight, filed.Installed.QBER.Key} {
		near(t, parts[i][0], parts[i][1], 100*want, 0.06, 0.051)
	}
	curveRows(t, b, p)
	ruled(t, b, filed)
	b.quiet()
}

// curveRows checks every row of both tables of curves.
func curveRows(t *testing.T, b *tab, p *plan.Plan) {
	t.Helper()
	filed := &p.Cases[0]
	rates, errs := rows(b, "rate-data"), rows(b, "qber-data")
	step := (len(filed.Curve) + len(rates) - 1) / len(rates)
	if len(rates) < minTableRows || len(errs) != len(filed.Curve) {
		t.Fatalf("%d rows of rates, %d of errors", len(rates), len(errs))
	}
	for i, r := range rates {
		point := &filed.Curve[i*step]
		where := fmt.Sprintf("at %g km", point.DistanceKm)
		near(t, where+" the distance", r[0], point.DistanceKm, 1e-3, 0)
		near(t, where+" at worst", r[1], point.Bounds.AtWorst.UsableRateBps, 1e-3, 0)
		near(t, where+" at best", r[2], point.Bounds.AtBest.UsableRateBps, 1e-3, 0)
		near(t, where+" sifted", r[5], *point.SiftedBps, 1e-3, 0)
		near(t, where+" the last case", r[len(r)-1], *judged(&p.Cases[len(p.Cases)-1].Curve[i*step]), 1e-3, 0)
	}
	for i, r := range errs {
		near(t, "QBER", r[1], 100*filed.Curve[i].QBER.Key, 1e-3, 0)
		near(t, "QBER at worst", r[len(r)-1], 100*filed.Curve[i].Bounds.AtWorst.QBER.Key, 1e-3, 0)
	}
}

// ruled measures the ruler: bands, flag and bracket stand where the plan says.
func ruled(t *testing.T, b *tab, c *plan.Case) {
	t.Helper()
	x := ask[map[string]float64](b, `(() => {
		const s = document.querySelector("#figure-ruler svg.across"), n = (e, a) => parseFloat(s.querySelector(e).getAttribute(a));
		return { zero: n(".band-worst", "x"), worst: n(".band-worst", "width"), nominal: n(".band-nominal", "width"), best: n(".band-best", "width"),
			pole: n(".pole", "x1"), from: n(".bracket", "x1"), to: n(".bracket", "x2") };
	})()`)
	perKm := x["best"] / *c.Answer.AtBest.ReachKm
	for name, want := range map[string]float64{
		"worst": *c.Answer.ReachKm, "nominal": *c.Answer.Nominal.ReachKm,
		"pole": c.Installed.DistanceKm, "from": c.Installed.DistanceKm, "to": *c.Answer.ReachKm,
	} {
		got := x[name]
		if name == "pole" || name == "from" || name == "to" {
			got -= x["zero"]
		}
		if math.Abs(got-want*perKm) > 0.2 {
			t.Errorf("%s of the ruler is at %g pixels, want %g km at %g", name, got, want, perKm)
		}
	}
}
