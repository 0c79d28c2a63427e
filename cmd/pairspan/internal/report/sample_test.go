package report

import (
	"fmt"
	"math"
	"strings"

	"pairspan/scenarios/plan"
)

// The plans of these tests are invented: their figures are shaped like a
// link's, but no model made them, so a test may not read physics into them.

func ptr[T any](v T) *T { return &v }

// hostile is text that must never run, in each way that a page could be made to.
const hostile = `</script><script>window.x=1</script>__f__(window.x=1)__f__<img src=x onerror="window.x=1">{{.}}"'` + "`${window.x=1}`"

// sampleRate falls with distance and is zero from end on.
func sampleRate(peak, slopeDB, end, km float64) float64 {
	if km >= end {
		return 0
	}
	return peak * math.Pow(10, -slopeDB*km/10) * (1 - math.Pow(km/end, 6))
}

// samplePoint is one point of a link whose key ends at end at worst, and a
// fifth later at best.
func samplePoint(km, end float64, interval bool) plan.Point {
	rate := func(e float64) float64 { return sampleRate(900, 0.275, e, km) }
	qber := func(floor float64) float64 { return math.Min(0.5, floor+0.05*math.Pow(km/end, 5)) }
	p := plan.Point{
		DistanceKm: km, LengthKm: plan.PerArm{Alice: 0.05, Bob: km}, LossDB: plan.PerArm{Alice: 4.8, Bob: 6.5 + 0.275*km},
		PairRateHz: 2e6, PairsPerSlot: ptr(1.6e-3), SlotsHz: ptr(1.25e9), WindowPs: ptr(802.0), WindowShare: ptr(0.958), KeyBasisShare: 0.5,
		CountsPerDetectorHz: plan.PerArm{Alice: 34000, Bob: 9100}, LiveShare: plan.PerArm{Alice: 0.73, Bob: 0.92},
		DetectorsNeeded: plan.PerArmCount{Alice: 4, Bob: 4}, SinglesHz: plan.PerArm{Alice: 136000, Bob: 36400},
		CoincidencesHz: ptr(4 * rate(end)), AccidentalsHz: ptr(21.7), CAR: ptr(140.0), SiftedBps: ptr(1900 * math.Pow(10, -0.0275*km)),
		QBER: &plan.QBER{Key: qber(0.028), Check: qber(0.034)}, SecretRateBps: ptr(1.4 * rate(1.1*end)),
		FiniteSecretRateBps: ptr(1.11 * rate(1.1*end)), UsableRateBps: ptr(rate(1.1 * end)),
	}
	if interval {
		p.Bounds = &plan.Bounds{
			AtWorst: plan.Bound{WindowPs: 780, PairRateHz: 1.9e6, KeyBasisShare: 0.5, QBER: plan.QBER{Key: qber(0.041), Check: qber(0.041)}, SecretRateBps: 1.4 * rate(end), UsableRateBps: 0.8 * rate(end)},
			AtBest:  plan.Bound{WindowPs: 815, PairRateHz: 2.1e6, KeyBasisShare: 0.5, QBER: plan.QBER{Key: qber(0.009), Check: qber(0.041)}, SecretRateBps: 1.4 * rate(1.2*end), UsableRateBps: 1.3 * rate(1.2*end)},
		}
	}
	return p
}

