package keyrate

import (
	"math"
	"testing"
)

// plainLink is a continuous link of perfect passive arms, without any noise,
// error or spread; tests spoil what they are about.
func plainLink() Link {
	l := Link{Modes: math.Inf(1), ErrorCorrectionF: 1, DutyCycle: 1}
	for i := range l.Arms {
		l.Arms[i].Transmittance, l.Arms[i].Passive = 1, true
		l.Arms[i].Detector.Efficiency = 1
	}
	return l
}

// Visibility against pairs per slot. At low efficiency coincidences count
// products of photon numbers: n² for detectors of one polarisation, which has
// s = μ/2 pairs on average and <n²> = s + s²(1 + 1/K), and s² for two. Hence
//
//	V = (s + s²/K)/(s + s²(2 + 1/K)),
//
// which is (2+μ)/(2+3μ) for one thermal mode, as Ma et al., PRA 76, 012307
// (2007) reduces to, and 1/(1+μ) for Poisson.
func TestVisibilityAgainstPairsPerSlot(t *testing.T) {
	const eta = 1e-7
	visibility := func(mu, modes float64) float64 {
		s := Slot{Pairs: mu, Efficiency: [2]float64{eta, eta}, Share: 1, Modes: modes}
		_, qber := s.Click()
		return 1 - 2*qber
	}
	for _, mu := range []float64{1e-4, 0.01, 0.1, 0.5, 2} {
		for _, modes := range []float64{1, 1.5, 3, math.Inf(1)} {
			s := mu / 2
			want := (s + s*s/modes) / (s + s*s*(2+1/modes))
			if got := visibility(mu, modes); !near(got, want, 1e-6) {
				t.Errorf("μ = %v, K = %v: visibility %v, want %v", mu, modes, got, want)
			}
		}
		if got, want := visibility(mu, 1), (2+mu)/(2+3*mu); !near(got, want, 1e-6) {
			t.Errorf("one mode, μ = %v: visibility %v, want %v", mu, got, want)
		}
	}
	if got := visibility(0.1, 1); math.Abs(got-0.913043) > 1e-6 {
		t.Errorf("one mode: visibility %v, want 0.913043", got)
	}
	if got := visibility(0.1, math.Inf(1)); math.Abs(got-0.909091) > 1e-6 {
		t.Errorf("Poisson: visibility %v, want 0.909091", got)
	}
}

// Loss can lower a QBER, since threshold detectors click twice less often, but
// only one of which no key comes. With a weak arm at Bob the visibility is
// 1/(1+μ) where Alice is as weak, and e^(-μ/2) where she sees everything (only
// slots without any pair of the wrong polarisation then give a bit): the former
// is more from μ = 2.51 on.
func TestLossHelpsOnlyBeyondHope(t *testing.T) {
	qber := func(mu, eta float64) float64 {
		s := Slot{Pairs: mu, Efficiency: [2]float64{eta, 1e-7}, Share: 1, Modes: math.Inf(1)}
		_, e := s.Click()
		return e
	}
	for _, mu := range []float64{0.01, 0.5, 2, 2.51, 2.52, 5} {
		if want := (1 - math.Exp(-mu/2)) / 2; !near(qber(mu, 1), want, 1e-6) {
			t.Errorf("μ = %v, no loss: QBER %v, want %v", mu, qber(mu, 1), want)
		}
		if helps := qber(mu, 1e-7) < qber(mu, 1); helps != (mu > 2.515) {
			t.Errorf("μ = %v: loss helps: %v", mu, helps)
		}
		if qber(mu, 1e-7) < qber(mu, 1) && qber(mu, 1e-7) < hopeful {
			t.Errorf("μ = %v: loss helps with a QBER of %v", mu, qber(mu, 1e-7))
		}
	}
}

// The same with light of one thermal mode, which bunches, against noise: with
// l = μ/2 pairs of each polarisation and, in Bob's two detectors, ν noise counts
// for each partner of Alice's photons, the visibility is to first order in l
//
//	V = (1 + l - 2 l η)/(1 + 3 l (1-η) + ν (1 - 3 l η/2)),
//
// which falls with loss at Alice while ν < 2, that is while V > 1/3.
func TestLossHelpsBunchedLightInNoise(t *testing.T) {
	const l, weak = 1e-4, 1e-6
	qber := func(nu, eta float64) float64 {
		s := Slot{
			Pairs: 2 * l, Efficiency: [2]float64{eta, weak}, Noise: [2]float64{0, nu * weak / 2},
			Share: 1, Modes: 1,
		}
		_, e := s.Click()
		return e
	}
	for _, nu := range []float64{0, 0.5, 1.9, 2.1, 5, 50} {
		for _, eta := range []float64{1, 0.5, 0.1} {
			v := (1 + l - 2*l*eta) / (1 + 3*l*(1-eta) + nu*(1-1.5*l*eta))
			if got := 1 - 2*qber(nu, eta); !near(got, v, 1e-6) {
				t.Errorf("ν = %v, η = %v: visibility %v, want %v", nu, eta, got, v)
			}
		}
		if helps := qber(nu, 0.5) < qber(nu, 1); helps != (nu > 2) {
			t.Errorf("ν = %v: loss helps: %v", nu, helps)
		}
	}
}

// With hardly any pairs and no noise, an error is the state's or the
// analysers'; two flips undo each other.
func TestLonePairsKeepTheStateError(t *testing.T) {
	l := plainLink()
	l.StateError = [2]float64{0.012, 0.034}
	l.Arms[Alice].Misalignment, l.Arms[Bob].Misalignment, l.Arms[Bob].PMDError = 0.005, 0.02, 0.01
	for _, pulseRateHz := range []float64{0, 1e8} {
		l.PulseRateHz = pulseRateHz
		r := l.Key(OperatingPoint{PairRateHz: 1, WindowS: 1e-9, KeyShare: 0.5})
		for b, e := range l.StateError {
			kept := (1 - 2*e) * (1 - 2*0.005) * (1 - 2*0.02) * (1 - 2*0.01)
			if want := (1 - kept) / 2; !near(r.QBER[b], want, 1e-6) {
				t.Errorf("%v pulses a second: QBER %v, want %v", pulseRateHz, r.QBER[b], want)
			}
		}
	}
}

// A perfect link keeps half of the pairs, and each of them is a secret bit.
func TestPerfectLink(t *testing.T) {
	l := plainLink()
	l.DutyCycle = 0.8
	r := l.Key(OperatingPoint{PairRateHz: 1000, WindowS: 1e-12, KeyShare: 0.5})
	if !near(r.SiftedBps(), 500, 1e-6) || !near(r.SecretBps, 500, 1e-6) || !near(r.UsableBps, 400, 1e-6) {
		t.Errorf("%+v, want 500 sifted and secret, 400 usable", r)
	}
}
