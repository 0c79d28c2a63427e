package report

import "pairspan/scenarios/source"

// sortDoubts puts each warning beside the figures that it is about, and the
// others into a section of their own.
func (g *sourcePage) sortDoubts(r *source.Result) {
	at, named := map[string]int{}, map[string]bool{}
	for i, w := range r.Warnings {
		d := doubt{ID: "doubt-" + itoa(i+1), Rule: ruleWords(w.Rule), Entry: w.Entry, Sentence: typeset(sentence(w.Sentence))}
		g.Doubts = append(g.Doubts, d)
		if _, seen := at[w.Sentence]; !seen {
			at[w.Sentence] = i
		}
		if name := d.Entry + " " + d.Rule; !named[name] {
			named[name] = true
			g.Named = append(g.Named, d)
		}
	}
	shown := map[int]bool{}
	beside := func(rule string, sentences []string) []doubt {
		out := make([]doubt, len(sentences))
		for k, s := range sentences {
			i, warned := at[s]
			if warned && !shown[i] {
				out[k], shown[i] = g.Doubts[i], true
				continue
			}
			out[k] = doubt{ID: "doubt-" + rule + "-" + itoa(k+1), Rule: rule, Sentence: typeset(sentence(s))}
		}
		return out
	}
	if r.PowerScan != nil {
		g.Scan.Doubts = beside("scan", r.PowerScan.Doubts)
	}
	if r.Delays != nil {
		g.Delays.Doubts = beside("delays", r.Delays.Doubts)
	}
	if r.SpectralMap != nil && g.Spectral != nil {
		g.Spectral.Doubts = beside("map", r.SpectralMap.Doubts)
	}
	for i, d := range g.Doubts {
		if !shown[i] {
			g.Rest = append(g.Rest, d)
		}
	}
}
