package keyrate

import (
	"math"
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

func TestBestWindowAgainstGrid(t *testing.T) {
	keys := 0
	searchable(1, 100, 10, func(l Link, p OperatingPoint, _ float64) {
		most, at := grid(&l, p, 400, windowAxis(&l))
		holds(t, l, l.BestWindow(p), at, most)
		if most > 0 {
			keys++
		}
	})
	if keys < 5 {
		t.Errorf("only %d links with a key", keys)
	}
}

// Without noise a slot's QBER depends on the accidental coincidences for each
// true one, B τ/w. While that stays, the rate goes as the true coincidences
// B w, that is as w²/τ: its maximum, where 2 τ w' = w, is
//
//	4 z exp(-z²)/√π = erf z,  z = √(ln 2) τ/FWHM:  τ = 1.189 FWHM, w = 0.8385
func TestBestWindowWithAFreePump(t *testing.T) {
	lo, hi := 0.5, 2.0
	for range 60 {
		z := (lo + hi) / 2
		if 4*z*math.Exp(-z*z)/math.Sqrt(math.Pi) > math.Erf(z) {
			lo = z
		} else {
			hi = z
		}
	}
	inFWHM, share := lo/math.Sqrt(math.Ln2), math.Erf(lo)
	if math.Abs(inFWHM-1.189) > 5e-4 || math.Abs(share-0.8385) > 5e-5 {
		t.Errorf("the maximum is at %v FWHM with a share of %v, want 1.189 and 0.8385", inFWHM, share)
	}
	l := plainLink()
	l.SpreadFWHMPs = 500
	for i := range l.Arms {
		l.Arms[i].Transmittance = 1e-4
	}
	for _, e := range []float64{0, 0.03} {
		l.StateError = [2]float64{e, e}
		p := l.Best(OperatingPoint{KeyShare: 0.5}, Free{MaxPairRateHz: 1e12, Window: true})
		// A hundredth off costs a ten thousandth of the rate.
		if r := l.Key(p); !near(p.WindowS, inFWHM*500e-12, 0.01) || !near(r.WindowShare, share, 0.005) {
			t.Errorf("error %v: window %v s, share %v, want %v, %v", e, p.WindowS, r.WindowShare, inFWHM*500e-12, share)
		}
	}
}

func threeDigits(x float64) bool {
	return x == mustParse(strconv.FormatFloat(x, 'e', 2, 64))
}

func mustParse(s string) float64 {
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		panic(err)
	}
	return x
}

func TestRound3(t *testing.T) {
	for _, row := range []struct{ x, most, want float64 }{
		{1.2345, 10, 1.23},
		{1.236, 10, 1.24},
		{9.996, 20, 10},
		{9.996, 9.996, 9.95},
		{1.009, 1.009, 1},
		{0.99, 0.99, 0.99},
		{123456, 1e9, 123000},
		{1e-12, 1, 1e-12},
	} {
		if got := Round3(row.x, row.most); got != row.want {
			t.Errorf("%v of at most %v: %v, want %v", row.x, row.most, got, row.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		x := math.Pow(10, rapid.Float64Range(-15, 15).Draw(t, "decade"))
		most := x * math.Pow(10, rapid.Float64Range(0, 0.1).Draw(t, "above"))
		got := Round3(x, most)
		if !threeDigits(got) || got > most || got < 0.99*x || got > 1.005*x || Round3(got, most) != got {
			t.Errorf("%v of at most %v: %v", x, most, got)
		}
		if free := Round3(x, math.Inf(1)); math.Abs(free-x) > 0.005*x {
			t.Errorf("%v rounds to %v", x, free)
		}
	})
}

// A search moves what is free, stays within its bounds and gives settings that
// a person can set.
func TestBestKeepsToItsBounds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(5)
		if u.often() {
			l = u.blocks(l)
		}
		free := Free{Window: u.often(), KeyShare: u.often()}
		if u.often() {
			free.MaxPairRateHz = u.decades(3, 10)
		}
		got := l.Best(p, free)
		const rounding = 1 + 1e-12
		window := windowAxis(&l)
		shortest, ps := min(window.lo, window.hi)/rounding, math.Round(got.WindowS*1e15)/1e3
		if free.Window && !(got.WindowS >= shortest && got.WindowS <= window.hi*rounding && threeDigits(ps)) {
			t.Errorf("%+v: window %v s", l, got.WindowS)
		}
		if free.KeyShare && !(got.KeyShare >= 0.5 && got.KeyShare <= 0.99 && threeDigits(got.KeyShare)) {
			t.Errorf("%+v: share %v", l, got.KeyShare)
		}
		if most := free.MaxPairRateHz; most > 0 && !(got.PairRateHz > 0 && got.PairRateHz <= most && (got.PairRateHz == most || threeDigits(got.PairRateHz))) {
			t.Errorf("%+v: pair rate %v of at most %v", l, got.PairRateHz, most)
		}
		if !free.Window && got.WindowS != p.WindowS || !free.KeyShare && got.KeyShare != p.KeyShare ||
			free.MaxPairRateHz == 0 && got.PairRateHz != p.PairRateHz {
			t.Errorf("%+v free: %+v became %+v", free, p, got)
		}
	})
}

func TestBestWindowAtItsEnds(t *testing.T) {
	l, p := campus()
	l.SpreadFWHMPs = 0
	if got := l.BestWindow(p).WindowS; got != 1e-12 {
		t.Errorf("no spread: window %v s, want 1 ps", got)
	}
	l.PulseRateHz = 3e12 // a period below 1 ps
	for i := range l.Arms {
		l.Arms[i].SpreadFWHMPs = 100
	}
	if got := l.BestWindow(p).WindowS; got > 1/l.PulseRateHz || got <= 0 {
		t.Errorf("window %v s of a period of %v", got, 1/l.PulseRateHz)
	}
}
