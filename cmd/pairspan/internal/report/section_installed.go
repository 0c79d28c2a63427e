package report

import (
	"strconv"

	"pairspan/scenarios/plan"
)

// installedTable follows the link as installed from pairs to usable key.
func installedTable(c *plan.Case) table {
	p := &c.Installed
	t := table{ID: "installed", Caption: "From pairs to usable key, in full", Quiet: true, Stack: true}
	t.Head = []string{"", "Given state"}
	if p.Bounds != nil {
		t.Head = []string{"", "Nominal state", "At worst", "At best"}
	}
	add := func(head string, cells ...string) {
		for len(cells) < len(t.Head)-1 {
			cells = append(cells, "")
		}
		t.add(head, cells[:len(t.Head)-1]...)
	}
	// A figure of one state may differ in the others: settings are searched for each.
	three := func(head, given string, of func(*plan.Bound) string) {
		if p.Bounds == nil {
			add(head, given)
			return
		}
		add(head, given, of(&p.Bounds.AtWorst), of(&p.Bounds.AtBest))
	}
	add("Length, Alice / Bob", both(p.LengthKm, km))
	add("Optical loss, Alice / Bob", both(p.LossDB, decibels))
	three("Pair rate", countHz(p.PairRateHz), func(b *plan.Bound) string { return countHz(b.PairRateHz) })
	three("Coincidence window", orNone(p.WindowPs, picosec), func(b *plan.Bound) string { return picosec(b.WindowPs) })
	add("Pairs inside the window", orNone(p.WindowShare, share))
	add("Pairs per slot", orNone(p.PairsPerSlot, func(v float64) string { return digits(v, 3) }))
	three("Share of the key basis", share(p.KeyBasisShare), func(b *plan.Bound) string { return share(b.KeyBasisShare) })
	add("Singles, Alice / Bob", both(p.SinglesHz, countHz))
	add("Counts per detector, Alice / Bob", both(p.CountsPerDetectorHz, countHz))
	add("Detectors live, Alice / Bob", both(p.LiveShare, share))
	add("Detectors needed, Alice / Bob", strconv.Itoa(p.DetectorsNeeded.Alice)+slash+strconv.Itoa(p.DetectorsNeeded.Bob))
	add("Coincidences", orNone(p.CoincidencesHz, countHz))
	t.Rows = append(t.Rows, row{Head: "of them accidental", Sub: true, Cells: make([]string, len(t.Head)-1)})
	t.Rows[len(t.Rows)-1].Cells[0] = orNone(p.AccidentalsHz, countHz)
	add("True to accidental (CAR)", orNone(p.CAR, func(v float64) string { return digits(v, 3) }))
	add("Sifted rate", orNone(p.SiftedBps, bitRate))
	three("QBER, key / check basis", pairOfErrors(p.QBER), func(b *plan.Bound) string { return pairOfErrors(&b.QBER) })
	three("Secret rate, asymptotic", orNone(p.SecretRateBps, bitRate), func(b *plan.Bound) string { return bitRate(b.SecretRateBps) })
	if p.FiniteSecretRateBps != nil {
		add("Secret rate, finite blocks", bitRate(*p.FiniteSecretRateBps))
	}
	add("Duty cycle", share(c.DutyCycle))
	three("Usable rate", orNone(p.UsableRateBps, bitRate), func(b *plan.Bound) string { return bitRate(b.UsableRateBps) })
	return t
}

func both(v plan.PerArm, format func(float64) string) string {
	return format(v.Alice) + slash + format(v.Bob)
}

func pairOfErrors(q *plan.QBER) string {
	if q == nil {
		return none
	}
	return perCentBare(q.Key) + slash + perCent(q.Check)
}

// partsTable ranks the parts of the link by what an ideal one would bring.
func partsTable(c *plan.Case) *table {
	if len(c.Answer.Parts) == 0 {
		return nil
	}
	t := &table{ID: "parts", Caption: "What an ideal part in both arms would make of the usable rate", Head: []string{"Ideal part", "Usable rate"}}
	for _, p := range c.Answer.Parts {
		t.add(partWords(p.Part), factorWords(p.Factor))
	}
	return t
}

func factorWords(f *float64) string {
	if f == nil {
		return "from none to some"
	}
	return "× " + digits(*f, 3)
}
