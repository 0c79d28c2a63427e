package keyrate

import (
	"math"
	"math/rand/v2"
	"sync"
	"testing"
)

// exhaustive tries values pair rates with as many windows each, evenly spaced
// in the logarithm. Pair rates too small for what was found are left out: since
// h(e) ≥ 4 e (1-e), a secret rate is at most the rate of right bits less that
// of wrong ones, and that comes from light of one mode alone, whose photons are
// both detected. It is at most (1 + μ/2) times the rate of pairs times both
// efficiencies, and μ is 5 at most.
func exhaustive(l *Link, p OperatingPoint, values int, pump, window axis) (most float64, at OperatingPoint) {
	place := func(a axis, i int) float64 { return a.lo * math.Pow(a.hi/a.lo, float64(i)/float64(values-1)) }
	windows := make([]float64, values)
	for i := range windows {
		windows[i] = place(window, i)
	}
	const workers = 2
	var found [workers]struct {
		most float64
		at   OperatingPoint
	}
	both := 4.0 // above 1 + μ/2
	for i := range l.Arms {
		both *= l.Arms[i].Transmittance * l.Arms[i].Detector.Efficiency
	}
	var wait sync.WaitGroup
	for w := range workers {
		wait.Go(func() {
			for i := values - 1 - w; i >= 0; i -= workers {
				p := p
				if p.PairRateHz = place(pump, i); p.PairRateHz*both < found[w].most {
					break
				}
				v := l.view(p)
				for _, p.WindowS = range windows {
					if x := v.usable(p.WindowS, found[w].most); x > found[w].most {
						found[w].most, found[w].at = x, p
					}
				}
			}
		})
	}
	wait.Wait()
	for _, f := range found {
		if f.most > most {
			most, at = f.most, f.at
		}
	}
	return most, at
}

// usable is the usable key before whole bits, at a duty cycle of 1. It does
// not ask a block that the asymptotic rate of the key basis keeps below most.
func (v *view) usable(windowS, most float64) float64 {
	var r Rate
	v.key(windowS, &r)
	l := v.link
	if l.BlockBits == 0 {
		return r.SecretBps
	}
	if r.KeyBasisSecretBps(l.ErrorCorrectionF) <= 0.99*most {
		return 0
	}
	b := l.Split(&r)
	return max(0, b.SecretBits()-l.AuthenticationBits) / l.BlockBits * r.SiftedBps()
}

// No grid of a million settings finds a thousandth more than the search, on
// fifty links. Blocks are divided into whole bits, by which a grid may win: it
// must not win more than one secret bit a block.
func TestBestAgainstAMillionSettings(t *testing.T) {
	keys, values := 0, 1000
	if testing.Short() {
		values = 200
	}
	searchable(9, 50, 10, func(l Link, p OperatingPoint, ceilingHz float64) {
		found := l.Best(p, Free{MaxPairRateHz: ceilingHz, Window: true})
		most, at := exhaustive(&l, p, values, pumpAxis(ceilingHz), windowAxis(&l))
		got, bit := usable(&l, found), 0.0
		if l.BlockBits > 0 {
			r := l.Key(found)
			bit = r.SiftedBps() / l.BlockBits
		}
		if got < 0.999*most && got < most-bit {
			t.Errorf("%+v\nfound %v bit/s at %+v, the grid %v at %+v: %.2f %% more", l, got, found, most, at, 100*(most/got-1))
		}
		if most > 0 {
			keys++
		}
	})
	if keys < 7 {
		t.Errorf("only %d links with a key", keys)
	}
}

// At low efficiency and without noise the coincidences of a pulse go as the
// mean square of its number of pairs, μ + μ² for Poisson light and μ + 3/2 μ²
// for one thermal mode of each polarisation, of which μ and μ + μ²/2 more are
// right than wrong: visibilities of 1/(1+μ) and (2+μ)/(2+3μ). The key goes as
//
//	K(μ) = Q(μ) [1 - (1+f) h((1-V(μ))/2)]
//
// whatever the loss, and so does not its best μ.
func TestBestPairsPerPulseWithoutNoise(t *testing.T) {
	l := plainLink()
	l.PulseRateHz = 1e8
	const arm = 1e-5
	for i := range l.Arms {
		l.Arms[i].Transmittance, l.Arms[i].Detector.Efficiency = arm, 1
	}
	for _, row := range []struct {
		modes, squares float64 // Q = μ + squares μ²
		visibility     func(mu float64) float64
	}{
		{math.Inf(1), 1, func(mu float64) float64 { return 1 / (1 + mu) }},
		{1, 1.5, func(mu float64) float64 { return (2 + mu) / (2 + 3*mu) }},
	} {
		for _, f := range []float64{1, 1.16, 1.4} {
			key := func(mu float64) float64 {
				e := (1 - row.visibility(mu)) / 2
				return (mu + row.squares*mu*mu) * (1 - (1+f)*(-e*math.Log2(e)-(1-e)*math.Log2(1-e)))
			}
			best := 0.0
			for mu := 1e-4; mu < 1; mu += 1e-5 {
				if key(mu) > key(best) || best == 0 {
					best = mu
				}
			}
			l.Modes, l.ErrorCorrectionF = row.modes, f
			p := l.Best(OperatingPoint{WindowS: 1e-9, KeyShare: 0.5}, Free{MaxPairRateHz: l.PulseRateHz})
			mu, r := p.PairRateHz/l.PulseRateHz, l.Key(p)
			// A hundredth off costs a ten thousandth of the rate.
			if !near(mu, best, 0.01) {
				t.Errorf("%v modes, f = %v: %v pairs a pulse, want %v", row.modes, f, mu, best)
			}
			// Half of the matched slots are sifted with equal shares.
			if want := l.PulseRateHz * arm * arm / 2 * key(best); !near(r.SecretBps, want, 2e-4) {
				t.Errorf("%v modes, f = %v: %v bit/s, want %v", row.modes, f, r.SecretBps, want)
			}
		}
	}
}

// The parabola through three points of a parabola is that parabola.
func TestVertex(t *testing.T) {
	u := draws(rand.New(rand.NewPCG(7, 1)).Float64)
	for range 1000 {
		top, width, height := u.between(-1, 1), u.decades(-2, 2), u.between(-5, 5)
		f := func(x float64) float64 { return height - (x-top)*(x-top)/width }
		y, z := top-u.between(0.1, 3), top+u.between(0.1, 3)
		x := u.between(y, z)
		if got := vertex(spot{x, f(x)}, spot{y, f(y)}, spot{z, f(z)}); math.Abs(got-top) > 1e-9 {
			t.Errorf("the vertex through %v, %v, %v is %v, want %v", x, y, z, got, top)
		}
	}
	if got := vertex(spot{1, 2}, spot{0, 2}, spot{3, 2}); got != 1 {
		t.Errorf("a level line has its vertex at %v", got)
	}
}
