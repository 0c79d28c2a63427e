package keyrate

import (
	"math"

	"pairspan/link"
)

// Bounds and steps of a search for settings.
const (
	leastWindowPs  = 1.0  // floor of a searched window
	widestInSpread = 6.0  // beyond, a window holds all but 1e-12 of the arrivals
	weakestPump    = 1e-9 // of the ceiling: no useful source is weaker
	evenShare      = 0.5
	mostShare      = 0.99
	smallLag       = 0.3 // of the secret fractions: the sum of both then has the highest peak
)

// Free says which settings are left to a search; the others stay.
type Free struct {
	MaxPairRateHz float64 // ceiling of the pair rate; 0: it stays
	Window        bool
	KeyShare      bool
}

// Best returns p with the free settings that make most usable key, each
// rounded to three digits (the window in ps), but for a pump at its ceiling. A
// window is at least 1 ps, at
// most the period of a pulsed source, and 1 ps without any arrival spread.
// Where no block has a key, the settings are those of the asymptotic rate with
// even shares; where there is none at all, those that come nearest.
func (l *Link) Best(p OperatingPoint, free Free) OperatingPoint {
	var found OperatingPoint
	worth := 0.0
	if l.BlockBits > 0 {
		found, worth = l.ascend(p, free, blockKey)
	}
	if worth <= 0 {
		if l.BlockBits > 0 && free.KeyShare {
			free.KeyShare, p.KeyShare = false, evenShare
		}
		found = l.bestAsymptotic(p, free)
	}
	if free.MaxPairRateHz > 0 {
		// The ceiling is a figure that a person stated, and can set.
		found.PairRateHz = min(Round3(found.PairRateHz, math.Inf(1)), free.MaxPairRateHz)
	}
	if free.Window {
		found.WindowS = Round3(found.WindowS*psPerSecond, l.widestWindowPs()) / psPerSecond
	}
	if free.KeyShare {
		found.KeyShare = Round3(found.KeyShare, mostShare)
	}
	return found
}

// bestAsymptotic climbs the asymptotic rate. It is the greatest of the signed
// rates of the key basis, of the check basis and of both, each of which is
// smooth where the rate itself has kinks that a climb gets caught in. With
// even shares the key basis has the greater fraction, and is asked alone only
// where the check basis lags behind.
func (l *Link) bestAsymptotic(p OperatingPoint, free Free) OperatingPoint {
	even := p.KeyShare == evenShare && !free.KeyShare
	if even && l.StateError[KeyBasis] == l.StateError[CheckBasis] {
		found, _ := l.ascend(p, free, bothBases)
		return found
	}
	found, most := l.ascend(p, free, signedSum)
	goals := []goal{keyBasisAlone, checkBasisAlone}
	if even {
		goals = goals[:1]
		if l.lag(found) < smallLag {
			return found
		}
	}
	for _, goal := range goals {
		if at, worth := l.ascend(p, free, goal); worth > most {
			found, most = at, worth
		}
	}
	return found
}

// lag returns how far the check basis's secret fraction lies below the key
// basis's, as a share of it.
func (l *Link) lag(p OperatingPoint) float64 {
	r := l.Key(p)
	key := SecretFraction(r.QBER[KeyBasis], r.QBER[CheckBasis], l.ErrorCorrectionF)
	check := SecretFraction(r.QBER[CheckBasis], r.QBER[KeyBasis], l.ErrorCorrectionF)
	if key <= 0 {
		return math.Inf(1)
	}
	return (key - check) / key
}

// BestWindow is Best with the window free alone.
func (l *Link) BestWindow(p OperatingPoint) OperatingPoint { return l.Best(p, Free{Window: true}) }

// widestWindowPs bounds the search for a window.
func (l *Link) widestWindowPs() float64 {
	if l.PulseRateHz == 0 {
		return max(leastWindowPs, widestInSpread*l.SpreadFWHMPs)
	}
	spread := max(l.Arms[Alice].SpreadFWHMPs, l.Arms[Bob].SpreadFWHMPs)
	return min(max(leastWindowPs, widestInSpread*spread), psPerSecond/l.PulseRateHz)
}

// sharePerWindow returns w/τ of a continuous link.
func (l *Link) sharePerWindow(windowS float64) float64 {
	return link.WindowShare(windowS*psPerSecond, l.SpreadFWHMPs) / windowS
}
