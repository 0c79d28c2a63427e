package link

import "math"

// Detector is one single-photon detector; every figure is per detector.
type Detector struct {
	Efficiency   float64 // chance that a photon at its input clicks, 0 to 1
	DarkCountsHz float64 // counts per second in the dark
	JitterFWHMPs float64 // timing jitter, full width at half maximum
	DeadTimeNs   float64 // non-paralysable dead time after each count
	Afterpulsing float64 // share of the registered counts that is followed by an afterpulse, 0 to below 1
}

const (
	secondsPerNs = 1e-9
	// pulseCountSlack keeps a dead time of exactly n pulses from becoming
	// n-1 by rounding.
	pulseCountSlack = 1e-9
)

// Respond returns what a detector makes of clicks per second that would be
// registered without dead time and afterpulses: the registered counts per
// second (afterpulses included), and the live share of the time, 0 to 1.
//
//	m = 2 n₀/(b + √(b² + 4 p t n₀)),  b = 1 + n₀ t - p
//	L = 1/(1 + (n₀ + p m) t)
//
// It is the fixed point of m = (n₀ + p m) L: a non-paralysable dead time t [1]
// whose afterpulses, a share p of the registered counts, are lost in dead
// time like any other click. The form with the sum below the line does not
// cancel. It assumes clicks at random times.
//
// [1] Knoll. "Radiation Detection and Measurement", ch. 4.
func (d *Detector) Respond(clicks float64) (registered, live float64) {
	t, p := d.DeadTimeNs*secondsPerNs, d.Afterpulsing
	b := 1 + clicks*t - p
	registered = 2 * clicks / (b + math.Sqrt(b*b+4*p*t*clicks))
	return registered, 1 / (1 + (clicks+p*registered)*t)
}

// Incident undoes Respond: the clicks per second, afterpulses taken out,
// behind a registered rate, and the live share at that rate. Both are NaN
// where no rate of clicks could be registered so often.
func (d *Detector) Incident(registered float64) (clicks, live float64) {
	live = 1 - registered*d.DeadTimeNs*secondsPerNs
	if live <= 0 {
		return math.NaN(), math.NaN()
	}
	return registered * (1/live - d.Afterpulsing), live
}

// Gated returns the detector as a source of pulseRateHz sees it: its dead
// time counts in whole pulses, since between pulses nothing is lost.
func (d Detector) Gated(pulseRateHz float64) Detector {
	pulses := math.Floor(d.DeadTimeNs*secondsPerNs*pulseRateHz + pulseCountSlack)
	d.DeadTimeNs = pulses / pulseRateHz / secondsPerNs
	return d
}
