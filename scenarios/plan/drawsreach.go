package plan

import (
	"context"
	"math"

	"pairspan/keyrate"
)

const (
	bandPoints = 61 // distances of the statistical band
	farPoints  = 30 // beyond it, where the curve was asked to end before the reach
	halvings   = 10 // of the way between two distances, to find a draw's reach
)

// along are the settings chosen along the fibre, for the judged state.
type along struct {
	installed held
	held      []held // from near to far: bandPoints evenly to the curve's end, then beyond
}

// newAlong chooses the settings, the distances shared between the cores. Where
// the curve ends before the reach with a quarter more, it goes on to there.
func (a *asker) newAlong(ctx context.Context, toKm float64, reachKm *float64) (*along, error) {
	var km []float64
	for i := range bandPoints {
		km = append(km, bandKm(toKm, i))
	}
	far := a.s.DistanceKm()
	if reachKm != nil {
		far = max(far, *reachKm)
	}
	if far *= beyondReach; far > toKm {
		for i := range farPoints {
			km = append(km, toKm+(far-toKm)*float64(i+1)/farPoints)
		}
	}
	out := &along{a.hold(a.s.DistanceKm(), judged)[0], make([]held, len(km))}
	err := onCores(ctx, len(km), func() func(int) {
		return func(i int) { out.held[i] = a.hold(km[i], judged)[0] }
	})
	return out, err
}

// bandKm is distance i of the band.
func bandKm(toKm float64, i int) float64 { return toKm * float64(i) / (bandPoints - 1) }

// reach returns the reach of a drawn link, as the answer has it for the link
// as stated: from an installed rate that is enough the first crossing beyond,
// else the greatest shorter distance at which the rate is enough. It is +Inf
// where no crossing was seen, -Inf where no distance will do. curve is the
// drawn link's usable rate along the band.
func (r *along) reach(w *drawer, installedBps float64, curve func(k int) float64) float64 {
	enough := func(k int) bool {
		if k < bandPoints {
			return w.enough(curve(k))
		}
		rate := w.rate(r.held[k].km, r.held[k])
		return w.enough(rate.UsableBps)
	}
	last := r.installed
	last.km = w.own.DistanceKm() // the length may be drawn too
	if w.enough(installedBps) {
		for k, h := range r.held {
			if h.km <= last.km {
				continue
			}
			if !enough(k) {
				return w.between(last, h)
			}
			last = h
		}
		return math.Inf(1)
	}
	for k := len(r.held) - 1; k >= 0; k-- {
		h := r.held[k]
		if h.km >= last.km {
			continue
		}
		if enough(k) {
			return w.between(h, last)
		}
		last = h
	}
	return math.Inf(-1)
}

// between halves the way from a distance where the drawn link's rate is enough
// to one where it is not, and returns the end where it is. The settings in
// between are those of both ends in proportion, window and pump in their logarithm.
func (w *drawer) between(pass, fail held) float64 {
	from, to := 0.0, 1.0 // shares of the way
	h := pass
	way := fail.km - pass.km
	for range halvings {
		mid := (from + to) / 2
		h.setting = mixed(pass.setting, fail.setting, mid)
		if rate := w.rate(pass.km+mid*way, h); w.enough(rate.UsableBps) {
			from = mid
		} else {
			to = mid
		}
	}
	return pass.km + from*way
}

// mixed returns the setting a part of the way from p to q.
func mixed(p, q keyrate.OperatingPoint, part float64) keyrate.OperatingPoint {
	between := func(x, y float64) float64 { return x * math.Pow(y/x, part) }
	return keyrate.OperatingPoint{
		PairRateHz: between(p.PairRateHz, q.PairRateHz),
		WindowS:    between(p.WindowS, q.WindowS),
		KeyShare:   p.KeyShare + part*(q.KeyShare-p.KeyShare),
	}
}
