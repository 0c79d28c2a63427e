package report

import (
	"slices"
	"strings"

	"pairspan/scenarios/plan"
)

// step is one stage from pairs made to usable key, short enough for the first
// screen.
type step struct {
	Name, Value string
	First       bool // the part that is first in the way acts here
}

// steps follow the link as installed: counts in the nominal state, errors and
// key as they are judged.
func steps(c *plan.Case) []step {
	p := &c.Installed
	judgedAs := ""
	secret, usable := p.SecretRateBps, p.UsableRateBps
	if p.Bounds != nil {
		judgedAs = ", at worst"
		secret, usable = &p.Bounds.AtWorst.SecretRateBps, &p.Bounds.AtWorst.UsableRateBps
	}
	usableName := "Usable key" + judgedAs
	if c.DutyCycle < 1 {
		usableName += " (" + share(c.DutyCycle) + " of the time)"
	}
	all := []step{
		{Name: "Pairs made", Value: countHz(p.PairRateHz)},
		{Name: "Lost on the way, Alice / Bob", Value: both(p.LossDB, decibels)},
		{Name: "Detectors live, Alice / Bob", Value: both(p.LiveShare, share)},
		{Name: "Coincidences", Value: orNone(p.CoincidencesHz, countHz)},
		{Name: "Sifted: both chose the same basis", Value: orNone(p.SiftedBps, bitRate)},
		{Name: "QBER, key / check basis" + judgedAs, Value: judgedQBER(p)},
		{Name: "Secret key, asymptotic" + judgedAs, Value: orNone(secret, bitRate)},
		{Name: usableName, Value: orNone(usable, bitRate)},
	}
	if c.Answer.Judged == "finite" {
		all[6].Name = "Secret key of endless blocks" + judgedAs
	}
	if first := c.Answer.FirstInTheWay; first != nil {
		if i := actsOn(first.Part); i >= 0 {
			all[i].First = true
		}
	}
	if b := c.PassBands; b != nil && parts(b) {
		all = slices.Insert(all, 1, step{Name: "Within both pass bands", Value: countHz(b.PairRateHz) + " (" + share(b.Share) + ")"})
	}
	return all
}

// actsOn says at which step a part of the link takes its share.
func actsOn(part string) int {
	switch part {
	case "pump":
		return 0
	case "coupling", "fibre":
		return 1
	case "detectors":
		return 2
	case "timing":
		return 3
	case "state", "alignment", "dark_counts", "outside_light":
		return 5
	}
	return -1
}

// firstInTheWay says which part it is and what an ideal one would bring.
func firstInTheWay(a *plan.Answer) string {
	if a.InTheWay == "" {
		return ""
	}
	s := sentence(a.InTheWay)
	if f := a.FirstInTheWay; f != nil && f.Factor != nil {
		s = strings.TrimSuffix(s, ".") + "; without that limit " + digits(*f.Factor, 3) + " times the key."
	}
	return s
}
