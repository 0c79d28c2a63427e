package keyrate

import "pairspan/link"

// Arm is one photon's way from the source to its detectors, in plain numbers.
type Arm struct {
	Transmittance float64       // everything optical, source output to detector input, 0 to 1
	Detector      link.Detector // dead time as it is; pulsed links gate it themselves
	Passive       bool          // the basis is chosen by a beam splitter: four detectors; else two
	Misalignment  float64       // e_mis, residual error of the polarisation frame, 0 to 1/2
	PMDError      float64       // chance that PMD flips the bit, 0 to 1/3
	BackgroundHz  float64       // counts per detector with the source blocked, above its dark counts
	UnpairedHz    float64       // light of the source without a partner, before any loss; pulsed: made in its pulses
	SpreadFWHMPs  float64       // pulsed: arrival spread against the clock
}

// Link is a whole link at one distance with one state. It is a plain value:
// copy it, edit it, ask again.
type Link struct {
	PulseRateHz        float64    // pulses per second; 0: continuous
	Modes              float64    // Schmidt modes per polarisation, ≥ 1; +Inf: Poisson, as every continuous source is
	PairsPerEmitted    float64    // behind pass bands, pairs of the parting that stand for one emitted (sources.Parting); 0: 1
	StateError         [2]float64 // error of a lone pair in the key and the check basis
	Arms               [2]Arm
	SpreadFWHMPs       float64 // continuous: spread of the difference of the arrival times
	ErrorCorrectionF   float64 // f ≥ 1
	DutyCycle          float64 // share of the time that makes key
	BlockBits          float64 // sifted bits of a block; 0: asymptotic
	EpsilonTotal       float64 // failure probability of a block
	AuthenticationBits float64 // secret bits that a block's messages use up
}

// PutPassBands puts pass bands in front of the source: pairs of the parting for
// one emitted, and the chance that a photon of one passes in either arm (see
// sources.Parting). Nothing of the light without a partner is lost.
func (l *Link) PutPassBands(pairsPerEmitted float64, passes [2]float64) {
	l.PairsPerEmitted = pairsPerEmitted
	for i := range l.Arms {
		a := &l.Arms[i]
		a.Transmittance *= passes[i]
		a.UnpairedHz /= passes[i]
	}
}

// OperatingPoint is what an operator can turn, and nothing else.
type OperatingPoint struct {
	PairRateHz float64 // pairs per second made inside the source; pulsed: pulse rate times pairs per pulse
	WindowS    float64 // full width of the coincidence window
	KeyShare   float64 // probability of the key basis, 0.5 to 0.99
}

// Rate is what a link does at an operating point. Rates are per second of
// key-making; UsableBps alone has the duty cycle taken off.
type Rate struct {
	SlotsHz      float64
	PairsPerSlot float64 // of the parting behind pass bands
	WindowShare  float64 // pulsed: the product of both arms'
	Arms         [2]ArmRate
	SiftedHz     [2]float64 // of each basis
	QBER         [2]float64 // of each basis, 0 to 1/2
	SecretBps    float64    // asymptotic, both bases
	FiniteBps    float64    // finite-size, key basis; 0 without a block
	UsableBps    float64    // of one or the other: authentication and the time off taken off
}

// ArmRate is what the detectors of one arm do.
type ArmRate struct {
	CountsHz  float64 // registered by each detector of the key basis
	Live      float64 // live share of those detectors
	SinglesHz float64 // registered by all the arm's detectors
}

// SiftedBps returns the sifted rate of both bases together.
func (r *Rate) SiftedBps() float64 { return r.SiftedHz[KeyBasis] + r.SiftedHz[CheckBasis] }

// KeyBasisSecretBps returns the asymptotic rate of the key basis alone, which
// finite-size rates tend to, since they disclose the check basis.
func (r *Rate) KeyBasisSecretBps(f float64) float64 {
	return r.SiftedHz[KeyBasis] * max(0, SecretFraction(r.QBER[KeyBasis], r.QBER[CheckBasis], f))
}

// Key computes the whole model at one operating point: dead time, the slots
// of both bases, sifting, asymptotic and finite-size key. It is good to 1e-10
// relative in sifted rate and QBER, and the secret rate to 1e-12 of the sifted
// rate, from 0 to 200 dB.
func (l *Link) Key(p OperatingPoint) Rate {
	v := l.view(p)
	var r Rate
	v.key(p.WindowS, &r)
	v.judge(&r)
	return r
}

// judge adds the finite-size and the usable rate.
func (v *view) judge(r *Rate) {
	l := v.link
	if l.BlockBits == 0 {
		r.UsableBps = l.DutyCycle * r.SecretBps
		return
	}
	bits := l.wholeBits(r)
	blocksHz := r.SiftedBps() / l.BlockBits
	r.FiniteBps = bits * blocksHz
	r.UsableBps = l.DutyCycle * max(0, bits-l.AuthenticationBits) * blocksHz
}

// key fills in all that follows from the window.
func (v *view) key(windowS float64, r *Rate) {
	l := v.link
	v.atWindow(windowS)
	r.SlotsHz, r.PairsPerSlot, r.WindowShare = v.slotsHz, v.pairs, v.share
	for i := range v.arms {
		a := &v.arms[i]
		r.Arms[i] = ArmRate{a.basis[KeyBasis].registeredHz, a.basis[KeyBasis].live, a.singlesHz}
	}
	for b := range r.QBER {
		if b == CheckBasis && v.sameBases {
			r.SiftedHz[b], r.QBER[b] = r.SiftedHz[KeyBasis], r.QBER[KeyBasis]
			continue
		}
		s := v.slot(b, b, v.stateError[b])
		q, qber := s.Click()
		r.SiftedHz[b], r.QBER[b] = q*v.kept(b, b), qber
	}
	r.SecretBps = secretBps(r, l.ErrorCorrectionF)
}

// secretBps returns the asymptotic rate of both bases, each with the other's
// bit error as its phase error.
func secretBps(r *Rate, f float64) float64 {
	hk := BinaryEntropy(r.QBER[KeyBasis])
	hc := hk
	if r.QBER[CheckBasis] != r.QBER[KeyBasis] {
		hc = BinaryEntropy(r.QBER[CheckBasis])
	}
	return r.SiftedHz[KeyBasis]*max(0, 1-f*hk-hc) + r.SiftedHz[CheckBasis]*max(0, 1-f*hc-hk)
}
