package report

import (
	"html/template"

	"pairspan/scenarios/source"
)

// Measures of a histogram, and what is shown of its peak by itself.
const (
	histogramHeight = 250.0
	peakHeight      = 170.0
	peakReach       = 2.5  // to both sides, in FWHM
	peakIsSmall     = 16.0 // FWHM in the whole from which the peak gets a drawing of its own
)

// drawHistogram draws the whole histogram and, where the peak is a small part
// of it, the peak by itself below.
func drawHistogram(f *figure, z size, r *source.DelayResult) template.HTML {
	d := &drawing{width: z.Width}
	half := r.BinWidthPs / 2
	lo, hi := span(r.Bins[0].DelayPs-half, r.Bins[len(r.Bins)-1].DelayPs+half)
	a := &axes{left: yGutter, right: z.Width - 12, top: panelHead, bottom: panelHead + histogramHeight, xLo: lo, xHi: hi}
	d.text("strong", fromHere, 0, 13, "Counts per bin")
	drawBins(d, a, r, r.Bins)
	a.drawX(d, tickRoom, "delay, ps", true)
	d.height = a.bottom + xGutter
	width, at := valueOf(r.FWHMPs), valueOf(r.DelayPs)
	if near := binsNear(r, at, peakReach*width); width > 0 && hi-lo > peakIsSmall*width && len(near) > 2 {
		top := d.height + 8
		d.text("strong", fromHere, 0, top+13, "The peak by itself")
		b := &axes{left: a.left, right: a.right, top: top + panelHead, bottom: top + panelHead + peakHeight}
		b.xLo, b.xHi = span(near[0].DelayPs-half, near[len(near)-1].DelayPs+half)
		drawBins(d, b, r, near)
		b.drawX(d, tickRoom, "delay, ps", true)
		d.height = b.bottom + xGutter
	}
	return d.done(f.ID, z.Name, f.Title, f.Finding)
}

// binsNear returns the bins up to so far from a delay.
func binsNear(r *source.DelayResult, at, reach float64) []source.DelayBin {
	from, to := 0, len(r.Bins)
	for from < to && r.Bins[from].DelayPs < at-reach {
		from++
	}
	for to > from && r.Bins[to-1].DelayPs > at+reach {
		to--
	}
	return r.Bins[from:to]
}

// drawBins draws counts as steps and the fit as a line. Where there are more
// bins than pixels, each pixel gets the least and the most of its bins, so that
// no peak is lost.
func drawBins(d *drawing, a *axes, r *source.DelayResult, bins []source.DelayBin) {
	high, half := 0.0, r.BinWidthPs/2
	for i := range bins {
		high = max(high, bins[i].Counts, bins[i].Fitted)
	}
	a.yLo, a.yHi = fromZero(high)
	a.drawY(d, 5)
	group := 1 + len(bins)/int(a.right-a.left)
	parts := []any{"M", a.left, a.bottom}
	var fitX, fitY []float64
	for from := 0; from < len(bins); from += group {
		to := min(from+group, len(bins))
		lo, hi, fit := bins[from].Counts, bins[from].Counts, bins[from].Fitted
		for _, b := range bins[from:to] {
			lo, hi, fit = min(lo, b.Counts), max(hi, b.Counts), max(fit, b.Fitted)
		}
		left, right := a.x(bins[from].DelayPs-half), a.x(bins[to-1].DelayPs+half)
		parts = append(parts, "L", left, a.y(hi), "L", right, a.y(hi))
		if lo < hi {
			parts = append(parts, "L", right, a.y(lo))
		}
		fitX, fitY = append(fitX, (left+right)/2), append(fitY, a.y(fit))
	}
	parts = append(parts, "L", a.right, a.bottom, "Z")
	d.path("histogram", parts...)
	d.curve("fit-line", fitX, fitY)
}
