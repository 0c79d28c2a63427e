package plan

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// sentence is the answer in words.
func (a *asker) sentence(ans *Answer, p *Point) string {
	km := distance(p.DistanceKm)
	switch ans.Outcome {
	case StateUnknown:
		return a.unknownSentence(ans)
	case NoKey:
		return a.noKeySentence(ans, p)
	case NoNeed:
		return a.noNeedSentence(ans, km)
	case Met:
		return fmt.Sprintf("Yes, with %s to spare: %s at %s, %s times the %s, for %s, analysers aligned.",
			spare(ans), against(*ans.UsableRateBps, a.need)+" bit/s", km, two(*ans.TimesNeed), a.needed(*ans.UsableRateBps, ""), a.anyState())
	case MetIfNominal:
		return fmt.Sprintf("Not for sure: a %s alone makes sure of only %s of the %s; a Werner state would give %s. %s",
			a.figure("of "), against(*ans.UsableRateBps, a.need), a.needed(*ans.UsableRateBps, " at "+km), against(ans.Nominal.UsableRateBps, a.need), twoVisibilities)
	case MetIfBest:
		return fmt.Sprintf("Only with the best state: %s of the %s for a dephased pair of %s, %s for any. %s",
			against(ans.AtBest.UsableRateBps, a.need), a.needed(ans.AtBest.UsableRateBps, " at "+km), a.figure(""), against(*ans.UsableRateBps, a.need), twoVisibilities)
	}
	return a.notMetSentence(ans, p)
}

const twoVisibilities = "Visibilities in two bases would settle most of it."

func (a *asker) notMetSentence(ans *Answer, p *Point) string {
	best, who, aim := *ans.UsableRateBps, "", "To reach "
	if ans.AtBest != nil {
		best, who, aim = ans.AtBest.UsableRateBps, "even with the best state ", "To be sure of "
	}
	s := fmt.Sprintf("No: %s%s of the %s. ", who, against(best, a.need), a.needed(best, " at "+distance(p.DistanceKm)))
	if ans.MarginDB != nil {
		s += fmt.Sprintf("%s%s, %s dB of loss must go.", aim, a.neededBps(best), two(-*ans.MarginDB))
	} else {
		s += "No loss that could go would be enough."
	}
	return s + a.firstSentence(ans, p)
}

// noKeySentence tells a QBER too high from a block too small.
func (a *asker) noKeySentence(ans *Answer, p *Point) string {
	q, secret := *p.QBER, *p.SecretRateBps
	if p.Bounds != nil {
		q, secret = p.Bounds.AtBest.QBER, p.Bounds.AtBest.SecretRateBps
	}
	f := a.s.ErrorCorrectionF
	var why string
	switch same := math.Abs(q.Key-q.Check) < 0.0005; {
	case secret > 0 && a.s.Finite():
		why = fmt.Sprintf("blocks of %s sifted bits are too small at a QBER of %s", bare(a.s.SiftedBitsPerBlock), perCents(q))
	case same:
		why = fmt.Sprintf("the QBER of %s is above the %s that error correction with f = %s allows",
			perCent(q.Key), perCent(keyrate.Threshold(f)), plain(f))
	default:
		why = fmt.Sprintf("a QBER of %s leaves nothing after error correction with f = %s", perCents(q), plain(f))
	}
	return fmt.Sprintf("No key at %s: %s.", distance(p.DistanceKm), why) + a.firstSentence(ans, p)
}

func (a *asker) noNeedSentence(ans *Answer, km string) string {
	const noNeed = " No need was stated, so there is no yes or no."
	if *ans.UsableRateBps == 0 {
		return fmt.Sprintf("A %s alone makes sure of no key at %s; the best state would give %s.", a.figure("of "), km, bps(ans.AtBest.UsableRateBps)) + noNeed
	}
	end := "there is key as far as the search goes"
	if ans.ReachKm != nil {
		end = "the key ends at " + distance(*ans.ReachKm)
	}
	return fmt.Sprintf("%s at %s; %s.", bps(*ans.UsableRateBps), km, end) + noNeed
}

func (a *asker) unknownSentence(ans *Answer) string {
	const start = "No answer yet: a pair rate says nothing of entanglement. "
	aim := a.aim()
	switch {
	case ans.LeastTangleAtBest == nil:
		return start + "On this link no state is enough for " + aim + "."
	case ans.LeastTangle == nil:
		return start + fmt.Sprintf("No tangle alone makes sure of %s on this link; below %s no state is enough.", aim, tangleDown(*ans.LeastTangleAtBest))
	}
	return start + fmt.Sprintf("This link needs a tangle of at least %s to be sure of %s; below %s no state is enough.",
		tangleUp(*ans.LeastTangle), aim, tangleDown(*ans.LeastTangleAtBest))
}

