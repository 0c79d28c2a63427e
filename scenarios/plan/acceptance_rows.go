package plan

import (
	"math"

	"pairspan/keyrate"
)

// reading is one figure of the acceptance sheet.
type reading int

// The readings, in the order of the sheet. Those of an arm stand for Alice's;
// Bob's come right after (see of).
const (
	singles       reading = 2 * iota // all of the arm's detectors
	keyDetector                      // one detector of the key basis
	checkDetector                    // one of the check basis
	blocked                          // one detector, the source blocked
	liveShare                        // of the detectors of the key basis
	ofTheLink                        // from here on there is one of the whole link
)

// The readings of the whole link.
const (
	coincidences = ofTheLink + iota
	accidentals
	car
	sifted
	qberKey
	qberCheck
	readings // how many there are
)

// of returns an arm's own reading.
func (r reading) of(arm int) reading { return r + reading(arm) }

// sheet holds a figure per reading; NaN where there is none.
type sheet [readings]float64

// sheetRow says what a reading is, and what can be behind a deviation.
type sheetRow struct {
	figure, unit string
	label        string
	cause        func(arm int) cause // what most naturally moves it
	pointsTo     string
}

// sheetRows are what is said of each reading; %s stands for the arm.
var sheetRows = [readings]sheetRow{
	singles: {
		"singles_%s_hz", "Hz", "singles, all of %s's detectors", lossInArm,
		"Low in this arm alone: loss or detector efficiency there. Low in both alike: the pump, or the coupling. High: stray light, dark counts or afterpulses.",
	},
	keyDetector: {
		"singles_key_detector_%s_hz", "Hz", "singles, one of %s's detectors in the key basis", lossInArm,
		"One detector off the others: its efficiency, its coupling or the analyser before it. All low: see the arm's singles.",
	},
	checkDetector: {
		"singles_check_detector_%s_hz", "Hz", "singles, one of %s's detectors in the check basis", lossInArm,
		"One detector off the others: its efficiency, its coupling or the analyser before it. Off against the key basis: the share of the splitter.",
	},
	blocked: {
		"source_blocked_%s_hz", "Hz", "counts with the source blocked, one of %s's detectors", strayInArm,
		"High: stray light, a warm or noisy detector, afterpulses. Low: a detector that is off or badly biased.",
	},
	liveShare: {
		"live_share_%s", "", "share of the time in which %s's detectors of the key basis can count", strayInArm,
		"Low: too much light, or a longer dead time. High: light is missing; see the arm's singles.",
	},
	coincidences: {
		"coincidences_hz", "Hz", "coincidences within the window, matched bases or not", lossInBoth,
		"Low while the singles fit: the window off the delay, the clocks, or lengths that differ from the plan. Low as the singles say: the loss found there.",
	},
	accidentals: {
		"accidentals_hz", "Hz", "accidental coincidences, in a window far off the delay", strayInBoth,
		"High while the singles fit: a window wider than planned. High with the singles: stray light, dark counts, or too much pump.",
	},
	car: {
		"car", "", "true coincidences to accidental ones", strayInBoth,
		"Low: stray light or dark counts, a window too wide, too much pump, or pairs lost in timing. High: less pump than planned.",
	},
	sifted: {
		"sifted_bps", "bit/s", "sifted bits of both bases", lossInBoth,
		"Low while the coincidences fit: the choice of basis, or records of the two ends that do not match. Low with them: see there.",
	},
	qberKey: {
		"qber_key", "", "QBER of the key basis", turnedFrame,
		"High in this basis alone: its alignment or phase, dispersion or PMD. High in both: accidentals, a window too wide, noise, too much pump, or a turned polarisation frame.",
	},
	qberCheck: {
		"qber_check", "", "QBER of the check basis", turnedFrame,
		"High in this basis alone: its alignment or phase, dispersion or PMD. High in both: accidentals, a window too wide, noise, too much pump, or a turned polarisation frame.",
	},
}

// row returns what is said of a reading: of Bob's the same as of Alice's.
func (r reading) row() *sheetRow { return &sheetRows[r-reading(r.arm())] }

// arm returns whose reading it is; Alice for those of the whole link.
func (r reading) arm() int {
	if r < ofTheLink {
		return int(r % 2)
	}
	return keyrate.Alice
}

// sheetOf asks a link for its sheet.
func sheetOf(l *keyrate.Link, p keyrate.OperatingPoint) sheet {
	rate := l.Key(p)
	return sheetOfRate(l, p, &rate)
}

// sheetOfRate is sheetOf where the link has been asked already.
func sheetOfRate(l *keyrate.Link, p keyrate.OperatingPoint, rate *keyrate.Rate) (s sheet) {
	for i := range l.Arms {
		arm, a := &rate.Arms[i], &l.Arms[i]
		s[singles.of(i)] = arm.SinglesHz
		s[keyDetector.of(i)] = arm.CountsHz
		s[checkDetector.of(i)] = arm.CountsHz
		if a.Passive && p.KeyShare != 0.5 {
			s[checkDetector.of(i)] = arm.SinglesHz/2 - arm.CountsHz
		}
		s[liveShare.of(i)] = arm.Live
		det := a.Detector
		if l.PulseRateHz > 0 {
			det = det.Gated(l.PulseRateHz)
		}
		s[blocked.of(i)], _ = det.Respond(det.DarkCountsHz + a.BackgroundHz)
	}
	s[coincidences], s[accidentals] = l.Coincidences(p)
	s[car] = max(0, s[coincidences]-s[accidentals]) / s[accidentals]
	s[sifted] = rate.SiftedBps()
	s[qberKey], s[qberCheck] = rate.QBER[keyrate.KeyBasis], rate.QBER[keyrate.CheckBasis]
	return s
}

// shown reports whether a reading belongs on the sheet: a finite figure, and
// of the check basis only where it sees other light than the key basis.
func (d *firstDay) shown(r reading) bool {
	x := d.expected[r]
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return false
	}
	arm := r.arm()
	return r != checkDetector.of(arm) || d.link.Arms[arm].Passive && d.setting.KeyShare != 0.5
}

// most returns the greatest value that a reading can have.
func (r reading) most() float64 {
	switch r {
	case qberKey, qberCheck:
		return 0.5
	case liveShare.of(keyrate.Alice), liveShare.of(keyrate.Bob):
		return 1
	}
	return math.Inf(1)
}