func sampleCase(name string, end float64, interval bool) plan.Case {
	c := plan.Case{
		Name: name, Lengthen: "bob", ErrorCorrectionF: 1.16, QBERThreshold: 0.0979, DutyCycle: 0.9,
		LossBudget: plan.LossBudget{
			Alice: []plan.LossItem{{Item: "coupling, filters, analyser", LossDB: 4.2}, {Item: "2 connector pairs", LossDB: 0.6}},
			Bob:   []plan.LossItem{{Item: "6.2 km of G.652.D", LossDB: 1.705}, {Item: "6 connector pairs", LossDB: 1.8}, {Item: "coupling, filters, analyser", LossDB: 4.2}},
		},
		Installed: samplePoint(6.2, end, interval),
		QBERParts: &plan.QBERParts{State: 0.021, Alignment: 0.0046, MultiPair: 0.0017, DetectorNoise: 0.0005, OutsideLight: 0},
	}
	for i := range 241 {
		c.Curve = append(c.Curve, samplePoint(float64(i)*40/240, end, interval))
	}
	c.Answer = plan.Answer{
		Outcome: plan.Met, Judged: "finite", State: ptr("given"), UsableRateBps: judged(&c.Installed), NeedBps: ptr(256.0),
		TimesNeed: ptr(1.54), MarginDB: ptr(end / 12), MarginAs: &plan.MarginAs{Km: ptr(7.6), ConnectorPairs: ptr(7.0), Splices: ptr(21.0)},
		ReachKm: ptr(end / 2), FirstInTheWay: &plan.PartFactor{Part: "detectors", Factor: ptr(2.4)},
		Parts:    []plan.PartFactor{{Part: "detectors", Factor: ptr(2.4)}, {Part: "coupling", Factor: ptr(1.9)}, {Part: "dark_counts"}},
		Sentence: "Yes, with 2.1 dB to spare: 394 bit/s at 6.2 km, 1.5 times the 256 bit/s needed, for any state of tangle 0.86, analysers aligned.",
		RestsOn:  "A tangle of 0.86, finite blocks of 1 000 000 sifted bits, detectors of the class ingaas.",
		InTheWay: "The detectors: each of Alice’s is blind 27 % of the time.",
	}
	if interval {
		a := &c.Answer
		a.State = ptr("at_worst")
		a.Nominal = &plan.MemberAnswer{UsableRateBps: *c.Installed.UsableRateBps, MarginDB: ptr(2.9), ReachKm: ptr(15.4)}
		a.AtBest = &plan.MemberAnswer{UsableRateBps: c.Installed.Bounds.AtBest.UsableRateBps, MarginDB: ptr(3.6), ReachKm: ptr(17.2)}
	}
	return c
}

// samplePlan has an interval, five compared cases and every list filled.
func samplePlan() *plan.Plan {
	p := &plan.Plan{
		PlanFormat: 1, Title: "Harbour campus, library to data hall", Program: plan.Program{Name: "pairspan", Version: "0.1.0"},
		Inputs:       []plan.Input{{Name: "harbour.yaml", SHA256: strings.Repeat("0123456789abcdef", 4), Text: "title: Harbour campus\nneed: { secret_rate_bps: 256 }\n"}},
		DefaultsUsed: []plan.Default{{Entry: "arms.bob.connector_pair_loss_db", Value: "0.3", Source: "common practice, no source"}, {Entry: "arms.alice.splices", Value: "0", Source: "none stated"}},
		Entries:      sampleEntries(),
		Deviations:   []plan.Deviation{{Entry: "source.state.tangle", Value: 0.86, SD: 0.02}},
		Origins:      []plan.Origin{{Entry: "detectors.free_running.efficiency", Text: "calibrated with a power meter, 12 March"}},
		Warnings: []plan.Warning{
			{Rule: "state-with-accidentals", Entry: "source.state", Sentence: "The tangle may hold accidentals: no measured_car is stated.", UsableRateBps: ptr(431.0)},
			{Rule: "splitter-as-loss", Entry: "arms.bob.fixed_loss_db", Sentence: "Is a splitter counted as loss? With a passive choice it is sifting."},
		},
		Cautions:   []plan.Caution{{About: "light", Sentence: "Laser light in a fibre can hurt the eye and is not seen."}, {About: "trust", Sentence: "A planned key rate is an estimate."}},
		References: []plan.Reference{{ID: "1", Text: "Neumann et al. (2021). Phys. Rev. A 104, 022406."}, {ID: "2", Text: "Lim et al. (2021). Phys. Rev. Lett. 126, 100501."}},
		Cases:      []plan.Case{sampleCase("as filed", 31, true)},
	}
	for i, name := range []string{"nanowire-at-alice", "nanowire-at-both", "measured-run", "short-window", "arms.bob.length_km=12.4"} {
		c := sampleCase(name, []float64{36, 44, 27, 33, 22}[i], true)
		c.Changes = []plan.Change{{Entry: "arms.alice.detector", Value: "nanowire"}}
		c.Answer.Outcome = []plan.Outcome{plan.Met, plan.Met, plan.MetIfNominal, plan.MetIfBest, plan.NotMet}[i]
		p.Cases = append(p.Cases, c)
	}
	p.Cases[5].Answer.MarginDB = ptr(-4.2)
	p.Cases[2].Answer.MarginDB, p.Cases[2].Answer.MarginReason = nil, ptr("beyond_search")
	p.Cases[3].Answer.MarginDB, p.Cases[3].Answer.MarginReason = nil, ptr("no_loss_helps")
	p.Cases[3].Answer.ReachKm, p.Cases[3].Answer.ReachReason = nil, ptr("not_at_zero_km")
	return p
}

