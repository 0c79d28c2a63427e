package report

import (
	"fmt"
	"slices"
	"strings"

	"pairspan/scenarios/source"
)

// scan shows what a power scan tells.
func (t *textPage) scan(r *source.ScanResult) {
	if r == nil {
		return
	}
	t.gap()
	t.line("What the scan tells" + fitWords(r.Chi2PerDof, r.PValue))
	for _, p := range r.Parameters {
		f := source.Figure{Value: p.Value, SD: p.SD}
		line := pad("  "+p.Name, 34) + f.Text()
		if p.Unit != "" {
			line += " " + p.Unit
		}
		if p.AtBound {
			line += ", at its bound"
		}
		t.line(line)
	}
	for _, a := range []struct {
		name string
		loss source.Figure
		eff  float64
	}{{"Alice", r.CollectionLossDB.Alice, detectorOf(r, 0)}, {"Bob", r.CollectionLossDB.Bob, detectorOf(r, 1)}} {
		if a.loss.Value != nil {
			t.line(pad("  collection loss of "+a.name+"'s arm", 34) + fmt.Sprintf("%s dB, a detector of %s taken out", a.loss.Text(), share(a.eff)))
		}
	}
	t.list("", r.Told)
	t.list("Not told: ", r.NotTold)
}

func detectorOf(r *source.ScanResult, arm int) float64 {
	switch {
	case r.DetectorEfficiency == nil:
		return 1
	case arm == 0:
		return r.DetectorEfficiency.Alice
	}
	return r.DetectorEfficiency.Bob
}

// fitWords says how good a fit is.
func fitWords(chi2PerDof, p *float64) string {
	if chi2PerDof == nil || p == nil {
		return ""
	}
	return fmt.Sprintf(" (chi-squared %s per degree of freedom, chance %s)", digits(*chi2PerDof, 3), share(*p))
}

// mostBands is how many pairs of pass bands are listed.
const mostBands = 7

// bands lists pass bands from the widest to the narrowest, the best among them.
func (t *textPage) bands(m *source.SpectralMap) {
	if m == nil || len(m.ByWidth) == 0 {
		return
	}
	t.gap()
	t.line(bandRow("  Alice's band, nm", "Bob's band, nm", "pairs", "tangle", "QBER", "usable bit/s"))
	for _, i := range spread(m) {
		b := &m.ByWidth[i]
		mark := "  "
		if isBest(m, b) {
			mark = "* "
		}
		tangle := orNone(b.Tangle, func(x float64) string { return decimals(x, 3) })
		if b.Tangle == nil && b.TangleAtMost != nil {
			tangle = "<= " + decimals(*b.TangleAtMost, 3)
		}
		t.line(bandRow(mark+passText(b.Alice), passText(b.Bob), share(b.Share), tangle,
			perCent(max(b.OnLink.QBER.Key, b.OnLink.QBER.Check)), digits(b.OnLink.UsableRateBps, 3)))
	}
}

func bandRow(alice, bob string, figures ...string) string {
	line := pad(alice, 22) + pad(bob, 20)
	for i, width := range []int{7, 10, 9, 14} {
		cell := ascii(figures[i])
		line += strings.Repeat(" ", max(0, width-len(cell))) + cell
	}
	return line
}

func passText(p source.PassBand) string {
	if p.FromNm == nil {
		return "a single bin"
	}
	return fmt.Sprintf("%.6g to %.6g", *p.FromNm, *p.ToNm)
}

func isBest(m *source.SpectralMap, b *source.SpectralBand) bool {
	same := func(x, y source.PassBand) bool { return x.FirstBin == y.FirstBin && x.Bins == y.Bins }
	return m.Best != nil && same(b.Alice, m.Best.Alice) && same(b.Bob, m.Best.Bob)
}

// spread returns which bands are listed: evenly from first to last, but the best
// in place of its nearest, of which the ends stay.
func spread(m *source.SpectralMap) []int {
	n := len(m.ByWidth)
	shown := min(n, mostBands)
	places := make([]int, shown)
	for k := range places {
		if shown > 1 {
			places[k] = (k*(n-1) + (shown-1)/2) / (shown - 1)
		}
	}
	best := slices.IndexFunc(m.ByWidth, func(b source.SpectralBand) bool { return isBest(m, &b) })
	if best < 0 || slices.Contains(places, best) {
		return places
	}
	nearest := 1
	for k, place := range places[:shown-1] {
		if k > 0 && max(place-best, best-place) < max(places[nearest]-best, best-places[nearest]) {
			nearest = k
		}
	}
	places[nearest] = best
	return places
}

// delays shows what a delay histogram tells.
func (t *textPage) delays(r *source.DelayResult) {
	if r == nil {
		return
	}
	t.gap()
	t.line("What the histogram tells" + fitWords(r.Chi2PerDof, r.PValue))
	window := "window"
	if r.WindowPs != nil {
		window = digits(*r.WindowPs, 3) + " ps"
	}
	for _, f := range []struct {
		name string
		of   source.Figure
		unit string
	}{
		{"delay", r.DelayPs, " ps"},
		{"width, FWHM", r.FWHMPs, " ps"},
		{"period", r.PeriodPs, " ps"},
		{"coincidences", r.Coincidences, ""},
		{"in a side peak", r.SidePeak, ""},
		{"floor per bin", r.FloorPerBin, ""},
		{"share of them within " + window, r.WindowShare, ""},
		{"coincidences within " + window, r.InWindow, ""},
		{"accidentals within " + window, r.AccidentalsIn, ""},
		{"their ratio (CAR)", r.CAR, ""},
	} {
		if f.of.Value != nil {
			t.line(pad("  "+f.name, 34) + f.of.Text() + f.unit)
		}
	}
	t.list("", r.Told)
}
