package source

import (
	"fmt"
	"math"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// powersShown is how many powers the key is given at, evenly apart by factor;
// about the best of them the search goes on between its neighbours, until its
// steps are finer than three digits.
const (
	powersShown  = 41
	stepsBetween = 8
	finestStep   = 1e-3
)

// pumpScan is a link whose source is pumped at a power of a scan.
type pumpScan struct {
	s   *scenarios.Scenario
	fit sources.ScanFit
	km  float64
}

// at returns the scenario with the source at a power.
func (p *pumpScan) at(powerMW float64) *scenarios.Scenario {
	c := p.s.Clone()
	rate := p.fit.PairRateHz(powerMW).Value
	if c.Pulsed() {
		rate /= c.Source.PulseRateHz
	}
	*pairRate(c) = rate
	for arm := range c.Source.UnpairedHz {
		c.Source.UnpairedHz[arm] = p.fit.UnpairedHz(arm, powerMW).Value
	}
	return c
}

// ask returns the link at a power, at worst and at its best setting.
func (p *pumpScan) ask(powerMW float64) (worth float64, point PumpPoint) {
	c := p.at(powerMW)
	l := c.Link(p.km, sources.AtWorst)
	setting := c.Settle(&l, c.Setting())
	r := l.Key(setting)
	return worthOfPower(&l, &r), PumpPoint{
		PowerMW: powerMW, PairRateHz: setting.PairRateHz, WindowPs: picoseconds(setting.WindowS), UsableRateBps: r.UsableBps,
	}
}

// worthOfPower is what a power is worth: the usable rate, or without one how near
// it comes.
func worthOfPower(l *keyrate.Link, r *keyrate.Rate) float64 {
	if worth := worthOfKey(r); worth > noKey {
		return worth
	}
	key, check, f := r.QBER[keyrate.KeyBasis], r.QBER[keyrate.CheckBasis], l.ErrorCorrectionF
	return noKey + min(0, max(keyrate.SecretFraction(key, check, f), keyrate.SecretFraction(check, key, f)))
}

// bestPower searches the power between the least and the greatest measured at
// which the link makes most usable key at worst, and returns the scenario there;
// nil where the scenario gives no state.
func bestPower(s *scenarios.Scenario, scan sources.PowerScan, fit sources.ScanFit) (*Pump, *scenarios.Scenario) {
	if s.Source.State.Knowledge() == sources.Unknown {
		return nil, nil
	}
	from, to := math.Inf(1), 0.0
	for _, p := range scan.Points {
		if p.PowerMW > 0 {
			from, to = min(from, p.PowerMW), max(to, p.PowerMW)
		}
	}
	p := &pumpScan{s, fit, s.DistanceKm()}
	r := &Pump{FromMW: from, ToMW: to, Points: []PumpPoint{}}
	best, most := to, math.Inf(-1)
	try := func(powerMW float64) PumpPoint {
		worth, point := p.ask(powerMW)
		if worth > most {
			best, most = powerMW, worth
		}
		return point
	}
	for k := range powersShown {
		share := float64(k) / (powersShown - 1)
		r.Points = append(r.Points, try(min(to, from*math.Pow(to/from, share))))
	}
	for step := math.Log(to/from) / (powersShown - 1); step > finestStep; step /= stepsBetween {
		for k, middle := -stepsBetween, best; k <= stepsBetween; k++ {
			try(min(to, max(from, middle*math.Exp(step*float64(k)/stepsBetween))))
		}
	}
	best = min(to, max(from, keyrate.Round3(best, math.Inf(1)))) // as it can be set
	_, point := p.ask(best)
	at := p.at(best)
	r.PowerMW, r.PairRateHz, r.WindowPs, r.UsableRateBps = point.PowerMW, point.PairRateHz, point.WindowPs, point.UsableRateBps
	r.UnpairedPhotonsHz = plan.PerArm{Alice: at.Source.UnpairedHz[0], Bob: at.Source.UnpairedHz[1]}
	r.say()
	return r, at
}

// say fills in at which end the best power lies, and the sentence.
func (r *Pump) say() {
	const near = 1e-3
	where := fmt.Sprintf("within the measured powers of %s to %s mW", three(r.FromMW), three(r.ToMW))
	switch {
	case r.UsableRateBps <= 0:
		r.Sentence = fmt.Sprintf("At no measured power from %s to %s mW does this link make key; it comes nearest at %s mW.", three(r.FromMW), three(r.ToMW), three(r.PowerMW))
		return
	case r.PowerMW >= r.ToMW*(1-near):
		r.AtEnd = "upper"
		where = "the greatest measured: more may give more"
	case r.PowerMW <= r.FromMW*(1+near):
		r.AtEnd = "lower"
		where = "the least measured: less may give more"
	}
	r.Sentence = fmt.Sprintf("The key on this link is greatest at a pump power of %s mW (%s): %s pairs per second, %s bit/s.",
		three(r.PowerMW), where, three(r.PairRateHz), three(r.UsableRateBps))
}

// picoseconds returns a window without the last bits, in which 500 ps would
// read 499.99999999999994.
func picoseconds(s float64) float64 {
	const digits = 1e12
	ps := s * psPerSecond
	if ps == 0 {
		return 0
	}
	scale := digits / math.Pow(10, math.Floor(math.Log10(ps)))
	return math.Round(ps*scale) / scale
}
