package report

import (
	"fmt"

	"pairspan/scenarios/plan"
)

// decidedPlan is the sample with everything filled that helps to decide. Its
// figures are invented like the sample's.
func decidedPlan() *plan.Plan { return decide(samplePlan()) }

// decide fills what a plan says beyond yes and no.
func decide(p *plan.Plan) *plan.Plan {
	c := &p.Cases[0]
	for i := range p.Cases {
		p.Cases[i].Best = &plan.Best{
			Free: []string{"source.pair_rate_hz", "window_ps"}, PairRateHz: 5.5e6, PairsPerSlot: 0.0035, WindowPs: 631, KeyBasisShare: 0.866,
			UsableRateBps: 960, Factor: ptr(1.96), Keeps95: &plan.Span{From: 3.51e6, To: 8.65e6}, Sentence: "At its best setting the link would make 2.0 times as much.",
		}
	}
	p.Cases[1].Best.Factor, p.Cases[1].Best.Keeps95 = nil, nil
	c.Limits = &plan.Limits{HeldBack: &plan.PartFactor{Part: "detectors", Factor: ptr(165.0)}, Sentence: "At 6.2 km the detectors hold this link back most."}
	for i := range c.Curve {
		q := &c.Curve[i]
		rate := *judged(q)
		c.Limits.Points = append(c.Limits.Points, plan.LimitPoint{
			DistanceKm: q.DistanceKm, AsDescribedBps: rate, AtBestBps: 1.2 * rate, PerfectStateBps: 1.7 * rate, PerfectDetectorsBps: 200 * rate,
			RepeaterlessBps: ptr(2e8 - 1e5*float64(i)), SlotsHz: 1.6e9,
		})
		q.KeyBasisSecretBps = ptr(0.52 * *q.SecretRateBps)
	}
	c.Limits.Points[0].RepeaterlessBps = nil
	c.Installed.KeyBasisSecretBps = ptr(320.0)
	c.Serves = []plan.Serve{
		{Entry: tangleEntry, Bound: "least", Stated: ptr(0.86), Value: ptr(0.77)},
		{Entry: "detectors.free_running.dark_counts_hz", Unit: "Hz", Bound: "most", Stated: ptr(900.0), Value: ptr(57250.7)},
		{Entry: "window_ps", Unit: "ps", Bound: "least", Reason: ptr("no_value_does")},
		{Entry: "duty_cycle", Bound: "least", Stated: ptr(0.9), Reason: ptr("every_value_does")},
	}
	c.Elasticities = []plan.Elasticity{{Entry: tangleEntry, Value: 4.5}, {Entry: "arms.bob.fixed_loss_db", Value: -0.76}, {Entry: "clock_jitter_fwhm_ps", Value: -7e-6}}
	c.TangleNeeded = nil
	for i := range 61 {
		q := plan.TangleNeeded{DistanceKm: float64(i) * 40 / 60}
		if i < 30 {
			q.AtWorst, q.Nominal, q.AtBest = ptr(0.74+0.008*float64(i)), ptr(0.62+0.009*float64(i)), ptr(0.43+0.012*float64(i))
		}
		c.TangleNeeded = append(c.TangleNeeded, q)
	}
	c.Block = &plan.Block{
		SiftedBits: 1e6, SecretBits: 262500, AuthenticationBits: 256, EpsilonTotal: 1e-10, FirstKeyS: ptr(536.0), SmallestSiftedBits: ptr(2911.0),
		AES256PerHour: 6884, AES256PerDay: 165200, BestSiftedBits: ptr(1.92e8), BestKeyBasisShare: ptr(0.96), BestUsableRateBps: ptr(1170.0),
		EnoughSiftedBits: ptr(4.29e7), SameBasisSecretBps: 566, Sentence: "A block of 1e6 sifted bits leaves 2.62e5 secret bits at worst.",
	}
	c.Uncertainty = decidedDoubt(c)
	c.Acceptance = decidedSheet()
	p.Needs = &plan.Needs{SecretRateBps: 256, AES256RenewalS: 1, Connections: 4, KeyBitsPerDay: 22118400, StatedAs: "need.aes256_renewal_s", Budget: ptr(150000.0)}
	p.Buying = decidedBuying(p)
	p.Against = &plan.Against{Entry: "window_ps", Unit: "ps", Scale: "log", InUse: ptr(678.0)}
	for i := range p.Cases {
		ac := plan.AgainstCase{Name: p.Cases[i].Name}
		for k := range 41 {
			ac.Points = append(ac.Points, plan.AgainstPoint{Value: 60 + 100*float64(k), Point: samplePoint(float64(k), 31+float64(i), true)})
		}
		p.Against.Cases = append(p.Against.Cases, ac)
	}
	return p
}

