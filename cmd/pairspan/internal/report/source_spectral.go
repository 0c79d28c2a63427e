package report

import (
	"cmp"
	"math"
	"slices"

	"pairspan/scenarios/source"
)

// spectralSection is what a spectral map says.
type spectralSection struct {
	Maps     []*figure
	Bands    table
	Frontier *figure
	Told     []string
	Doubts   []doubt
}

func spectralOf(m *source.SpectralMap) *spectralSection {
	if m == nil {
		return nil
	}
	s := &spectralSection{Bands: bandTable(m), Frontier: frontierFigure(m), Told: sentences(m.Told)}
	for _, q := range binQuantities(m) {
		if f := mapFigure(m, q); f != nil {
			s.Maps = append(s.Maps, f)
		}
	}
	return s
}

// binQuantity is a figure of the bins that a map shows.
type binQuantity struct {
	id, title, unit string
	of              func(*source.SpectralBin) *float64 // nil where it is not known
	text            func(float64) string
	fromZero        bool
	finding         func(least, most *source.SpectralBin) string
}

// binQuantities lists the maps of the page.
func binQuantities(m *source.SpectralMap) []binQuantity {
	fromTo := func(what string, text func(*source.SpectralBin) string) func(least, most *source.SpectralBin) string {
		return func(least, most *source.SpectralBin) string {
			if text(least) == text(most) {
				return what + " of " + text(most) + " in every bin that has pairs."
			}
			return what + " from " + text(least) + " at " + binPlace(least) + " to " + text(most) + " at " + binPlace(most) + "."
		}
	}
	three := func(v float64) string { return decimals(v, 3) }
	return []binQuantity{
		{
			id: "map-share", title: "Share of the pairs in each bin", unit: "share of the pairs", text: share, fromZero: true,
			of:      func(b *source.SpectralBin) *float64 { return &b.Share },
			finding: func(_, most *source.SpectralBin) string { return shareFinding(m, most) },
		},
		{
			id: "map-tangle", title: "Tangle of each bin", unit: "tangle", text: three,
			of:      func(b *source.SpectralBin) *float64 { return &b.Tangle },
			finding: fromTo("A tangle", func(b *source.SpectralBin) string { return three(b.Tangle) }),
		},
		{
			id: "map-qber", title: "QBER of each bin, check basis, analysers aligned to the bin", unit: "QBER, check basis", text: perCent, of: checkError,
			finding: fromTo("A QBER", func(b *source.SpectralBin) string { return perCent(*checkError(b)) }),
		},
	}
}

// checkError is the greater of both errors; nil where the bin's are not known.
func checkError(b *source.SpectralBin) *float64 {
	if b.QBERAligned == nil {
		return nil
	}
	return &b.QBERAligned.Check
}

func binPlace(b *source.SpectralBin) string {
	return "Alice’s " + nm(b.AliceNm) + " and Bob’s " + nm(b.BobNm)
}

func shareFinding(m *source.SpectralMap, most *source.SpectralBin) string {
	said := "Most pairs, " + share(most.Share) + " of all, lie at " + binPlace(most)
	if m.Best != nil {
		said += "; the best pass bands hold " + share(m.Best.Share)
	}
	return said + "."
}

// mapFigure draws one figure of the bins; nil where no bin has it.
func mapFigure(m *source.SpectralMap, q binQuantity) *figure {
	h := heatMap{ID: q.id, Title: q.title, Unit: q.unit, Label: q.text, EdgeNm: [2][]float64{m.AliceEdgesNm, m.BobEdgesNm}, Lo: math.Inf(1), Hi: math.Inf(-1)}
	var least, most *source.SpectralBin
	for i := range m.Bins {
		b := &m.Bins[i]
		v := q.of(b)
		at := [2]int{slices.Index(m.AliceNm, b.AliceNm), slices.Index(m.BobNm, b.BobNm)}
		if v == nil || at[0] < 0 || at[1] < 0 {
			continue
		}
		h.Cells = append(h.Cells, heatCell{at, *v})
		if *v < h.Lo {
			h.Lo, least = *v, b
		}
		if *v > h.Hi {
			h.Hi, most = *v, b
		}
	}
	if most == nil || !h.drawable() {
		return nil
	}
	if q.fromZero {
		h.Lo = 0
	}
	f := &figure{
		ID: q.id, Title: q.title, Finding: q.finding(least, most), Tables: []table{binTable(m, q)},
		Reading: "The more a bin stands out from the page, the greater its figure; bins without pairs are left blank.",
	}
	if m.Best != nil {
		h.Bands = []bandOutline{{Label: "best bands", Nm: [2]*source.PassBand{&m.Best.Alice, &m.Best.Bob}}}
		f.Reading += " Outlined: the pass bands with the most key on the link."
	}
	f.Drawings = append(f.Drawings, h.draw(f.Finding))
	return f
}

// mostBins is how many bins a table lists.
const mostBins = 400

// binTable lists what a map shows, of the bins with the most pairs.
func binTable(m *source.SpectralMap, q binQuantity) table {
	bins, caption := slices.Clone(m.Bins), q.title
	if len(bins) > mostBins {
		slices.SortStableFunc(bins, func(a, b source.SpectralBin) int { return cmp.Compare(b.Share, a.Share) })
		caption += ": the " + itoa(mostBins) + " bins with the most pairs, of " + itoa(len(bins)) + "; the JSON has them all"
		bins = bins[:mostBins]
	}
	t := table{ID: q.id + "-data", Caption: caption, Wide: true, Head: []string{"Alice’s bin, nm", "Bob’s bin, nm", sentenceHead(q.unit)}}
	for i := range bins {
		b := &bins[i]
		t.add(digits(b.AliceNm, 7), digits(b.BobNm, 7), orNone(q.of(b), q.text))
	}
	return t
}

// bandTable compares the whole map with the best bands.
func bandTable(m *source.SpectralMap) table {
	t := table{ID: "bands", Caption: "The whole map", Stack: true, Head: bandHead("Bands"), Words: []bool{true, true}}
	t.Rows = append(t.Rows, row{Head: "Whole map", Cells: bandCells(&m.Whole)})
	if m.Best != nil {
		t.Caption += " and the best pair of pass bands"
		if m.BandsCompared > 0 {
			t.Caption += " of " + grouped(float64(m.BandsCompared), 10) + " that were compared"
		}
		t.Rows = append(t.Rows, row{Head: "Best bands", Cells: bandCells(m.Best), Main: true})
	}
	if m.Known == source.Bounded {
		t.Caption += "; errors and key as if all bins held Werner states about one Bell state"
	}
	return t
}

func bandHead(first string) []string {
	return []string{first, "Alice’s, nm", "Bob’s, nm", "Share of the pairs", "Tangle", "QBER of the state, key / check", "Usable key"}
}

func bandCells(b *source.SpectralBand) []string {
	tangle, key := orNone(b.Tangle, func(v float64) string { return decimals(v, 3) }), none
	if b.Tangle == nil && b.TangleAtMost != nil {
		tangle = "at most " + decimals(*b.TangleAtMost, 3)
	}
	if b.OnLink != nil {
		key = bitRate(b.OnLink.UsableRateBps)
	}
	return []string{passBandWords(&b.Alice), passBandWords(&b.Bob), share(b.Share), tangle, perCent(b.QBERAligned.Key) + slash + perCent(b.QBERAligned.Check), key}
}

func passBandWords(p *source.PassBand) string {
	if p.FromNm == nil || p.ToNm == nil {
		return "the bin at " + digits(p.CentreNm, 7)
	}
	return digits(*p.FromNm, 7) + " to " + digits(*p.ToNm, 7)
}
