package keyrate

// ErrorParts is what the QBER of the key basis is made of. The parts are not
// negative and add up to it.
type ErrorParts struct {
	State         float64 // the state alone, analysers aligned
	Alignment     float64 // misalignment and PMD
	MultiPair     float64 // several pairs at once
	DetectorNoise float64 // dark counts and afterpulses
	OutsideLight  float64 // background and unpaired light
}

// ErrorParts returns the parts of the key basis's QBER: each step turns on
// one more cause, with window, window share and live shares held at their
// final values, and is the difference of two evaluations of the whole model.
func (l *Link) ErrorParts(p OperatingPoint) ErrorParts {
	v := l.view(p)
	v.atWindow(p.WindowS)
	aligned := v.stateError[KeyBasis]
	full := v.slot(KeyBasis, KeyBasis, aligned)
	quiet, detectors := full, full
	for i := range l.Arms {
		det := &l.Arms[i].Detector
		quiet.Noise[i] = 0
		own := det.DarkCountsHz + det.Afterpulsing*v.arms[i].basis[KeyBasis].registeredHz
		detectors.Noise[i] = own * p.WindowS
	}
	_, pairs := quiet.Click()
	_, noise := detectors.Click()
	_, all := full.Click()
	state := l.StateError[KeyBasis]
	return ErrorParts{state, aligned - state, pairs - aligned, noise - pairs, all - noise}
}
