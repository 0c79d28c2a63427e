package plan

import (
	"math"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/scenarios"
	"pairspan/sources"
)

// role is the part that a state plays in an answer. Where the state is known
// all roles are the same.
type role int

const (
	judged  role = iota // at worst; the given state where it is known
	nominal             // Werner's state, or the given one
	atBest              // whichever best member makes more key
)

// asker puts questions to one scenario.
type asker struct {
	s       *scenarios.Scenario
	setting keyrate.OperatingPoint
	need    float64 // bit/s; 0: any key
	given   bool
	unknown bool
	repeats []sources.State // of a tomography, the state as fitted first; see repeat

	unrepeated string // why there are none though the scenario asks for them; "" where it does not
}

func newAsker(s *scenarios.Scenario) *asker {
	a := &asker{s: s, setting: s.Setting()}
	if need := s.Need(); scenarios.Stated(need) {
		a.need = need
	}
	a.given = s.Source.State.Knowledge() == sources.Given
	a.unknown = s.Source.State.Knowledge() == sources.Unknown
	return a
}

// members returns the states that a role stands for.
func (a *asker) members(r role) []sources.Member {
	switch {
	case a.given || r == nominal:
		return []sources.Member{sources.Nominal}
	case r == judged:
		return []sources.Member{sources.AtWorst}
	case a.setting.KeyShare == 0.5 && !a.s.KeyShareAuto:
		// Where both bases see the same noise, the entropy's concavity
		// favours unequal errors.
		return []sources.Member{sources.BestDephased}
	}
	return []sources.Member{sources.BestDephased, sources.BestEven}
}

// reply is a link at the settings that the planner found for it.
type reply struct {
	link    keyrate.Link
	setting keyrate.OperatingPoint
	rate    keyrate.Rate
}

// settle finds the settings of a link and asks it for its key.
func (a *asker) settle(l keyrate.Link) reply {
	p := a.s.Settle(&l, a.setting)
	return reply{l, p, l.Key(p)}
}

// at asks at a distance, edited says how the link differs from the scenario's.
func (a *asker) at(km float64, r role, edited func(*keyrate.Link)) reply {
	var best reply
	for i, m := range a.members(r) {
		l := a.s.Link(km, m)
		if edited != nil {
			edited(&l)
		}
		if got := a.settle(l); i == 0 || better(got.rate, best.rate) {
			best = got
		}
	}
	return best
}

// better compares by what is judged, then by the asymptotic rate.
func better(x, y keyrate.Rate) bool {
	if x.UsableBps != y.UsableBps {
		return x.UsableBps > y.UsableBps
	}
	return x.SecretBps > y.SecretBps
}

// meets reports whether a rate is enough: the need, or any key without one.
func (a *asker) meets(r reply) bool {
	if a.need == 0 {
		return r.rate.UsableBps > 0
	}
	return r.rate.UsableBps >= a.need
}

// lose adds a loss to the arms that lengthen; a negative loss is removed.
func (a *asker) lose(db float64) func(*keyrate.Link) {
	share := a.s.Shares()
	return func(l *keyrate.Link) {
		for i := range l.Arms {
			l.Arms[i].Transmittance *= link.DB(share[i] * db).Transmittance()
		}
	}
}

// removable returns the greatest loss that can go: all of the optical loss of
// the arm that lengthens; of both, what keeps their proportion.
func (a *asker) removable() float64 {
	lengths, share := a.s.Lengths(a.s.DistanceKm()), a.s.Shares()
	most := math.Inf(1)
	for i := range share {
		if share[i] > 0 {
			most = min(most, float64(a.s.Loss(i, lengths[i]))/share[i])
		}
	}
	return most
}
