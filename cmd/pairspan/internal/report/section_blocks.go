package report

import "pairspan/scenarios/plan"

// needsTable is the need in all its forms; nil without one.
func needsTable(n *plan.Needs) *table {
	if n == nil {
		return nil
	}
	of := " of a connection"
	if n.Connections != 1 {
		of = " of each of " + grouped(n.Connections, 6) + " connections"
	}
	t := &table{ID: "needs", Wide: true, Caption: "The need in its three forms; stated as " + n.StatedAs, Head: []string{"Form", "Need"}}
	t.add("Secret key rate", grouped(n.SecretRateBps, 4)+nbsp+"bit/s")
	t.add("A new AES-256 key"+of+" every", seconds(n.AES256RenewalS))
	t.add("Key a day", grouped(n.KeyBitsPerDay, 4)+nbsp+"bit")
	return t
}

// seconds writes a time, in hours or days too where it is long.
func seconds(v float64) string {
	s := grouped(v, 3) + nbsp + "s"
	switch {
	case v >= 2*86400:
		s += " (" + digits(v/86400, 3) + nbsp + "d)"
	case v >= 2*3600:
		s += " (" + digits(v/3600, 3) + nbsp + "h)"
	}
	return s
}

// blockRemark is the finite-size key of the scenario as filed; nil without one.
func blockRemark(c *plan.Case) *remark {
	b := c.Block
	if b == nil {
		return nil
	}
	bits := func(v float64) string { return grouped(v, 4) + nbsp + "bit" }
	t := table{ID: "block", Wide: true, Caption: "Key of finite blocks" + atWorst(c) + ", at the installed length", Head: []string{"Figure", "Value"}}
	t.add("Sifted bits of a block", bits(b.SiftedBits))
	t.add("Secret bits of a block, before authentication", bits(b.SecretBits))
	t.add("Spent on authentication, a block", bits(b.AuthenticationBits))
	t.add("Failure probability of a block", digits(b.EpsilonTotal, 3))
	t.add("First key after", orNone(b.FirstKeyS, seconds))
	t.add("Smallest block with any key", orNone(b.SmallestSiftedBits, bits))
	t.add("AES-256 keys an hour", grouped(b.AES256PerHour, 4))
	t.add("AES-256 keys a day", grouped(b.AES256PerDay, 4))
	t.add("Block that makes most key, a day’s sifting at most", orNone(b.BestSiftedBits, bits))
	t.add("Share of the key basis with it", orNone(b.BestKeyBasisShare, share))
	t.add("Usable rate with both", orNone(b.BestUsableRateBps, bitRate))
	t.add("Smallest block that makes 95"+nbsp+"% of that", orNone(b.EnoughSiftedBits, bits))
	t.add("Asymptotic rate of the key basis alone, at the share in use", bitRate(b.SameBasisSecretBps))
	return &remark{Sentence: b.Sentence, Tables: []table{t}, Note: "A dash: there is no key, so there is no such figure. Times count the duty cycle."}
}

// blocksFigure sets the finite-size rate beside what it tends to; nil where no
// block is stated.
func blocksFigure(p *plan.Plan) *figure {
	c := &p.Cases[0]
	finite := pick(c.Curve, func(q *plan.Point) *float64 { return q.FiniteSecretRateBps })
	if c.Block == nil || empty(finite) {
		return nil
	}
	f := &figure{ID: "blocks", Title: "Key of finite blocks against distance", Km: distances(c.Curve)}
	for _, s := range []series{
		{Name: "Asymptotic, both bases", Short: "asymptotic", Y: pick(c.Curve, func(q *plan.Point) *float64 { return q.SecretRateBps }), Look: look{Dash: "solid", Width: 2.6}, Ends: true},
		{Name: "Asymptotic, key basis alone", Short: "key basis alone", Y: pick(c.Curve, func(q *plan.Point) *float64 { return q.KeyBasisSecretBps }), Look: look{Colour: 1, Dash: "dashed", Symbol: "circle", Width: 1.8}, Ends: true},
		{Name: "Finite blocks", Short: "finite blocks", Y: finite, Look: look{Colour: 2, Dash: "dashdot", Symbol: "triangle", Width: 1.8}, Ends: true},
	} {
		if !empty(s.Y) {
			f.Series = append(f.Series, s)
		}
	}
	state := ""
	if c.Installed.Bounds != nil {
		state = " for the nominal state"
	}
	f.Finding = blocksFinding(c, state)
	f.Reading = "Secret rates" + state + ", before the duty cycle. With ever larger blocks the finite curve tends to the key basis’s part, not to the whole: the check basis is disclosed to bound the errors."
	f.overDistance(c, "Secret rates at each distance", "bit/s")
	f.rateAxis(nil)
	return f
}

func blocksFinding(c *plan.Case, state string) string {
	q := &c.Installed
	s := "At " + km(q.DistanceKm) + state + " blocks of " + grouped(c.Block.SiftedBits, 4) + " sifted bits leave " + orNone(q.FiniteSecretRateBps, bitRate)
	if q.KeyBasisSecretBps != nil {
		s += "; endless ones of the key basis alone " + bitRate(*q.KeyBasisSecretBps)
	}
	if q.SecretRateBps != nil {
		s += ", of both bases " + bitRate(*q.SecretRateBps)
	}
	return s + "."
}