// tangleUp rounds a least tangle up, so that the figure shown is enough.
func tangleUp(t float64) string { return strconv.FormatFloat(math.Ceil(t*100)/100, 'f', 2, 64) }

// tangleDown rounds down, so that below the figure shown nothing is enough.
func tangleDown(t float64) string { return strconv.FormatFloat(math.Floor(t*100)/100, 'f', 2, 64) }

func (a *asker) firstSentence(ans *Answer, p *Point) string {
	if ans.FirstInTheWay == nil {
		return ""
	}
	return " First in the way: " + a.inWords(ans.FirstInTheWay.Part, p) + "."
}

// anyState says for which states the judged rate holds.
func (a *asker) anyState() string {
	if a.given {
		return "the " + a.figure("")
	}
	return "any state of " + a.figure("")
}

// figure names what is known of the state; of stands between the name of a
// figure and its value.
func (a *asker) figure(of string) string {
	s := a.s.Source.State
	switch s.Kind {
	case sources.TangleKind:
		return "tangle " + of + plain(s.Figure)
	case sources.ConcurrenceKind:
		return "concurrence " + of + plain(s.Figure)
	case sources.FidelityKind:
		return "fidelity " + of + plain(s.Figure)
	case sources.VisibilityKind:
		return fmt.Sprintf("visibilities %s%s and %s", of, plain(s.VisibilityHV), plain(s.VisibilityDA))
	}
	return "density matrix given"
}

// restsOn says what the answer is based on.
func (a *asker) restsOn() string {
	var parts []string
	switch {
	case a.unknown:
		parts = append(parts, "a source whose state is not known")
	case a.given:
		parts = append(parts, "the "+a.figure(""))
	default:
		parts = append(parts, "a "+a.figure("of ")+", which leaves the state open")
	}
	if a.s.Finite() {
		parts = append(parts, fmt.Sprintf("blocks of %s sifted bits (finite-size key)", bare(a.s.SiftedBitsPerBlock)))
	} else {
		parts = append(parts, "the asymptotic rate, without finite-size effects")
	}
	if n := a.figuresByDefault(); n > 0 {
		parts = append(parts, fmt.Sprintf("%d figures at their defaults", n))
	}
	return "Rests on " + strings.Join(parts, "; ") + "."
}

// figuresByDefault counts what the file leaves out of the link itself.
func (a *asker) figuresByDefault() (n int) {
	for _, d := range a.s.DefaultsUsed {
		if !strings.HasPrefix(d.Entry, "distance.") && !strings.HasPrefix(d.Entry, "uncertainty.") && !scenarios.FromMap(d.Source) {
			n++
		}
	}
	return n
}

// partWords are the parts of a link as people call them.
var partWords = map[string]string{
	"state":         "the state of the pairs",
	"alignment":     "the alignment of the analysers",
	"coupling":      "the fixed losses (coupling, filters, analyser)",
	"detectors":     "the detectors",
	"dark_counts":   "dark counts",
	"outside_light": "light from outside",
	"timing":        "the spread of the arrival times",
	"pump":          "the pair rate",
	"fibre":         "the fibre",
	"setting":       "the setting",
}

// InWords returns a part of the link as people call it.
func InWords(part string) string { return partWords[part] }

const blindWorthSaying = 0.1 // share of the time

// inWords names a part, and of the detectors what is wrong with them.
func (a *asker) inWords(part string, p *Point) string {
	words := partWords[part]
	if part != "detectors" {
		return words
	}
	who, live, arm := "Alice's", p.LiveShare.Alice, scenarios.Alice
	if p.LiveShare.Bob < live {
		who, live, arm = "Bob's", p.LiveShare.Bob, scenarios.Bob
	}
	if blind := 1 - live; blind >= blindWorthSaying {
		return fmt.Sprintf("%s (each of %s is blind %.0f %% of the time)", words, who, 100*blind)
	}
	for i, name := range [2]string{"Alice's", "Bob's"} {
		if a.eff(i) < a.eff(arm) {
			who, arm = name, i
		}
	}
	return fmt.Sprintf("%s (%s see %s of the photons)", words, who, perCent(a.eff(arm)))
}

func (a *asker) eff(arm int) float64 { return a.s.Detector(a.s.Arms[arm].Detector).Efficiency }

// spare is the margin of a met need.
func spare(ans *Answer) string {
	if ans.MarginDB == nil {
		return "more than 300 dB"
	}
	return two(*ans.MarginDB) + " dB"
}
