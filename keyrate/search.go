package keyrate

import (
	"math"
	"strconv"
)

const (
	golden    = 0.6180339887498949
	halfDigit = 0.005 // of a setting of three digits, at most
)

// maximise returns the place between lo and hi, both positive, of the
// greatest f, and f there: a grid in the logarithm, then golden sections
// between the neighbours of its best point, down to a relative step, and a
// parabola. Of equal values the first counts.
func maximise(lo, hi float64, grid int, step float64, f func(float64) float64) (x, fx float64) {
	if !(lo < hi) {
		return lo, f(lo)
	}
	part := math.Log(hi/lo) / float64(grid)
	best, bestF := 0, math.Inf(-1)
	for i := range grid + 1 {
		if fi := f(lo * math.Exp(float64(i)*part)); fi > bestF {
			best, bestF = i, fi
		}
	}
	x = lo * math.Exp(float64(best)*part)
	a := math.Log(x) - part*float64(min(best, 1))
	b := math.Log(x) + part*float64(min(grid-best, 1))
	gx, gf := goldenSections(a, b, step, f)
	if gf > bestF {
		return gx, gf
	}
	return x, bestF
}

// goldenSections narrows the logarithms a to b onto the maximum of f, and
// ends with the vertex of the parabola through the last three points.
func goldenSections(a, b, step float64, f func(float64) float64) (x, fx float64) {
	at := func(u float64) spot { return spot{u, f(math.Exp(u))} }
	c, d := at(b-golden*(b-a)), at(a+golden*(b-a))
	third := spot{a, math.Inf(-1)} // the last left behind
	for b-a > step {
		if c.f >= d.f {
			third, b, d = d, d.x, c
			c = at(b - golden*(b-a))
		} else {
			third, a, c = c, c.x, d
			d = at(a + golden*(b-a))
		}
	}
	if d.f > c.f {
		c, d = d, c
	}
	if v := vertex(c, d, third); v != c.x {
		if peak := at(v); peak.f > c.f {
			c = peak
		}
	}
	return math.Exp(c.x), c.f
}

// vertex returns where the parabola through three spots, x the greatest, has
// its peak; x where that is not between them.
func vertex(x, y, z spot) float64 {
	p, q := (x.x-y.x)*(x.f-z.f), (x.x-z.x)*(x.f-y.f)
	at := x.x - ((x.x-y.x)*p-(x.x-z.x)*q)/(2*(p-q))
	if at >= min(x.x, y.x, z.x) && at <= max(x.x, y.x, z.x) { // false for NaN
		return at
	}
	return x.x
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
