package keyrate

import (
	"math"
	"math/rand/v2"
	"testing"
)

// usable is what a search is to find most of: usable key before the bits of a
// block are floored, at a duty cycle of 1.
func usable(l *Link, p OperatingPoint) float64 {
	r := l.Key(p)
	if l.BlockBits == 0 {
		return r.SecretBps
	}
	b := l.Split(&r)
	return max(0, b.SecretBits()-l.AuthenticationBits) / l.BlockBits * r.SiftedBps()
}

// axis is one free setting and its range; the ends have three digits, since
// settings do.
type axis struct {
	set    func(*OperatingPoint, float64)
	lo, hi float64
}

func pumpAxis(ceilingHz float64) axis {
	return axis{func(p *OperatingPoint, x float64) { p.PairRateHz = x }, ceilingHz * 1e-9, Round3(ceilingHz, ceilingHz)}
}

// windowAxis reaches as far as a window can be of use: a pulsed source's period,
// or six times the spread, which holds all but 1e-12 of the arrivals.
func windowAxis(l *Link) axis {
	widestPs := 6 * l.SpreadFWHMPs
	if l.PulseRateHz > 0 {
		widestPs = min(6*max(l.Arms[Alice].SpreadFWHMPs, l.Arms[Bob].SpreadFWHMPs), 1e12/l.PulseRateHz)
	}
	widestPs = max(1, widestPs)
	return axis{func(p *OperatingPoint, x float64) { p.WindowS = x }, 1e-12, Round3(widestPs, widestPs) / psPerSecond}
}

func shareAxis() axis {
	return axis{func(p *OperatingPoint, x float64) { p.KeyShare = x }, 0.5, 0.99}
}

// grid tries all combinations of so many values on each axis, evenly spaced in
// the logarithm, and then twice more in finer steps around the best.
func grid(l *Link, p OperatingPoint, values int, axes ...axis) (most float64, at OperatingPoint) {
	for range 3 {
		best := make([]float64, len(axes))
		var walk func(i int, p OperatingPoint, place []float64)
		walk = func(i int, p OperatingPoint, place []float64) {
			if i == len(axes) {
				if x := usable(l, p); x > most {
					most, at = x, p
					copy(best, place)
				}
				return
			}
			for j := range values {
				place[i] = axes[i].lo * math.Pow(axes[i].hi/axes[i].lo, float64(j)/float64(values-1))
				axes[i].set(&p, place[i])
				walk(i+1, p, place)
			}
		}
		walk(0, p, make([]float64, len(axes)))
		if best[0] == 0 {
			break // nothing found, or nothing more
		}
		near := make([]axis, len(axes))
		for i, a := range axes {
			step := math.Pow(a.hi/a.lo, 1.5/float64(values-1))
			near[i] = axis{a.set, max(a.lo, best[i]/step), min(a.hi, best[i]*step)}
		}
		axes = near
	}
	return most, at
}

// searchable draws so many links, half of them with blocks, and a ceiling of
// the pair rate for each.
func searchable(seed uint64, links, shortLinks int, f func(l Link, p OperatingPoint, ceilingHz float64)) {
	u := draws(rand.New(rand.NewPCG(6, seed)).Float64)
	if testing.Short() {
		links = shortLinks
	}
	for i := range links {
		l, p := u.link(3)
		if i%2 == 1 {
			l = u.blocks(l)
		}
		ceilingHz := u.decades(6, 9.5)
		if l.PulseRateHz > 0 {
			ceilingHz = l.PulseRateHz * u.decades(-2, 0.7)
		}
		f(l, p, ceilingHz)
	}
}

// holds checks that a setting gives no less than a grid found, but for 0.1 %.
func holds(t *testing.T, l Link, found, at OperatingPoint, most float64) {
	t.Helper()
	if got := usable(&l, found); got < 0.999*most {
		t.Errorf("%+v\nfound %v bit/s at %+v, a grid %v at %+v: %.2f %% more", l, got, found, most, at, 100*(most/got-1))
	}
}
