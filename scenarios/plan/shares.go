package plan

import "slices"

// shares are what each input contributes to the variance of the usable rate at
// worst: to first order, and as the draws have it.
func (d *draws) shares(s *sample) []Share {
	variances, sum := d.firstOrder(), 0.0
	for _, v := range variances {
		sum += v
	}
	all := make([]Share, len(d.inputs))
	for j := range all {
		drawn := s.inputs[j]
		if d.inputs[j].repetitions > 0 {
			drawn = d.ofRepetitions(drawn)
		}
		all[j] = Share{Entry: d.inputs[j].entry, ByDraws: squaredCorrelation(drawn, s.worst)}
		if sum > 0 {
			all[j].FirstOrder = variances[j] / sum
		}
	}
	slices.SortStableFunc(all, func(x, y Share) int {
		switch {
		case x.FirstOrder > y.FirstOrder:
			return -1
		case x.FirstOrder < y.FirstOrder:
			return 1
		}
		return 0
	})
	return all
}

// slopeStep is the step of a slope in standard deviations: wide enough to pass
// over the whole bits of a block.
const slopeStep = 0.1

// firstOrder returns the square of slope times standard deviation of each
// input. With rate and figure above 0 it is that of elasticity times relative
// deviation, times the same squared rate for all.
func (d *draws) firstOrder() []float64 {
	w, worst := d.drawer(), d.hold(d.s.DistanceKm(), judged)
	variances := make([]float64, len(d.inputs))
	for j := range d.inputs {
		in := &d.inputs[j]
		if in.repetitions > 0 {
			variances[j] = d.repeatedVariance(w, worst)
			continue
		}
		var x, rate [2]float64
		for side, step := range []float64{-slopeStep * in.sd, slopeStep * in.sd} {
			x[side] = in.Clamp(in.value + step)
			*w.at[j] = x[side]
			if !w.settle() { // counts that cannot be
				x[side] = in.value
				w.restore()
			}
			rate[side] = w.most(worst)
		}
		w.restore()
		if x[1] > x[0] {
			change := in.sd * (rate[1] - rate[0]) / (x[1] - x[0])
			variances[j] = change * change
		}
	}
	return variances
}

// squaredCorrelation returns the share of the variance of y that is linear in
// x; 0 where one of them does not vary.
func squaredCorrelation(x, y []float64) float64 {
	meanX, meanY := mean(x), mean(y)
	var xx, yy, xy float64
	for i := range x {
		dx, dy := x[i]-meanX, y[i]-meanY
		xx, yy, xy = xx+dx*dx, yy+dy*dy, xy+dx*dy
	}
	if xx == 0 || yy == 0 {
		return 0
	}
	return xy / xx * (xy / yy)
}

func mean(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	return sum / float64(len(x))
}
