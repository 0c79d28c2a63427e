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
	c, d := b-golden*(b-a), a+golden*(b-a)
	fc, fd := f(math.Exp(c)), f(math.Exp(d))
	third, fThird := a, math.Inf(-1) // the last point left behind
	for b-a > step {
		if fc >= fd {
			third, fThird = d, fd
			b, d, fd = d, c, fc
			c = b - golden*(b-a)
			fc = f(math.Exp(c))
		} else {
			third, fThird = c, fc
			a, c, fc = c, d, fd
			d = a + golden*(b-a)
			fd = f(math.Exp(d))
		}
	}
	best, fBest, other, fOther := c, fc, d, fd
	if fd > fc {
		best, fBest, other, fOther = d, fd, c, fc
	}
	if v := vertex(best, fBest, other, fOther, third, fThird); v != best {
		if fv := f(math.Exp(v)); fv > fBest {
			return math.Exp(v), fv
		}
	}
	return math.Exp(best), fBest
}

// vertex returns where the parabola through three points is greatest; x, whose
// f is the greatest and which lies between the others, where there is no such
// place.
func vertex(x, fx, y, fy, z, fz float64) float64 {
	p, q := (x-y)*(fx-fz), (x-z)*(fx-fy)
	at := x - ((x-y)*p-(x-z)*q)/(2*(p-q))
	if at >= min(y, z) && at <= max(y, z) { // false for NaN
		return at
	}
	return x
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
