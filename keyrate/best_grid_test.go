package keyrate

import (
	"math"
	"testing"

	"pairspan/link"
)

func TestBestPumpAndWindowAgainstGrid(t *testing.T) {
	keys := 0
	searchable(2, 50, 8, func(l Link, p OperatingPoint, ceilingHz float64) {
		most, at := grid(&l, p, 40, pumpAxis(ceilingHz), windowAxis(&l))
		holds(t, l, l.Best(p, Free{MaxPairRateHz: ceilingHz, Window: true}), at, most)
		if most > 0 {
			keys++
		}
	})
	if keys < 2 {
		t.Errorf("only %d links with a key", keys)
	}
}

func TestBestOfAllSettingsAgainstGrid(t *testing.T) {
	searchable(3, 20, 2, func(l Link, p OperatingPoint, ceilingHz float64) {
		most, at := grid(&l, p, 24, pumpAxis(ceilingHz), windowAxis(&l), shareAxis())
		holds(t, l, l.Best(p, Free{MaxPairRateHz: ceilingHz, Window: true, KeyShare: true}), at, most)
	})
}

// At the wide window that a search starts from, this link has a key with next
// to no pump alone; it has most of all with a strong pump and a narrower
// window.
func TestBestIsNotHeldByAWeakPump(t *testing.T) {
	l := Link{
		PulseRateHz: 2.4789390969493758e+07, Modes: math.Inf(1), StateError: [2]float64{0.00034, 0.0287},
		Arms: [2]Arm{
			{
				Transmittance: 0.0020126, Passive: true, Misalignment: 0.00594, PMDError: 0.00254, BackgroundHz: 674520.6,
				Detector: link.Detector{Efficiency: 0.78106, DarkCountsHz: 7.1026, DeadTimeNs: 4.7356},
			},
			{
				Transmittance: 0.0013762, Misalignment: 0.000734, PMDError: 0.000183, SpreadFWHMPs: 613.345,
				Detector: link.Detector{Efficiency: 0.7544, DeadTimeNs: 112.36, Afterpulsing: 0.11375},
			},
		},
		ErrorCorrectionF: 1.04134, DutyCycle: 1,
	}
	p := OperatingPoint{PairRateHz: 1e6, WindowS: 1e-10, KeyShare: 0.716}
	const ceilingHz = 1e8
	most, at := grid(&l, p, 60, pumpAxis(ceilingHz), windowAxis(&l))
	holds(t, l, l.Best(p, Free{MaxPairRateHz: ceilingHz, Window: true}), at, most)
}
