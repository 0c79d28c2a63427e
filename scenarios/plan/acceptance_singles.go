package plan

import (
	"math"
	"slices"

	"pairspan/keyrate"
	"pairspan/link"
)

// alikeDB is how far the two arms may differ and still lack, or have too
// much of, the same.
const alikeDB = 0.3

// account is one way to explain the singles as measured.
type account struct {
	fault    fault
	findings []string
	says     [2]string
}

// sameMiss is how much nearer to the other figures a less likely account must
// come: some pairs of faults do exactly what one fault does.
const sameMiss = 1e-3

// explainSingles finds what the singles say: loss where they are low, stray
// light where they are high, the pump where both are off alike. Where
// several would do, the coincidences and the CAR tell them apart.
func (g *diagnosis) explainSingles() {
	best, worth := account{fault: sound}, math.Inf(1)
	for _, a := range g.accounts() {
		if w := g.misses(a.fault); w < worth-sameMiss {
			best, worth = a, w
		}
	}
	g.add(best.fault)
	for i, says := range best.says {
		g.says[singles.of(i)] = says
	}
	g.findings = append(g.findings, best.findings...)
}

// misses says how far an account is from the other figures measured.
func (g *diagnosis) misses(f fault) (sum float64) {
	s := g.nominalWith(f)
	for _, r := range []reading{coincidences, car} {
		if g.has(r) && g.measured[r] > 0 && s[r] > 0 {
			sum += abs(math.Log(s[r] / g.measured[r]))
		}
	}
	return sum
}

// accounts are all the ways to explain the singles of both arms, the likeliest first.
func (g *diagnosis) accounts() (all []account) {
	if pump, ok := g.pumpAccount(); ok {
		all = append(all, pump)
	}
	for _, a := range g.armAccounts(keyrate.Alice) {
		for _, b := range g.armAccounts(keyrate.Bob) {
			all = append(all, account{
				fault:    both(a.fault, b.fault),
				findings: slices.Concat(a.findings, b.findings),
				says:     [2]string{a.says[keyrate.Alice], b.says[keyrate.Bob]},
			})
		}
	}
	return all
}

// armAccounts are the ways to explain one arm's singles on their own.
func (g *diagnosis) armAccounts(arm int) (ways []account) {
	r, who := singles.of(arm), personAt[arm]
	if !g.has(r) {
		return []account{{fault: sound}}
	}
	side := g.off(r, g.expected[r])
	add := func(f fault, finding, says string) {
		a := account{fault: f}
		if side != 0 {
			a.findings = []string{who + "'s singles: " + compared(g.measured[r], g.expected[r]) + " expected: " + finding + "."}
			a.says[arm] = says
		}
		ways = append(ways, a)
	}
	loss, lossOK := g.lossOf(arm, sound)
	background := strayInArm(arm)
	if x, ok := g.size(r, background.most, background.fault); ok && side > 0 {
		hz := bare(strayHz(x))
		finding := hz + " extra counts/s in each of " + who + "'s detectors (stray light, dark counts, afterpulses)"
		if lossOK && !g.has(coincidences) {
			finding += ", or " + decibels(-loss) + " dB less loss than planned; the coincidences will tell"
		}
		add(background.fault(x), finding, hz+" extra counts/s in each detector")
	}
	switch {
	case lossOK && loss >= 0:
		missing := decibels(loss) + " dB missing in " + who + "'s arm"
		add(lost(arm, loss), missing+": loss, or detector efficiency", missing)
	case lossOK:
		gained := decibels(-loss) + " dB less loss than planned"
		add(lost(arm, loss), gained+", or more detector efficiency", gained)
	case side < 0:
		const fewer = "fewer than with the source blocked"
		add(sound, fewer+"; a detector is off, or its noise is not as stated", fewer)
	case len(ways) == 0:
		const more = "more than the detectors can register"
		add(sound, more, more)
	}
	return ways
}

// lossOf returns the extra loss in an arm, on top of a fault, that makes its
// singles as measured; negative where light was gained.
func (g *diagnosis) lossOf(arm int, f fault) (db float64, ok bool) {
	r := singles.of(arm)
	at := func(db float64) float64 { return g.nominalWith(both(f, lost(arm, db)))[r] }
	if db, ok := sizeOf(mostExtraDB, g.measured[r], at); ok {
		return db, true
	}
	gain := float64(link.LossOf(g.link.Arms[arm].Transmittance))
	db, ok = sizeOf(gain, g.measured[r], func(db float64) float64 { return at(-db) })
	return -db, ok
}

// pumpAccount explains singles of both arms that are off alike by the pair
// rate, and what one arm lacks besides by a loss.
func (g *diagnosis) pumpAccount() (a account, ok bool) {
	alice, bob := singles.of(keyrate.Alice), singles.of(keyrate.Bob)
	side := g.off(alice, g.expected[alice])
	if side == 0 || side != g.off(bob, g.expected[bob]) {
		return a, false
	}
	pump := func(db float64) fault { return pumped(float64(side) * db) }
	x, okAlice := g.size(alice, mostPumpingDB, pump)
	y, okBob := g.size(bob, mostPumpingDB, pump)
	if !okAlice || !okBob || abs(x-y) > alikeDB {
		return a, false
	}
	db, word, others := min(x, y), "fewer", "loss in both arms"
	if side > 0 {
		db, word, others = max(x, y), "more", "stray light or less loss in both arms"
	}
	says := decibels(db) + " dB " + word + " pairs than planned"
	finding := "Singles of both arms are off alike: " + says + ": the pump, or the coupling"
	if !g.has(coincidences) {
		finding += "; or " + others + ", the coincidences will tell"
	}
	a = account{pump(db), []string{finding + "."}, [2]string{says, says}}
	g.restOfArms(&a)
	return a, true
}

// restOfArms adds the loss that an arm has besides what an account explains.
func (g *diagnosis) restOfArms(a *account) {
	pumpAlone := g.nominalWith(a.fault)
	for i := range g.link.Arms {
		rest, ok := g.lossOf(i, a.fault)
		if !ok {
			continue
		}
		a.fault = both(a.fault, lost(i, rest))
		if r := singles.of(i); g.off(r, pumpAlone[r]) != 0 {
			missing := decibels(rest) + " dB missing in " + personAt[i] + "'s arm"
			a.findings = append(a.findings, "Besides, "+missing+".")
			a.says[i] += ", and " + missing
		}
	}
}
