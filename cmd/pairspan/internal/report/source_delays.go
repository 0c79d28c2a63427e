package report

import (
	"pairspan/scenarios/source"
)

// delaySection is what a histogram of delays says.
type delaySection struct {
	Histogram *figure
	Facts     table
	Told      []string
	Doubts    []doubt
}

func delaysOf(r *source.DelayResult) *delaySection {
	if r == nil {
		return nil
	}
	return &delaySection{Histogram: delayFigure(r), Facts: delayFacts(r), Told: sentences(r.Told)}
}

func delayFacts(r *source.DelayResult) table {
	t := table{ID: "delay-figures", Caption: "Figures of the histogram"}
	var known []source.Figure
	add := func(name, note string, f source.Figure) {
		if f.Value != nil {
			known = append(known, f)
			t.Rows = append(t.Rows, row{Head: name, Note: note, Cells: []string{measured(f, 1)}})
		}
	}
	add("Delay, ps", "middle of the peak that holds the pairs", r.DelayPs)
	add("FWHM, ps", "", r.FWHMPs)
	add("Coincidences", "counts in that peak above floor and side peaks", r.Coincidences)
	add("Floor, counts per bin", "", r.FloorPerBin)
	add("Period of the pulses, ps", "", r.PeriodPs)
	add("Side peak, counts", "mean of "+itoa(r.SidePeaks), r.SidePeak)
	if r.WindowPs != nil {
		add("Share of the pairs in a window of "+picosec(*r.WindowPs), "", r.WindowShare)
		add("Coincidences in that window", "", r.InWindow)
		add("Accidentals in that window", "", r.AccidentalsIn)
		add("Coincidences to accidentals", "both in that window", r.CAR)
	}
	if r.CoincidencesLimit != nil {
		t.Rows = append(t.Rows, row{Head: "Coincidences that would have been found", Note: "no peak stands out; a peak of more would", Cells: []string{grouped(*r.CoincidencesLimit, 3)}})
	}
	addQuality(&t, r.Chi2, r.DegreesOfFreedom, r.Chi2PerDof, r.PValue, "")
	t.Head = []string{"Figure", valueHead(known)}
	return t
}

// delayFigure draws the histogram under the fit.
func delayFigure(r *source.DelayResult) *figure {
	if len(r.Bins) == 0 {
		return nil
	}
	f := &figure{
		ID: "delays", Title: "Histogram of delays", Finding: delayFinding(r),
		Reading: "Steps: counts of each bin of " + picosec(r.BinWidthPs) + "; line: the fit.",
	}
	t := table{ID: "delays-data", Caption: "Counts of each bin", Wide: true, Head: []string{"Delay, ps", "Counted", "Fitted"}}
	step := tableStep(len(r.Bins), 3)
	for i := 0; i < len(r.Bins); i += step {
		b := &r.Bins[i]
		t.add(grouped(b.DelayPs, 7), grouped(b.Counts, 9), grouped(b.Fitted, 4))
	}
	f.Tables = []table{t}
	if step > 1 {
		f.Reading += " The table holds every " + ordinal(step) + " bin; the JSON has them all."
	}
	for _, z := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, drawHistogram(f, z, r))
	}
	return f
}

func delayFinding(r *source.DelayResult) string {
	if r.Coincidences.Value == nil {
		said := "No peak stands out of the " + itoa(len(r.Bins)) + " bins"
		if r.CoincidencesLimit != nil {
			said += "; one of " + grouped(*r.CoincidencesLimit, 3) + " coincidences would have"
		}
		return said + "."
	}
	said := "A peak of " + measured(r.Coincidences, 1) + " coincidences at " + measured(r.DelayPs, 1) + nbsp + "ps, " + measured(r.FWHMPs, 1) + nbsp + "ps wide (FWHM)"
	if r.PeriodPs.Value != nil {
		said += ", among side peaks " + measured(r.PeriodPs, 1) + nbsp + "ps apart"
	} else {
		said += ", on a floor of " + measured(r.FloorPerBin, 1) + " counts per bin"
	}
	return said + "."
}