// sampleEntries has an entry of each way to know it.
func sampleEntries() []plan.Entry {
	return []plan.Entry{
		{Entry: "source.pair_rate_hz", Value: "2000000", Unit: "Hz", Meaning: "pairs made", KnownBy: ptr(plan.Unreferred)},
		{Entry: "source.state.tangle", Value: "0.86", SD: ptr(0.02), Meaning: "the tangle", KnownBy: ptr(plan.Measured)},
		{Entry: "arms.alice.fixed_loss_db", Value: "4.2", Unit: "dB", Meaning: "fixed loss", Origin: ptr("a guess"), KnownBy: ptr(plan.Assumed)},
		{Entry: "arms.alice.detector", Value: "free_running", Meaning: "the detector"},
		{Entry: "arms.bob.fixed_loss_db", Value: "4.2", Unit: "dB", Meaning: "fixed loss", KnownBy: ptr(plan.Unreferred)},
		{Entry: "arms.bob.connector_pair_loss_db", Value: "0.3", Unit: "dB", Meaning: "loss of a pair", DefaultSource: ptr("common practice, no source"), KnownBy: ptr(plan.ByDefault)},
		{Entry: "arms.bob.detector", Value: "free_running", Meaning: "the detector"},
		{Entry: "detectors.free_running.efficiency", Value: "0.2", Meaning: "efficiency", Origin: ptr("calibrated with a power meter, 12 March"), KnownBy: ptr(plan.Measured)},
		{Entry: "detectors.free_running.dead_time_ns", Value: "10000", Unit: "ns", Meaning: "dead time", Origin: ptr("data sheet"), KnownBy: ptr(plan.FromPaper)},
		{Entry: "detectors.nanowire.dead_time_ns", Value: "50", Unit: "ns", Meaning: "dead time", KnownBy: ptr(plan.Unreferred)},
		{Entry: "window_ps", Value: "auto", Unit: "ps", Meaning: "the window", DefaultSource: ptr("the planner searches it")},
	}
}

// knownPlan has a given state, one case, no need and no lists.
func knownPlan() *plan.Plan {
	p := &plan.Plan{PlanFormat: 1, Title: "Known state", Program: plan.Program{Name: "pairspan", Version: "0.1.0"}, Cases: []plan.Case{sampleCase("as filed", 31, false)}}
	a := &p.Cases[0].Answer
	a.Outcome, a.NeedBps, a.TimesNeed = plan.NoNeed, nil, nil
	a.Sentence, a.InTheWay, a.RestsOn = "394 bit/s at 6.2 km; the key ends at 31 km. No need was stated, so there is no yes or no.", "", ""
	return p
}

// unknownPlan has no state: every figure that depends on one is null.
func unknownPlan() *plan.Plan {
	p := samplePlan()
	p.Title = "No state"
	for i := range p.Cases {
		c := &p.Cases[i]
		c.QBERParts = nil
		unknown(&c.Installed)
		for j := range c.Curve {
			unknown(&c.Curve[j])
		}
		c.Answer = plan.Answer{
			Outcome: plan.StateUnknown, Judged: "finite", NeedBps: ptr(256.0), LeastTangle: ptr(0.77), LeastTangleAtBest: ptr(0.47),
			Sentence: "No answer yet: a pair rate says nothing of entanglement. This link needs a tangle of at least 0.77 to be sure of 256 bit/s; below 0.47 no state is enough.",
		}
	}
	return p
}

func unknown(p *plan.Point) {
	p.PairsPerSlot, p.SlotsHz, p.WindowPs, p.WindowShare = nil, nil, nil, nil
	p.CoincidencesHz, p.AccidentalsHz, p.CAR, p.SiftedBps, p.QBER = nil, nil, nil, nil, nil
	p.SecretRateBps, p.FiniteSecretRateBps, p.UsableRateBps, p.Bounds = nil, nil, nil, nil
}

