package keyrate

import "math"

const (
	wideGrid     = 14   // parts of a search over the whole range
	fineStep     = 5e-3 // relative, before its parabola: of a window that is free alone; three digits are kept
	firstStep    = 0.2  // relative, of the climbs that follow a search of several settings
	leastStep    = 0.02 // of the last of them
	shortestStep = 1e-3
	mostSweeps   = 12
	leastGain    = 1e-7 // relative; a sweep that gains less is the last
)

// direction is a line of settings to climb along.
type direction int

const (
	alongPump direction = iota
	alongWindow
	// alongRidge widens the window of a continuous source while the ratio of
	// accidental to true coincidences, B τ/w, stays: without noise the optimum
	// separates in these directions, where climbing B and τ in turn would zigzag.
	alongRidge
	alongShare
	onward // as the whole last sweep went
)

// ascent is a climb: where it stands, and what that is worth.
type ascent struct {
	link  *Link
	free  Free
	goal  goal
	at    OperatingPoint
	worth float64
	swept OperatingPoint // where the sweep began
}

// ascend climbs: over the whole range of one setting after the other, then
// near where it stands and on as the whole sweep went, until a sweep gains
// nothing.
func (l *Link) ascend(p OperatingPoint, free Free, g goal) (OperatingPoint, float64) {
	a := ascent{link: l, free: free, goal: g, at: p, worth: math.Inf(-1)}
	if free.MaxPairRateHz > 0 {
		a.at.PairRateHz = free.MaxPairRateHz
	}
	if free.Window {
		a.at.WindowS = max(leastWindowPs, l.widestWindowPs()/2) / psPerSecond
	}
	if free == (Free{Window: true}) {
		a.windowAlone()
		return a.at, a.worth
	}
	for d := range onward {
		a.wide(d)
	}
	for sweep := range mostSweeps {
		before := a.worth
		a.swept = a.at
		for d := range onward {
			a.near(d, max(leastStep, math.Ldexp(firstStep, -sweep)))
		}
		if a.at != a.swept {
			a.near(onward, 1)
		}
		if a.worth-before <= leastGain*math.Abs(before) {
			break
		}
	}
	return a.at, a.worth
}

// windowAlone searches the window; the rest of the link is worked out once.
func (a *ascent) windowAlone() {
	v := a.link.view(a.at)
	most := a.link.widestWindowPs()
	ps, worth := maximise(min(leastWindowPs, most), most, wideGrid, fineStep, func(ps float64) float64 { return v.worth(ps/psPerSecond, a.goal) })
	a.at.WindowS, a.worth = ps/psPerSecond, worth
}

// open reports whether there is a search in a direction. The ridge stands in
// for the window where it can.
func (a *ascent) open(d direction) bool {
	pump := a.free.MaxPairRateHz > 0
	ridge := pump && a.free.Window && a.link.PulseRateHz == 0 && a.at.PairRateHz < a.free.MaxPairRateHz
	switch d {
	case alongPump:
		return pump
	case alongWindow:
		return a.free.Window && !ridge
	case alongRidge:
		return ridge
	}
	return d == onward || a.free.KeyShare
}

// bounds returns the whole range of a direction's setting, and where it stands.
func (a *ascent) bounds(d direction) (lo, hi, at float64) {
	switch d {
	case alongPump:
		most := a.free.MaxPairRateHz
		return most * weakestPump, most, a.at.PairRateHz
	case alongShare:
		return 1 - mostShare, 1 - evenShare, 1 - a.at.KeyShare
	}
	most := a.link.widestWindowPs() / psPerSecond
	return min(leastWindowPs/psPerSecond, most), most, a.at.WindowS
}

// along returns the settings where a direction's own one is x times that of
// where it stands, kept to its range.
func (a *ascent) along(d direction, x float64) OperatingPoint {
	p := a.at
	if d == onward {
		return a.onward(math.Log(x))
	}
	lo, hi, at := a.bounds(d)
	to := keep(at*x, lo, hi)
	switch d {
	case alongPump:
		p.PairRateHz = to
	case alongShare:
		p.KeyShare = min(mostShare, 1-to)
	case alongRidge:
		l := a.link
		p.PairRateHz = min(a.free.MaxPairRateHz, p.PairRateHz*l.sharePerWindow(to)/l.sharePerWindow(p.WindowS))
		p.WindowS = to
	case alongWindow:
		p.WindowS = to
	}
	return p
}

// onward returns the settings that lie t times the last sweep ahead.
func (a *ascent) onward(t float64) OperatingPoint {
	p, from := a.at, a.swept
	step := func(d direction, from, to float64) float64 {
		lo, hi, _ := a.bounds(d)
		return keep(to*math.Pow(to/from, t), lo, hi)
	}
	if a.free.MaxPairRateHz > 0 {
		p.PairRateHz = step(alongPump, from.PairRateHz, p.PairRateHz)
	}
	if a.free.Window {
		p.WindowS = step(alongWindow, from.WindowS, p.WindowS)
	}
	if a.free.KeyShare {
		p.KeyShare = min(mostShare, 1-step(alongShare, 1-from.KeyShare, 1-p.KeyShare))
	}
	return p
}

// keep returns x within a range, and at its end where rounding alone keeps it
// from there: or a step back to the end would pass for a gain.
func keep(x, lo, hi float64) float64 {
	const rounding = 1e-12
	switch {
	case x < lo*(1+rounding):
		return lo
	case x > hi*(1-rounding):
		return hi
	}
	return x
}

func (a *ascent) ask(p OperatingPoint) float64 {
	v := a.link.view(p)
	return v.worth(p.WindowS, a.goal)
}

// take moves to a setting that is better.
func (a *ascent) take(p OperatingPoint, worth float64) {
	if worth > a.worth {
		a.at, a.worth = p, worth
	}
}

// wide tries the whole of a direction, and climbs from the best place.
func (a *ascent) wide(d direction) {
	if !a.open(d) {
		return
	}
	lo, hi, at := a.bounds(d)
	part := math.Log(hi/lo) / wideGrid
	start := *a
	for i := range wideGrid + 1 {
		if i > 0 && part == 0 {
			break
		}
		p := start.along(d, lo/at*math.Exp(float64(i)*part))
		a.take(p, a.ask(p))
	}
	a.near(d, part/3)
}

// near climbs from where it stands: steps, each twice the last, until they
// lead down, and then to the vertex of the parabola through the last three
// points. Where that is no better although it is not close by, the peak is too
// sharp for the steps, and they get shorter. (Beyond a range's end the settings
// stay, and nothing is gained.)
func (a *ascent) near(d direction, step float64) {
	if !a.open(d) {
		return
	}
	least, most := math.Inf(-1), math.Inf(1)
	if d != onward {
		lo, hi, at := a.bounds(d)
		least, most = math.Log(lo/at), math.Log(hi/at)
	}
	f := func(t float64) spot {
		t = max(least, min(most, t))
		return spot{t, a.ask(a.along(d, math.Exp(t)))}
	}
	best := spot{0, a.worth}
	for ; step > shortestStep; step /= 4 {
		v, peak := climb(best, step, f)
		if peak.f > best.f || math.Abs(v-best.x) < step/64 {
			best = peak
			break
		}
	}
	a.take(a.along(d, math.Exp(best.x)), best.f)
}

// spot is a place and what it is worth.
type spot struct{ x, f float64 }

// climb brackets the peak next to x, and returns the vertex of the parabola
// through the bracket and the best spot it has seen.
func climb(x spot, step float64, f func(float64) spot) (v float64, best spot) {
	y := f(x.x + step)
	z := y
	if !(y.f > x.f) {
		y = f(x.x - step)
	}
	for y.f > x.f {
		x, y, z = y, f(y.x+2*(y.x-x.x)), x
	}
	switch x.x { // at the end of a range the bracket has one side
	case z.x:
		z = f((x.x + y.x) / 2)
	case y.x:
		y = f((x.x + z.x) / 2)
	}
	if v = vertex(x, y, z); v != x.x {
		z = f(v)
	}
	for _, s := range [...]spot{y, z} {
		if s.f > x.f {
			x = s
		}
	}
	return v, x
}
