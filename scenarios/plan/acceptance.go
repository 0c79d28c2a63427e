package plan

import (
	"fmt"

	"pairspan/keyrate"
	"pairspan/sources"
)

// firstDay is the link as it should run on its first day: the nominal state,
// at the settings that the plan has for it.
type firstDay struct {
	*asker
	km       float64
	setting  keyrate.OperatingPoint
	link     keyrate.Link
	rate     keyrate.Rate
	expected sheet
	from, to sheet // what a reading may be and still be as expected

	levels   keyrate.Link // whose levels the sheet gives
	levelsOf string       // which state that is; "" where none makes key
	needMet  bool         // by it
}

// acceptance returns the sheet for the first day, nil without a state.
func (a *asker) acceptance() *Acceptance {
	if a.unknown {
		return nil
	}
	d := a.firstDay()
	out := &Acceptance{Rows: []AcceptanceRow{}, Findings: []string{}}
	if d.levelsOf != "" {
		out.LevelsOf = &d.levelsOf
	}
	for r := range readings {
		if d.shown(r) {
			out.Rows = append(out.Rows, d.row(r))
		}
	}
	d.bell(out)
	out.Sentence = d.inALine(out)
	d.compare(out)
	return out
}

func (a *asker) firstDay() *firstDay {
	now := a.at(a.s.DistanceKm(), nominal, nil)
	d := &firstDay{asker: a, km: a.s.DistanceKm(), setting: now.setting, link: now.link, rate: now.rate}
	d.expected = sheetOfRate(&d.link, d.setting, &d.rate)
	d.tolerate()
	d.chooseLevels()
	return d
}

// chooseLevels picks the state whose levels are given: the first of at worst,
// nominal and at best that meets the need at the sheet's settings; if none
// does, the first that makes key.
func (d *firstDay) chooseLevels() {
	for _, met := range []bool{true, false} {
		for r, name := range []string{judged: "at_worst", nominal: "nominal", atBest: "at_best"} {
			for _, m := range d.members(role(r)) {
				l := d.s.Link(d.km, m)
				rate := l.Key(d.setting)
				if rate.UsableBps <= 0 || met && !d.meets(reply{rate: rate}) {
					continue
				}
				d.levels, d.levelsOf, d.needMet = l, name, met && d.need > 0
				if d.given {
					d.levelsOf = "given"
				}
				return
			}
		}
	}
}

// row is one line of the sheet.
func (d *firstDay) row(r reading) AcceptanceRow {
	about, arm := r.row(), r.arm()
	row := AcceptanceRow{
		Figure: about.figure, Label: about.label, Unit: about.unit,
		Expected: d.expected[r], From: d.from[r], To: d.to[r],
		PointsTo: about.pointsTo,
	}
	if r < ofTheLink {
		row.Figure = fmt.Sprintf(about.figure, armKey[arm])
		row.Label = fmt.Sprintf(about.label, personAt[arm])
	}
	if d.needMet {
		row.NeedLostAt = d.lostAt(r, func(rate keyrate.Rate) bool { return d.meets(reply{rate: rate}) })
	}
	if d.levelsOf != "" {
		row.KeyLostAt = d.lostAt(r, func(rate keyrate.Rate) bool { return rate.UsableBps > 0 })
	}
	return row
}

var (
	armKey   = [2]string{"alice", "bob"}
	personAt = [2]string{"Alice", "Bob"}
)

// lostAt returns the level of a reading up to which the rate is still enough,
// while what moves the reading most naturally grows; nil where it never ends.
func (d *firstDay) lostAt(r reading, enough func(keyrate.Rate) bool) *float64 {
	c := r.row().cause(r.arm())
	x, found := firstFailure(0, c.most, c.step, func(x float64) bool {
		l, p := suffering(d.levels, d.setting, c.fault(x))
		return enough(l.Key(p))
	})
	if !found {
		return nil
	}
	l, p := suffering(d.levels, d.setting, c.fault(x))
	return number(sheetOf(&l, p)[r])
}

// inALine says on one line what the first day should show.
func (d *firstDay) inALine(out *Acceptance) string {
	x := &d.expected
	s := fmt.Sprintf("To expect with a window of %s ps and %s pairs/s: singles of %s /s (Alice) and %s /s (Bob), %s coincidences/s, a QBER of %s",
		bare(windowPs(d.setting)), bare(d.setting.PairRateHz), bare(x[singles.of(keyrate.Alice)]), bare(x[singles.of(keyrate.Bob)]),
		bare(x[coincidences]), perCents(QBER{x[qberKey], x[qberCheck]}))
	if out.FiveSigmaS == nil {
		return s + fmt.Sprintf("; a CHSH value above %s is not sure.", bare(bellBound))
	}
	after := "less than a second"
	if t := *out.FiveSigmaS; t >= 1 {
		after = two(t) + " s of counting"
	}
	return s + fmt.Sprintf("; a CHSH value of at least %s, five standard deviations above %s after %s.",
		bare(out.CHSH.AtWorst), bare(bellBound), after)
}

// nominalWith is the nominal link with faults, worstWith the one at worst.
func (d *firstDay) nominalWith(f fault) sheet {
	l, p := suffering(d.link, d.setting, f)
	return sheetOf(&l, p)
}

func (d *firstDay) worstWith(f fault) sheet {
	l, p := suffering(d.s.Link(d.km, sources.AtWorst), d.setting, f)
	return sheetOf(&l, p)
}
