package source

import (
	"fmt"

	"pairspan/scenarios"
)

// sayLink says what of the scenario the map replaces.
func (r *SpectralMap) sayLink(s *scenarios.Scenario) {
	r.Told = append(r.Told, "The scenario's pair rate counts as that of the whole map. Behind pass bands their width stands for the bandwidth, and their middle for the wavelength; pairs of which one photon passes stay as light without a partner.")
	for arm, edges := range [2][]float64{r.AliceEdgesNm, r.BobEdgesNm} {
		from, to := edges[0], edges[len(edges)-1]
		if nm := s.Source.WavelengthNm[arm]; to > from && (nm < from || nm > to) {
			r.Doubts = append(r.Doubts, fmt.Sprintf("The scenario's wavelength of %s, %.6g nm, lies outside the map, %.6g to %.6g nm: is it a map of this source? The map's wavelengths were used.", armNames[arm], nm, from, to))
		}
	}
}

// sentence says in words what the map and the best bands come to.
func (r *SpectralMap) sentence() string {
	all := fmt.Sprintf("all %d x %d bins", len(r.AliceNm), len(r.BobNm))
	whole := r.Whole.OnLink
	switch {
	case whole == nil:
		return fmt.Sprintf("The pairs of %s together have a %s%s.", all, r.Whole.tangleText(), r.rangeText())
	case r.Best == nil:
		return fmt.Sprintf("No pair of pass bands gives a key on this link: the pairs of %s together have a %s%s.", all, r.Whole.tangleText(), r.rangeText())
	}
	best := r.Best
	rate := three(best.OnLink.UsableRateBps) + " bit/s"
	if best.Alice.Bins == len(r.AliceNm) && best.Bob.Bins == len(r.BobNm) {
		return fmt.Sprintf("No narrower pass bands give more key on this link than %s: %s, at a %s.", all, rate, best.tangleText())
	}
	text := fmt.Sprintf("Pass bands %s and %s give most key on this link: %s", best.Alice.text("Alice"), best.Bob.text("Bob"), rate)
	switch {
	case whole.UsableRateBps > 0:
		text += fmt.Sprintf(", where %s give %s.", all, three(whole.UsableRateBps))
	default:
		text += fmt.Sprintf(", where %s give none.", all)
	}
	text += fmt.Sprintf(" They pass %s of the pairs, with a tangle of %s instead of %s.", perCent(best.Share), best.tangleFigure(), r.Whole.tangleFigure())
	if best.Tangle == nil {
		text += " Nothing is known at worst."
	}
	return text
}

// tangleText names the tangle, as far as it is known.
func (b *SpectralBand) tangleText() string {
	if b.Tangle == nil {
		return "tangle of " + b.tangleFigure() + ", and nothing known at worst"
	}
	return "tangle of " + b.tangleFigure()
}

func (b *SpectralBand) tangleFigure() string {
	if b.Tangle == nil {
		return "at most " + three(*b.TangleAtMost)
	}
	return three(*b.Tangle)
}

// worthNaming is the share of the pairs from which a bin's tangle is told.
const worthNaming = 0.01

// rangeText names the range of the tangles of bins with a good part of the
// pairs.
func (r *SpectralMap) rangeText() string {
	least, most, n := 1.0, 0.0, 0
	for _, b := range r.Bins {
		if b.Share >= worthNaming {
			least, most, n = min(least, b.Tangle), max(most, b.Tangle), n+1
		}
	}
	if n < 2 {
		return ""
	}
	return fmt.Sprintf("; in the %d bins with at least 1 %% of the pairs each it lies between %s and %s", n, three(least), three(most))
}

// text names a pass band.
func (p PassBand) text(whose string) string {
	if p.WidthNm == nil {
		return fmt.Sprintf("of %s's single bin", whose)
	}
	return fmt.Sprintf("of %s nm for %s (%.7g to %.7g nm)", three(*p.WidthNm), whose, *p.FromNm, *p.ToNm)
}
