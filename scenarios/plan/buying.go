package plan

import (
	"context"
	"fmt"
	"strconv"

	"pairspan/scenarios"
)

// spareDB is the margin of a link with something to spare.
const spareDB = 3.0

// buying says what the cases cost, which to choose, and where that turns; nil
// where no price is stated for any detector in use. cases are answered, with
// their curves.
func buying(ctx context.Context, asked []named, cases []Case) (*Buying, error) {
	b, priced := &Buying{Costs: []Cost{}}, false
	for i, n := range asked {
		b.Costs = append(b.Costs, n.cost(&cases[i].Answer))
		for arm := range n.s.Arms {
			priced = priced || scenarios.Stated(n.detector(arm).Price)
		}
	}
	if !priced {
		return nil, ctx.Err()
	}
	cheapest := b.cheapest(cases, false)
	spare := b.cheapest(cases, true)
	b.Cheapest, b.CheapestSpare = b.name(cheapest), b.name(spare)
	b.Sentence = b.sentence(asked[0].asker, cheapest, spare)
	var err error
	if b.Overtakes, err = overtakes(ctx, asked, cases); err != nil {
		return nil, err
	}
	b.Turns, err = turns(ctx, asked, cases)
	return b, err
}

func (a *asker) detector(arm int) *scenarios.Detector { return a.s.Detector(a.s.Arms[arm].Detector) }

// cost adds up a case's detectors. A site price that is not stated is none; a
// price that is not stated makes no sum.
func (n named) cost(ans *Answer) Cost {
	c := Cost{
		Case:      n.name,
		Pieces:    PerArmCount{detectorsNeeded(n.s, scenarios.Alice), detectorsNeeded(n.s, scenarios.Bob)},
		MeetsNeed: ans.UsableRateBps != nil && n.enough(*ans.UsableRateBps),
		MarginDB:  ans.MarginDB,
	}
	sum := 0.0
	for arm, pieces := range []int{c.Pieces.Alice, c.Pieces.Bob} {
		det := n.detector(arm)
		sum += float64(pieces) * det.Price
		if scenarios.Stated(det.SitePrice) {
			sum += det.SitePrice
		}
	}
	c.Price = number(sum)
	if c.Price != nil && scenarios.Stated(n.s.Budget) {
		within := sum <= n.s.Budget
		c.WithinBudget = &within
	}
	return c
}

// none stands for no case.
const none = -1

// cheapest returns the cheapest case that meets the need, spare with a margin;
// of equal prices the one with the higher rate, then the first.
func (b *Buying) cheapest(cases []Case, spare bool) int {
	best := none
	for i, c := range b.Costs {
		if c.Price == nil || !c.MeetsNeed || spare && !toSpare(&cases[i].Answer) {
			continue
		}
		if best == none || *c.Price < *b.Costs[best].Price ||
			*c.Price == *b.Costs[best].Price && *cases[i].Answer.UsableRateBps > *cases[best].Answer.UsableRateBps {
			best = i
		}
	}
	return best
}

// toSpare reports whether the margin is comfortable; one beyond all searching is.
func toSpare(ans *Answer) bool {
	if ans.MarginDB == nil {
		return ans.MarginReason != nil && *ans.MarginReason == beyondSearch
	}
	return *ans.MarginDB >= spareDB
}

func (b *Buying) name(i int) *string {
	if i == none {
		return nil
	}
	return &b.Costs[i].Case
}

func (b *Buying) sentence(a *asker, cheapest, spare int) string {
	aim := "meets the need"
	if a.need == 0 {
		aim = "makes key"
	}
	unpriced := ""
	if n := b.unpriced(); n > 0 {
		unpriced = fmt.Sprintf(" Without a price: %d of %d cases.", n, len(b.Costs))
	}
	if cheapest == none {
		return "No case that has a price " + aim + "." + unpriced
	}
	s := "The cheapest case that " + aim + " is " + b.inWords(cheapest, a.s.Budget)
	switch spare {
	case none:
		s += "; none has 3 dB to spare."
	case cheapest:
		s += "; it has 3 dB to spare."
	default:
		s += "; with 3 dB to spare, " + b.inWords(spare, a.s.Budget) + "."
	}
	return s + unpriced
}

func (b *Buying) unpriced() (n int) {
	for _, c := range b.Costs {
		if c.Price == nil {
			n++
		}
	}
	return n
}

// inWords names a case with its price, and says how that compares with a budget.
func (b *Buying) inWords(i int, budget float64) string {
	c := &b.Costs[i]
	s := c.Case + " for " + money(*c.Price)
	switch {
	case c.WithinBudget == nil:
		return s
	case *c.WithinBudget:
		return s + " (within the budget of " + money(budget) + ")"
	}
	return s + " (above the budget of " + money(budget) + ")"
}

// money writes a sum in full, in whatever currency it is.
func money(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }
