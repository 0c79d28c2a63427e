package keyrate

import (
	"math"

	"pairspan/link"
)

// Bounds and steps of a search for settings.
const (
	leastWindowPs  = 1.0  // floor of a searched window
	widestInSpread = 6.0  // beyond, a window holds all but 1e-12 of the arrivals
	weakestPump    = 1e-9 // of the ceiling: no useful source is weaker
	evenShare      = 0.5
	mostShare      = 0.99
	wideGrid       = 14 // points of a line search over the whole range
	nearGrid       = 4  // of one around the last place
	nearFactor     = 2  // how far that one looks
	mostSweeps     = 12
	leastGain      = 1e-6 // relative; a sweep that gains less is the last
	smallLag       = 0.3  // of the secret fractions: the sum of both then has the highest peak
	farthestStep   = 8    // how many sweeps further it looks in the direction of the last
)

// Free says which settings are left to a search; the others stay.
type Free struct {
	MaxPairRateHz float64 // ceiling of the pair rate; 0: it stays
	Window        bool
	KeyShare      bool
}

// Best returns p with the free settings that make most usable key, each
// rounded to three digits (the window in ps), but for a pump at its ceiling. A
// window is at least 1 ps, at
// most the period of a pulsed source, and 1 ps without any arrival spread.
// Where no block has a key, the settings are those of the asymptotic rate with
// even shares; where there is none at all, those that come nearest.
func (l *Link) Best(p OperatingPoint, free Free) OperatingPoint {
	var found OperatingPoint
	worth := 0.0
	if l.BlockBits > 0 {
		found, worth = l.ascend(p, free, blockKey)
	}
	if worth <= 0 {
		if l.BlockBits > 0 && free.KeyShare {
			free.KeyShare, p.KeyShare = false, evenShare
		}
		found = l.bestAsymptotic(p, free)
	}
	if free.MaxPairRateHz > 0 {
		// The ceiling is a figure that a person stated, and can set.
		found.PairRateHz = min(Round3(found.PairRateHz, math.Inf(1)), free.MaxPairRateHz)
	}
	if free.Window {
		found.WindowS = Round3(found.WindowS*psPerSecond, l.widestWindowPs()) / psPerSecond
	}
	if free.KeyShare {
		found.KeyShare = Round3(found.KeyShare, mostShare)
	}
	return found
}

// bestAsymptotic climbs the asymptotic rate. It is the greatest of the signed
// rates of the key basis, of the check basis and of both, each of which is
// smooth where the rate itself has kinks that a climb gets caught in. With
// even shares the key basis has the greater fraction, and is asked alone only
// where the check basis lags behind.
func (l *Link) bestAsymptotic(p OperatingPoint, free Free) OperatingPoint {
	even := p.KeyShare == evenShare && !free.KeyShare
	if even && l.StateError[KeyBasis] == l.StateError[CheckBasis] {
		found, _ := l.ascend(p, free, bothBases)
		return found
	}
	found, most := l.ascend(p, free, signedSum)
	goals := []goal{keyBasisAlone, checkBasisAlone}
	if even {
		goals = goals[:1]
		if l.lag(found) < smallLag {
			return found
		}
	}
	for _, goal := range goals {
		if at, worth := l.ascend(p, free, goal); worth > most {
			found, most = at, worth
		}
	}
	return found
}

// lag returns how far the check basis's secret fraction lies below the key
// basis's, as a share of it.
func (l *Link) lag(p OperatingPoint) float64 {
	r := l.Key(p)
	key := SecretFraction(r.QBER[KeyBasis], r.QBER[CheckBasis], l.ErrorCorrectionF)
	check := SecretFraction(r.QBER[CheckBasis], r.QBER[KeyBasis], l.ErrorCorrectionF)
	if key <= 0 {
		return math.Inf(1)
	}
	return (key - check) / key
}

// BestWindow is Best with the window free alone.
func (l *Link) BestWindow(p OperatingPoint) OperatingPoint { return l.Best(p, Free{Window: true}) }

// ascend climbs along one setting after the other, and on in the direction of
// the whole sweep, until a sweep gains nothing.
func (l *Link) ascend(p OperatingPoint, free Free, g goal) (OperatingPoint, float64) {
	a := ascent{l, free, g, p, math.Inf(-1)}
	if free.MaxPairRateHz > 0 {
		a.at.PairRateHz = free.MaxPairRateHz
	}
	if free.Window {
		a.at.WindowS = max(leastWindowPs, l.widestWindowPs()/nearFactor) / psPerSecond
	}
	if free == (Free{Window: true}) {
		a.window(true)
		return a.at, a.worth
	}
	for sweep := range mostSweeps {
		before, start := a.worth, a.at
		a.pump(sweep == 0)
		a.window(sweep == 0)
		a.ridge(sweep == 0)
		a.share(sweep == 0)
		if sweep > 0 {
			a.onward(start)
		}
		if sweep > 0 && a.worth-before <= leastGain*math.Abs(before) {
			break
		}
	}
	return a.at, a.worth
}

