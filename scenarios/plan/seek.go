package plan

import (
	"math"
	"slices"
)

// scale turns values into the coordinate in which they are spaced evenly.
type scale struct{ log bool }

func (s scale) to(x float64) float64 {
	if s.log {
		return math.Log(x)
	}
	return x
}

func (s scale) from(u float64) float64 {
	if s.log {
		return math.Exp(u)
	}
	return u
}

const (
	decadesSearched = 18 // below the end of a range that has no least value
	linearSteps     = 20
	peakSteps       = 24 // of golden sections: to 1e-5 of two steps
	closeEnough     = 1e-11
	crossingSteps   = 200 // of a crossing; bisection alone takes 60
	goldenPart      = 0.6180339887498949
)

// seeker looks in a range for the value nearest to its far end, which is
// where it is hardest to serve, whose excess is 0 or more.
type seeker struct {
	excess    func(x float64) float64
	far, near float64
	scale     scale
	known     float64 // a value that may be the only one to serve; NaN: none
	tolerance float64 // relative, of a crossing
}

// grid lists values from the far end to the near one.
func (k *seeker) grid() []float64 {
	lo, hi := min(k.far, k.near), max(k.far, k.near)
	values := []float64{lo}
	if k.scale.log {
		least := max(lo, hi*math.Pow(10, -decadesSearched))
		if lo > 0 {
			values[0] = least
		}
		for n := int(math.Ceil(math.Log10(hi/least))) - 1; n > 0; n-- {
			values = append(values, hi*math.Pow(10, -float64(n)))
		}
	} else {
		for n := 1; n < linearSteps; n++ {
			values = append(values, lo+(hi-lo)*float64(n)/linearSteps)
		}
	}
	values = append(values, hi)
	if k.known > lo && k.known < hi {
		values = append(values, k.known)
	}
	slices.Sort(values)
	if k.far > k.near {
		slices.Reverse(values)
	}
	return slices.Compact(values)
}

// seek returns the value, or the reason why there is none. Where an end of
// the range serves but not all of it, the end is the value.
func (k *seeker) seek() (float64, string) {
	values := k.grid()
	best, most, before := 0, math.Inf(-1), 0.0
	for i, x := range values {
		e := k.excess(x)
		switch {
		case e >= 0 && i == 0:
			if k.all(values[1:]) {
				return 0, everyValueDoes
			}
			return x, ""
		case e >= 0:
			return k.crossing(x, values[i-1], e, before), ""
		case e > most:
			best, most = i, e
		}
		before = e
	}
	far := values[max(best-1, 0)]
	x, e := k.peak(far, values[min(best+1, len(values)-1)])
	if e < 0 {
		return 0, noValueDoes
	}
	return k.crossing(x, far, e, k.excess(far)), ""
}

func (k *seeker) all(values []float64) bool {
	for _, x := range values {
		if k.excess(x) < 0 {
			return false
		}
	}
	return true
}

// peak looks between two values for one that serves, and returns the best it
// has found.
func (k *seeker) peak(from, to float64) (x, e float64) {
	s := k.scale
	if from == 0 || to == 0 {
		s = scale{}
	}
	a, b := s.to(from), s.to(to)
	c, d := b-goldenPart*(b-a), a+goldenPart*(b-a)
	ec, ed := k.excess(s.from(c)), k.excess(s.from(d))
	for range peakSteps {
		if ec >= 0 || ed >= 0 {
			break
		}
		if ec >= ed {
			b, d, ed = d, c, ec
			c = b - goldenPart*(b-a)
			ec = k.excess(s.from(c))
		} else {
			a, c, ec = c, d, ed
			d = a + goldenPart*(b-a)
			ed = k.excess(s.from(d))
		}
	}
	if ec >= ed {
		return s.from(c), ec
	}
	return s.from(d), ed
}

// crossing narrows the bracket between a value that serves and one that does
// not, and returns the end that serves.
func (k *seeker) crossing(pass, fail, ePass, eFail float64) float64 {
	b := bracket{scale: k.scale, ePass: ePass, eFail: eFail}
	if pass == 0 || fail == 0 {
		b.scale = scale{}
	}
	b.pass, b.fail = b.to(pass), b.to(fail)
	x := pass
	for range crossingSteps {
		tolerance := k.tolerance
		if !b.log {
			tolerance *= max(math.Abs(b.pass), math.Abs(b.fail))
		}
		if math.Abs(b.fail-b.pass) <= tolerance {
			break
		}
		u := b.inside(tolerance)
		y := b.from(u)
		e := k.excess(y)
		if e >= 0 {
			x = y
		}
		b.take(u, e)
	}
	return x
}

// bracket holds a crossing between a coordinate that serves and one that does
// not, each with its excess.
type bracket struct {
	scale
	pass, fail   float64
	ePass, eFail float64
	stays        int // the end that the last step kept: 1 the failing one, -1 the other
	slow         int // steps since the bracket was last halved
}

// inside returns where to look next: on the chord, or in the middle where the
// chord is slow, since whole bits of a block are stairs; not closer to an end
// than half the tolerance, so that the far end comes up too.
func (b *bracket) inside(tolerance float64) float64 {
	width := b.fail - b.pass
	t := b.ePass / (b.ePass - b.eFail)
	if b.slow > 1 || !(t >= 0 && t < 1) {
		t, b.slow = 0.5, 0
	}
	margin := tolerance / (2 * math.Abs(width))
	return b.pass + width*max(margin, min(t, 1-margin))
}

// take moves the end that a step replaces. The weight of an end that stays
// twice is halved (the Illinois rule).
func (b *bracket) take(u, e float64) {
	before, stays := math.Abs(b.fail-b.pass), 1
	if e >= 0 {
		b.pass, b.ePass = u, e
	} else {
		b.fail, b.eFail, stays = u, e, -1
	}
	switch {
	case stays == b.stays && stays == 1:
		b.eFail /= 2
	case stays == b.stays:
		b.ePass /= 2
	}
	b.stays = stays
	if b.slow++; math.Abs(b.fail-b.pass) <= before/2 {
		b.slow = 0
	}
}
