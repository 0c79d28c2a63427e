package plan

import (
	"slices"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// rule looks for one kind of doubtful but possible input. Which rules there
// are is the table in rules.go.
type rule struct {
	name  string
	check func(*watch) []doubt
}

// doubt is one suspicion. suspect puts the suspected value into a copy of the
// scenario, to learn what it would change; nil where there is none to try.
type doubt struct {
	entry    string
	sentence string
	suspect  func(*scenarios.Scenario)
}

// watch is what the rules look at: a scenario and its link at the installed
// distance. Without a state the rates of now are NaN, and no rule that needs
// them speaks.
type watch struct {
	s     *scenarios.Scenario
	now   reply
	parts keyrate.ErrorParts

	unrepeated string // see asker
}

// warnings applies every rule to the scenario as filed and then to the
// compared cases, where only what the filed one did not say is added. They are
// ordered by what they would change in the usable rate.
func warnings(asked []named) []Warning {
	found := []Warning{}
	change := map[string]float64{}
	for _, n := range asked {
		w := n.watch()
		for _, r := range rules {
			for _, d := range r.check(w) {
				id := r.name + " " + d.entry
				if _, said := change[id]; said {
					continue
				}
				warning := Warning{Rule: r.name, Entry: d.entry, Sentence: d.sentence}
				if n.name != scenarios.FiledName {
					warning.Sentence = ofCase(n.name) + warning.Sentence
				}
				warning.UsableRateBps, change[id] = n.suspected(d, w)
				found = append(found, warning)
			}
		}
	}
	slices.SortStableFunc(found, func(x, y Warning) int {
		switch d := change[y.Rule+" "+y.Entry] - change[x.Rule+" "+x.Entry]; {
		case d > 0:
			return 1
		case d < 0:
			return -1
		}
		return 0
	})
	return found
}

// ofCase begins a warning of a compared case.
func ofCase(name string) string { return "In case " + name + ": " }

func (a *asker) watch() *watch {
	km := a.s.DistanceKm()
	if a.unknown {
		l, p := a.s.Link(km, a.members(nominal)[0]), a.setting
		if p.WindowS == 0 {
			p.WindowS = nan
		}
		if a.s.Source.PumpAuto {
			p.PairRateHz = nan // at its ceiling, which nobody may set
		}
		return &watch{s: a.s, now: reply{l, p, l.Key(p)}, unrepeated: a.unrepeated}
	}
	now := a.at(km, nominal, nil)
	return &watch{a.s, now, now.link.ErrorParts(now.setting), a.unrepeated}
}

// suspected asks again with the suspected value in place: the usable rate
// then, and by how much it differs.
func (a *asker) suspected(d doubt, w *watch) (*float64, float64) {
	if d.suspect == nil || a.unknown {
		return nil, 0
	}
	s := a.s.Clone()
	d.suspect(s)
	km := a.s.DistanceKm()
	rate := newAsker(s).at(s.DistanceKm(), judged, nil).rate.UsableBps
	return number(rate), abs(rate - a.at(km, judged, nil).rate.UsableBps)
}