// barePlan is what a plan must at least hold: one case of nothing.
func barePlan() *plan.Plan { return &plan.Plan{Cases: []plan.Case{{}}} }

// zeroPlan has a state and no key anywhere, on a curve of one point.
func zeroPlan() *plan.Plan {
	p := samplePlan()
	p.Title = "No key anywhere"
	for i := range p.Cases {
		c := &p.Cases[i]
		c.Curve = c.Curve[:1]
		c.Curve[0] = noKey(c.Curve[0])
		c.Installed = noKey(c.Installed)
		c.Answer.Outcome, c.Answer.UsableRateBps = plan.NoKey, ptr(0.0)
		c.Answer.MarginDB, c.Answer.MarginReason = nil, ptr("no_loss_helps")
		c.Answer.ReachKm, c.Answer.ReachReason = nil, ptr("not_at_zero_km")
		c.Answer.MarginAs, c.Answer.TimesNeed = nil, ptr(0.0)
		c.Answer.Sentence = "No key at 6.2 km: the QBER of 12.9 % is above the 9.8 % that error correction with f = 1.16 allows. First in the way: dark counts."
	}
	return p
}

func noKey(p plan.Point) plan.Point {
	zero := plan.Bound{QBER: plan.QBER{Key: 0.5, Check: 0.5}}
	p.SiftedBps, p.SecretRateBps, p.FiniteSecretRateBps, p.UsableRateBps = ptr(0.0), ptr(0.0), ptr(0.0), ptr(0.0)
	p.CoincidencesHz, p.AccidentalsHz, p.CAR, p.QBER = ptr(0.0), ptr(0.0), nil, &plan.QBER{Key: 0.5, Check: 0.5}
	p.Bounds = &plan.Bounds{AtWorst: zero, AtBest: zero}
	return p
}

// hostilePlan has hostile text in every string that a person or a file decides.
func hostilePlan() *plan.Plan { return fill(samplePlan(), hostile) }

// fill puts one text into every string of a plan that a person or a file decides.
func fill(p *plan.Plan, text string) *plan.Plan {
	p.Title = text
	p.Inputs = []plan.Input{{Name: text, SHA256: "00", Text: text}}
	p.DefaultsUsed = []plan.Default{{Entry: text, Value: text, Source: text}}
	p.Deviations = []plan.Deviation{{Entry: text, Value: 1, SD: 0.1}}
	p.Origins = []plan.Origin{{Entry: text, Text: text}}
	p.Withheld = []string{text}
	p.Entries = []plan.Entry{
		{Entry: "source." + text, Value: text, Unit: text, Meaning: text, Origin: ptr(text), KnownBy: ptr(plan.Measured)},
		{Entry: "x" + text, Value: "1", Unit: text, Meaning: text, SD: ptr(0.1), DefaultSource: ptr(text), KnownBy: ptr("x" + text)},
	}
	p.Warnings = []plan.Warning{{Rule: text, Entry: text, Sentence: text}}
	p.Cautions = []plan.Caution{{About: text, Sentence: text}}
	p.References = []plan.Reference{{ID: text, Text: text}}
	for i := range p.Cases {
		c := &p.Cases[i]
		c.Name, c.Lengthen = fmt.Sprintf("%s %d", text, i), text
		c.Changes = []plan.Change{{Entry: text, Value: text}}
		c.LossBudget.Alice = []plan.LossItem{{Item: text, LossDB: 1}}
		c.Answer.Outcome, c.Answer.Judged = plan.Outcome(text), text
		c.Answer.Sentence, c.Answer.RestsOn, c.Answer.InTheWay = text, text, text
		c.Answer.Parts = []plan.PartFactor{{Part: text}}
	}
	return p
}

// samplePlans lists them by name.
func samplePlans() map[string]*plan.Plan {
	return map[string]*plan.Plan{
		"sample": samplePlan(), "known": knownPlan(), "unknown": unknownPlan(),
		"bare": barePlan(), "zero": zeroPlan(), "hostile": hostilePlan(),
	}
}
