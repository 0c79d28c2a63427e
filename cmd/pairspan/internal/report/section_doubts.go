package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// doubt is one doubtful figure of the input and what it is worth.
type doubt struct {
	ID, Rule, Entry, Sentence, Worth string
}

// Sections beside whose figures a doubt can stand.
const (
	besideLosses = "losses"
	besideErrors = "errors"
	besideRates  = "rates"
	besideLink   = "link"
)

// doubts sorts the warnings by the section that they touch; all keeps the
// order of the plan, which is that of their worth.
func doubts(p *plan.Plan) (all []doubt, beside map[string][]doubt) {
	beside = map[string][]doubt{}
	need := p.Cases[0].Answer.NeedBps
	for i, w := range p.Warnings {
		d := doubt{ID: "doubt-" + itoa(i+1), Rule: strings.ReplaceAll(w.Rule, "-", " "), Entry: w.Entry, Sentence: w.Sentence}
		if w.UsableRateBps != nil {
			d.Worth = "With the suspected value the usable rate would be " + against(*w.UsableRateBps, need) + "."
		}
		all = append(all, d)
		beside[touches(w.Entry)] = append(beside[touches(w.Entry)], d)
	}
	return all, beside
}

// touches names the section whose figures an entry shapes most.
func touches(entry string) string {
	last := entry[strings.LastIndexByte(entry, '.')+1:]
	switch {
	case strings.HasPrefix(entry, "source.state"), last == "misalignment_error", strings.HasPrefix(last, "pmd"),
		strings.HasPrefix(last, "dark_counts"), strings.HasPrefix(last, "background"), last == "afterpulsing":
		return besideErrors
	case strings.Contains(last, "loss"), strings.HasPrefix(last, "length"), last == "fibre",
		strings.HasPrefix(last, "connector"), strings.HasPrefix(last, "splice"):
		return besideLosses
	case strings.HasPrefix(entry, "duty_cycle"), strings.HasPrefix(entry, "finite_key"), strings.HasPrefix(entry, "need"), strings.HasPrefix(entry, "error_correction"):
		return besideRates
	}
	return besideLink
}
