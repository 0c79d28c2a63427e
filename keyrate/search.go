package keyrate

import (
	"math"
	"strconv"
)

const (
	leastWindowPs  = 1.0  // floor of a searched window
	widestInSpread = 6.0  // beyond, a window holds all but 1e-12 of the arrivals
	searchStep     = 1e-4 // relative; settings are rounded to three digits after
	searchGrid     = 16
	golden         = 0.6180339887498949
	halfDigit      = 0.005 // of a setting of three digits, at most
)

// maximise returns the place between lo and hi, both positive, of the
// greatest f, and f there: a grid in the logarithm, then golden sections
// between the neighbours of its best point. Of equal values the first counts.
func maximise(lo, hi float64, f func(float64) float64) (x, fx float64) {
	if !(lo < hi) {
		return lo, f(lo)
	}
	step := math.Log(hi/lo) / searchGrid
	best, bestF := 0, math.Inf(-1)
	for i := range searchGrid + 1 {
		if fi := f(lo * math.Exp(float64(i)*step)); fi > bestF {
			best, bestF = i, fi
		}
	}
	x = lo * math.Exp(float64(best)*step)
	a := math.Log(x) - step*float64(min(best, 1))
	b := math.Log(x) + step*float64(min(searchGrid-best, 1))
	gx, gf := goldenSections(a, b, f)
	if gf > bestF {
		return gx, gf
	}
	return x, bestF
}

// goldenSections narrows the logarithms a to b onto the maximum of f.
func goldenSections(a, b float64, f func(float64) float64) (x, fx float64) {
	c, d := b-golden*(b-a), a+golden*(b-a)
	fc, fd := f(math.Exp(c)), f(math.Exp(d))
	for b-a > searchStep {
		if fc >= fd {
			b, d, fd = d, c, fc
			c = b - golden*(b-a)
			fc = f(math.Exp(c))
		} else {
			a, c, fc = c, d, fd
			d = a + golden*(b-a)
			fd = f(math.Exp(d))
		}
	}
	if fc >= fd {
		return math.Exp(c), fc
	}
	return math.Exp(d), fd
}

// Round3 rounds a positive setting to three significant digits, so that a
// person can set it and results agree on every machine; where that would
// exceed most it is rounded down.
func Round3(x, most float64) float64 {
	for {
		r, err := strconv.ParseFloat(strconv.FormatFloat(x, 'e', 2, 64), 64)
		if err != nil || r <= most {
			return r
		}
		x -= x * halfDigit
	}
}

// BestWindow returns p with the window that makes most usable key: at least
// 1 ps, at most the period of a pulsed source, rounded to three digits in ps.
// Without any arrival spread that is 1 ps.
func (l *Link) BestWindow(p OperatingPoint) OperatingPoint {
	v := l.view(p)
	most := l.widestWindowPs()
	windowPs, worth := maximise(min(leastWindowPs, most), most, func(ps float64) float64 {
		return v.worth(ps, l.BlockBits > 0)
	})
	if worth <= 0 && l.BlockBits > 0 {
		// No block of this size has a key: the asymptotic rate still
		// deserves its best window.
		windowPs, _ = maximise(min(leastWindowPs, most), most, func(ps float64) float64 {
			return v.worth(ps, false)
		})
	}
	p.WindowS = Round3(windowPs, most) / psPerSecond
	return p
}

// widestWindowPs bounds the search for a window.
func (l *Link) widestWindowPs() float64 {
	if l.PulseRateHz == 0 {
		return max(leastWindowPs, widestInSpread*l.SpreadFWHMPs)
	}
	spread := max(l.Arms[Alice].SpreadFWHMPs, l.Arms[Bob].SpreadFWHMPs)
	return min(max(leastWindowPs, widestInSpread*spread), psPerSecond/l.PulseRateHz)
}

// worth is what a search climbs: the secret rate where there is key, and
// otherwise how far the better basis is from one. (The signed rate has false
// peaks where nothing is sifted.) Whole bits would be stairs, so a block's
// key is not floored here.
func (v *view) worth(windowPs float64, finite bool) float64 {
	var r Rate
	v.key(windowPs/psPerSecond, &r)
	l := v.link
	if finite {
		b := l.Split(&r)
		if bits := b.SecretBits(); bits > 0 {
			return bits / l.BlockBits * r.SiftedBps()
		} else {
			return bits / l.BlockBits
		}
	}
	if r.SecretBps > 0 {
		return r.SecretBps
	}
	key, check, f := r.QBER[KeyBasis], r.QBER[CheckBasis], l.ErrorCorrectionF
	return min(0, max(SecretFraction(key, check, f), SecretFraction(check, key, f)))
}

// BestPump returns p with the pair rate, up to maxPairRateHz, that makes most
// usable key, rounded to three digits; searchWindow searches the window with it.
func (l *Link) BestPump(p OperatingPoint, maxPairRateHz float64, searchWindow bool) OperatingPoint {
	at := func(pairRateHz float64) OperatingPoint {
		p := p
		p.PairRateHz = pairRateHz
		if searchWindow {
			p = l.BestWindow(p)
		}
		return p
	}
	const decades = 1e-9 // below the ceiling: no useful source is weaker
	rate, _ := maximise(maxPairRateHz*decades, maxPairRateHz, func(x float64) float64 {
		p := at(x)
		v := l.view(p)
		return v.worth(p.WindowS*psPerSecond, l.BlockBits > 0)
	})
	return at(Round3(rate, maxPairRateHz))
}