// ascent is a climb: where it stands, and what that is worth.
type ascent struct {
	link  *Link
	free  Free
	goal  goal
	at    OperatingPoint
	worth float64
}

// move takes a line search's result where it is better.
func (a *ascent) move(p OperatingPoint, worth float64) {
	if worth > a.worth {
		a.at, a.worth = p, worth
	}
}

// line climbs along a path of settings with parameter x: over all of lo to hi,
// or near where it stands.
func (a *ascent) line(x, lo, hi float64, wide bool, path func(float64) OperatingPoint) {
	grid := wideGrid
	if !wide {
		lo, hi, grid = max(lo, x/nearFactor), min(hi, x*nearFactor), nearGrid
	}
	x, worth := maximise(lo, hi, grid, func(x float64) float64 {
		p := path(x)
		v := a.link.view(p)
		return v.worth(p.WindowS, a.goal)
	})
	a.move(path(x), worth)
}

func (a *ascent) pump(wide bool) {
	if most := a.free.MaxPairRateHz; most > 0 {
		a.line(a.at.PairRateHz, most*weakestPump, most, wide, func(rate float64) OperatingPoint {
			p := a.at
			p.PairRateHz = rate
			return p
		})
	}
}

// window climbs the window alone; the rest of the link is worked out once.
func (a *ascent) window(wide bool) {
	if !a.free.Window {
		return
	}
	most := a.link.widestWindowPs()
	lo, hi, grid := min(leastWindowPs, most), most, wideGrid
	if !wide {
		ps := a.at.WindowS * psPerSecond
		lo, hi, grid = max(lo, ps/nearFactor), min(hi, ps*nearFactor), nearGrid
	}
	v := a.link.view(a.at)
	ps, worth := maximise(lo, hi, grid, func(ps float64) float64 { return v.worth(ps/psPerSecond, a.goal) })
	p := a.at
	p.WindowS = ps / psPerSecond
	a.move(p, worth)
}

// ridge climbs the window of a continuous source while the ratio of accidental
// to true coincidences, B τ/w, stays: without noise the optimum separates in
// these directions, where climbing B and τ in turn would zigzag.
func (a *ascent) ridge(wide bool) {
	most := a.free.MaxPairRateHz
	if most == 0 || !a.free.Window || a.link.PulseRateHz > 0 {
		return
	}
	start := a.at
	perWindow := a.link.sharePerWindow(start.WindowS)
	widest := a.link.widestWindowPs() / psPerSecond
	a.line(start.WindowS, leastWindowPs/psPerSecond, widest, wide, func(windowS float64) OperatingPoint {
		p := start
		p.WindowS = windowS
		p.PairRateHz = min(most, start.PairRateHz*a.link.sharePerWindow(windowS)/perWindow)
		return p
	})
}

func (a *ascent) share(wide bool) {
	if a.free.KeyShare {
		a.line(a.at.KeyShare, evenShare, mostShare, wide, func(q float64) OperatingPoint {
			p := a.at
			p.KeyShare = q
			return p
		})
	}
}

// onward looks further in the direction in which a sweep has moved.
func (a *ascent) onward(start OperatingPoint) {
	if start == a.at {
		return
	}
	end := a.at
	step := func(from, to, t float64) float64 { return to * math.Pow(to/from, t) }
	most, widest := a.free.MaxPairRateHz, a.link.widestWindowPs()/psPerSecond
	a.line(1, 1.0/farthestStep, farthestStep, true, func(t float64) OperatingPoint {
		p := end
		if most > 0 {
			p.PairRateHz = min(most, step(start.PairRateHz, end.PairRateHz, t))
		}
		if a.free.Window {
			p.WindowS = max(min(leastWindowPs/psPerSecond, widest), min(widest, step(start.WindowS, end.WindowS, t)))
		}
		if a.free.KeyShare {
			p.KeyShare = max(evenShare, min(mostShare, step(start.KeyShare, end.KeyShare, t)))
		}
		return p
	})
}

// widestWindowPs bounds the search for a window.
func (l *Link) widestWindowPs() float64 {
	if l.PulseRateHz == 0 {
		return max(leastWindowPs, widestInSpread*l.SpreadFWHMPs)
	}
	spread := max(l.Arms[Alice].SpreadFWHMPs, l.Arms[Bob].SpreadFWHMPs)
	return min(max(leastWindowPs, widestInSpread*spread), psPerSecond/l.PulseRateHz)
}

// sharePerWindow returns w/τ of a continuous link.
func (l *Link) sharePerWindow(windowS float64) float64 {
	return link.WindowShare(windowS*psPerSecond, l.SpreadFWHMPs) / windowS
}
