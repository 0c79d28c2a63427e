package link

import "math"

// DB is an optical loss in decibels; a loss is positive.
type DB float64

// Transmittance returns the share of the light that a loss lets through,
// 0 to 1 for a loss of 0 dB or more.
//
//	t = 10^(-loss/10)
func (d DB) Transmittance() float64 { return math.Pow(10, -float64(d)/10) }

// LossOf returns the loss of a transmittance in 0 to 1: +Inf at 0, NaN below.
func LossOf(transmittance float64) DB {
	if transmittance == 1 {
		return 0 // not -0
	}
	return DB(-10 * math.Log10(transmittance))
}
