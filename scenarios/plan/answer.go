package plan

import (
	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// answer judges one case at its installed distance.
func (a *asker) answer(installed *Point) Answer {
	ans := Answer{Judged: "asymptotic", Parts: []PartFactor{}}
	if a.s.Finite() {
		ans.Judged = "finite"
	}
	if a.need > 0 {
		ans.NeedBps = number(a.need)
	}
	if a.unknown {
		a.answerUnknown(&ans)
	} else {
		a.answerKnown(&ans)
	}
	ans.Sentence = a.sentence(&ans, installed)
	ans.RestsOn = a.restsOn()
	if first := ans.FirstInTheWay; first != nil {
		ans.InTheWay = a.inWords(first.Part, installed)
	}
	return ans
}

// answerUnknown says what a pair rate without a state would take.
func (a *asker) answerUnknown(ans *Answer) {
	ans.Outcome = StateUnknown
	ans.LeastTangle = a.leastTangle(judged)
	ans.LeastTangleAtBest = a.leastTangle(atBest)
}

// leastTangle returns the least tangle that meets the need, nil if none does.
func (a *asker) leastTangle(r role) *float64 {
	km := a.s.DistanceKm()
	ok := func(tangle float64) bool {
		s := a.s.Clone()
		s.Source.State = sources.FromTangle(tangle)
		return newAsker(s).meets(newAsker(s).at(km, r, nil))
	}
	switch {
	case !ok(1):
		return nil
	case ok(0):
		return number(0)
	}
	return number(crossing(1, 0, ok))
}

// answerKnown judges a state that is known or bounded.
func (a *asker) answerKnown(ans *Answer) {
	km := a.s.DistanceKm()
	var now [3]reply
	for _, r := range []role{judged, nominal, atBest} {
		now[r] = a.at(km, r, nil)
	}
	state := "at_worst"
	if a.given {
		state = "given"
	}
	ans.State = &state
	ans.Outcome = a.outcome(now)
	ans.UsableRateBps = number(now[judged].rate.UsableBps)
	if a.need > 0 {
		ans.TimesNeed = number(now[judged].rate.UsableBps / a.need)
	}
	own := a.member(judged, now[judged])
	ans.MarginDB, ans.MarginReason = own.MarginDB, own.MarginReason
	ans.ReachKm, ans.ReachReason = own.ReachKm, own.ReachReason
	ans.MarginAs = a.marginAs(own.MarginDB)
	if !a.given {
		n, b := a.member(nominal, now[nominal]), a.member(atBest, now[atBest])
		ans.Nominal, ans.AtBest = &n, &b
	}
	if parts := a.inTheWay(now[judged]); len(parts) > 0 {
		ans.Parts, ans.FirstInTheWay = parts, &parts[0]
	}
}

// outcome returns the first outcome that applies.
func (a *asker) outcome(now [3]reply) Outcome {
	switch {
	case now[atBest].rate.UsableBps == 0:
		return NoKey
	case a.need == 0:
		return NoNeed
	case a.meets(now[judged]):
		return Met
	case a.meets(now[nominal]):
		return MetIfNominal
	case a.meets(now[atBest]):
		return MetIfBest
	}
	return NotMet
}

// member answers for one member of the interval.
func (a *asker) member(r role, now reply) MemberAnswer {
	met := a.meets(now)
	m := MemberAnswer{UsableRateBps: now.rate.UsableBps}
	m.MarginDB, m.MarginReason = orReason(a.margin(r, met))
	m.ReachKm, m.ReachReason = orReason(a.reach(r, met))
	return m
}

// orReason returns a figure, or the reason why there is none.
func orReason(x float64, reason string) (*float64, *string) {
	if reason != "" {
		return nil, &reason
	}
	return &x, nil
}

// marginAs puts a margin in field units of the arm that lengthens; of both,
// each with its share.
func (a *asker) marginAs(db *float64) *MarginAs {
	if db == nil {
		return nil
	}
	share := a.s.Shares()
	var perKm, perPair, perSplice float64
	for i := range share {
		perKm += share[i] * a.s.Attenuation(i)
		perPair += share[i] * a.s.Arms[i].ConnectorPairLossDB
		perSplice += share[i] * a.s.Arms[i].SpliceLossDB
	}
	return &MarginAs{number(*db / perKm), number(*db / perPair), number(*db / perSplice)}
}

// qberParts returns what the key basis's QBER is made of at the installed point.
func (a *asker) qberParts() *QBERParts {
	if a.unknown {
		return nil
	}
	now := a.at(a.s.DistanceKm(), nominal, nil)
	e := now.link.ErrorParts(now.setting)
	return &QBERParts{e.State, e.Alignment, e.MultiPair, e.DetectorNoise, e.OutsideLight}
}

// lossBudget lists each arm's losses at the installed distance.
func lossBudget(s *scenarios.Scenario) LossBudget {
	lengths := s.Lengths(s.DistanceKm())
	var arms [2][]LossItem
	for i := range arms {
		for _, item := range s.LossItems(i, lengths[i]) {
			arms[i] = append(arms[i], LossItem{item.Item, float64(item.Loss)})
		}
	}
	return LossBudget{arms[keyrate.Alice], arms[keyrate.Bob]}
}
