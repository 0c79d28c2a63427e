package plan

import (
	"math"

	"pairspan/scenarios"
	"pairspan/sources"
)

const (
	countingS       = 60.0 // how long every figure of the sheet is counted
	toleranceSD     = 3.0
	derivativeStep  = 1e-3 // of a standard deviation
	countsOfNothing = 0.5  // a QBER of no counts may be anything between 0 and a half
)

// allMembers are the corners of what a tangle, a concurrence or a fidelity
// leaves open: every reading of a state in between lies between theirs.
var allMembers = []sources.Member{sources.Nominal, sources.AtWorst, sources.BestDephased, sources.BestEven}

// tolerate fills in what the readings may be: the interval of the states that
// are left open, and three standard deviations of a minute's counting and of
// the figures stated, together, on either side.
func (d *firstDay) tolerate() {
	counting, stated := d.countingSD(), d.statedSD()
	d.from, d.to = d.expected, d.expected
	if !d.given {
		for _, m := range allMembers {
			l := d.s.Link(d.km, m)
			for r, x := range sheetOf(&l, d.setting) {
				d.from[r], d.to[r] = min(d.from[r], x), max(d.to[r], x)
			}
		}
	}
	for r := range readings {
		width := toleranceSD * math.Hypot(counting[r], stated[r])
		d.from[r] = max(0, d.from[r]-width)
		d.to[r] = min(r.most(), d.to[r]+width)
	}
}

// countingSD returns the standard deviation of each reading from counting for
// a minute. Counts N are Poisson, √N; dead time only makes them steadier, and
// afterpulses, a share of them, hardly less steady. Of the rest, by first order:
//
//	CAR      (C/A) √(1/N_C + 1/N_A)      accidentals counted beside the delay
//	QBER     √(e (1-e)/N)                N sifted bits of that basis
//	live     t σ(counts)                 L = 1 - m t
func (d *firstDay) countingSD() (sd sheet) {
	x := &d.expected
	counted := func(hz float64) float64 { return math.Sqrt(hz / countingS) }
	for r := range ofTheLink {
		sd[r] = counted(x[r])
	}
	for i := range d.link.Arms {
		sd[liveShare.of(i)] = 0
		if counts := x[keyDetector.of(i)]; counts > 0 {
			sd[liveShare.of(i)] = (1 - x[liveShare.of(i)]) / counts * counted(counts)
		}
	}
	for _, r := range []reading{coincidences, accidentals, sifted} {
		sd[r] = counted(x[r])
	}
	sd[car] = (1 + x[car]) * math.Sqrt((1/x[coincidences]+1/x[accidentals])/countingS)
	for b, r := range [2]reading{qberKey, qberCheck} {
		sd[r] = countsOfNothing
		if n := d.rate.SiftedHz[b] * countingS; n > 0 {
			sd[r] = min(countsOfNothing, math.Sqrt(x[r]*(1-x[r])/n))
		}
	}
	return sd
}

// statedSD propagates the standard deviations of the scenario to first order,
// and the counting errors of its tomography, the settings held.
func (d *firstDay) statedSD() (sd sheet) {
	sd = d.repeatedSD()
	for _, dev := range d.s.Deviations {
		high, low := d.moved(dev, derivativeStep), d.moved(dev, -derivativeStep)
		for r := range readings {
			sd[r] = math.Hypot(sd[r], slope(low[r], d.expected[r], high[r]))
		}
	}
	return sd
}

// slope returns what one standard deviation makes of a reading, from a small
// step to either side; from one of them where the other leaves the range.
func slope(low, here, high float64) float64 {
	change, steps := 0.0, 0.0
	for _, step := range [2]float64{high - here, here - low} {
		if !math.IsNaN(step) && !math.IsInf(step, 0) {
			change, steps = change+step, steps+1
		}
	}
	if steps == 0 {
		return 0
	}
	return change / steps / derivativeStep
}

// moved returns the nominal sheet with one figure off by so many standard
// deviations, at the same settings.
func (d *firstDay) moved(dev scenarios.Deviation, sds float64) sheet {
	s := d.s.Clone()
	at, err := s.Number(dev.Entry)
	if err != nil {
		return d.expected
	}
	*at += sds * dev.SD
	if _, err := s.Emission(); err != nil {
		return noFigures()
	}
	l, p := s.Link(s.DistanceKm(), sources.Nominal), d.setting
	if !s.Source.PumpAuto {
		p.PairRateHz = s.Setting().PairRateHz
	}
	return sheetOf(&l, p)
}

// tolerated returns what a reading may be where another figure than the plan's
// is to be expected: the tolerance moves with it, and shrinks as counts do.
func (d *firstDay) tolerated(r reading, predicted float64) (from, to float64) {
	scale := 1.0
	if r != qberKey && r != qberCheck && predicted < d.expected[r] {
		scale = math.Sqrt(predicted / d.expected[r])
	}
	return predicted - scale*(d.expected[r]-d.from[r]), predicted + scale*(d.to[r]-d.expected[r])
}