func decidedDoubt(c *plan.Case) *plan.Uncertainty {
	u := &plan.Uncertainty{
		Draws: 2000, Seed: 1, ChanceMet: ptr(0.9935), UsableRate: plan.Quantiles{P05: 341, P50: 402, P95: 466}, QBERKey: plan.Quantiles{P05: 0.017, P50: 0.0213, P95: 0.0258},
		ReachKm:     &plan.QuantilesOrNot{P50: ptr(15.4), P95: ptr(18.0)},
		Shares:      []plan.Share{{Entry: tangleEntry, FirstOrder: 0.49, ByDraws: 0.51}, {Entry: "arms.bob.fixed_loss_db", FirstOrder: 0.51, ByDraws: 0.49}, {Entry: "duty_cycle"}},
		MeasureNext: []plan.Measurement{{Name: "two_visibilities", Entries: []string{tangleEntry}, SpreadNow: 660, SpreadThen: 330, Sentence: "Visibilities in two bases would narrow the range from 660 to 330 bit/s."}},
		Sentence:    "With the deviations stated the need is met in 99.4 % of 2000 draws (seed 1).",
	}
	for i := 0; i < len(c.Curve); i += 4 {
		rate := *judged(&c.Curve[i])
		u.Bands = append(u.Bands, plan.Band{DistanceKm: c.Curve[i].DistanceKm, UsableRate: plan.Quantiles{P05: 0.8 * rate, P50: rate, P95: 1.2 * rate}})
	}
	return u
}

func decidedSheet() *plan.Acceptance {
	return &plan.Acceptance{
		Rows: []plan.AcceptanceRow{
			{Figure: "singles_alice_hz", Label: "singles, all of Alice's detectors", Unit: "Hz", Expected: 157828.5, From: 143570, To: 172087, NeedLostAt: ptr(79831.0), KeyLostAt: ptr(3695.2), PointsTo: "Low: loss.", Measured: ptr(120000.0), MeasuredSays: ptr("1.77 dB missing in Alice's arm")},
			{Figure: "singles_bob_hz", Label: "singles, all of Bob's detectors", Unit: "Hz", Expected: 88938.5, From: 75330, To: 102547, PointsTo: "Low: loss."},
			{Figure: "live_share_bob", Label: "share of the time", Expected: 0.8, From: 0.77, To: 0.83, PointsTo: "Low: too much light."},
			{Figure: "qber_key", Label: "QBER of the key basis", Expected: 0.0214, From: 0.0035, To: 0.0399, NeedLostAt: ptr(0.0614), KeyLostAt: ptr(0.0968), PointsTo: "High: alignment."},
		},
		CHSH: &plan.Expected{AtWorst: 2.649, Nominal: 2.7074, AtBest: 2.7215}, Visibility: &plan.PerBasis{Key: 0.957, Check: 0.932}, FiveSigmaS: ptr(0.131),
		LevelsOf: ptr("at_worst"), Findings: []string{"Alice's arm loses 1.77 dB more than planned."}, Sentence: "To expect: singles of 158000 /s (Alice).",
	}
}

func decidedBuying(p *plan.Plan) *plan.Buying {
	b := &plan.Buying{
		Cheapest: ptr(p.Cases[0].Name), CheapestSpare: ptr(p.Cases[1].Name), Sentence: "The cheapest case that meets the need is as filed for 88000.",
		Overtakes: []plan.Overtake{{Case: p.Cases[1].Name, Overtakes: p.Cases[0].Name, DistanceKm: 15.7}},
		Turns:     []plan.Turn{{Entry: "detectors.nanowire.dead_time_ns", Case: p.Cases[1].Name, Other: p.Cases[0].Name, Stated: 45, Value: 28421.8}},
	}
	for i := range p.Cases {
		b.Costs = append(b.Costs, plan.Cost{Case: p.Cases[i].Name, Pieces: plan.PerArmCount{Alice: 4, Bob: 4}, Price: ptr(88000 + 8000*float64(i)), WithinBudget: ptr(i < 3), MeetsNeed: i != 4, MarginDB: ptr(3.57)})
	}
	b.Costs[5].Price, b.Costs[5].WithinBudget, b.Costs[5].MarginDB = nil, nil, nil
	return b
}

// fillDecided is fill for what decide adds.
func fillDecided(p *plan.Plan, text string) *plan.Plan {
	c := &p.Cases[0]
	for i := range p.Cases {
		p.Cases[i].Best.Free, p.Cases[i].Best.Sentence = []string{text}, text
		p.Against.Cases[i].Name, p.Buying.Costs[i].Case = fmt.Sprintf("%s %d", text, i), text
	}
	c.Limits.Sentence, c.Block.Sentence, c.Uncertainty.Sentence, p.Buying.Sentence = text, text, text, text
	for i := range c.Serves {
		c.Serves[i].Entry, c.Serves[i].Unit, c.Serves[i].Bound, c.Serves[i].Reason = text, text, text, ptr(text)
	}
	for i := range c.Elasticities {
		c.Elasticities[i].Entry = text
	}
	for i := range c.Uncertainty.Shares {
		c.Uncertainty.Shares[i].Entry = text
	}
	c.Uncertainty.MeasureNext = []plan.Measurement{{Name: text, Entries: []string{text}, Sentence: text}}
	p.Needs.StatedAs = text
	p.Buying.Cheapest, p.Buying.CheapestSpare = ptr(text), ptr(text)
	p.Buying.Overtakes = []plan.Overtake{{Case: text, Overtakes: text}}
	p.Buying.Turns = []plan.Turn{{Entry: text, Case: text, Other: text}}
	p.Against.Entry, p.Against.Unit, p.Against.Scale = text, text, text
	for i := range c.Acceptance.Rows {
		r := &c.Acceptance.Rows[i]
		r.Figure, r.Label, r.Unit, r.PointsTo, r.MeasuredSays = text, text, text, text, ptr(text)
	}
	c.Acceptance.LevelsOf, c.Acceptance.Findings, c.Acceptance.Sentence = ptr(text), []string{text}, text
	return p
}
