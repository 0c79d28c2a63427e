package keyrate

import (
	"math"
	"testing"
)

// Ma et al., PRA 76, 012307 (2007), from memory; recomputed as sums over
// photon numbers. λ is the mean pair number of one polarisation, Y₀ the dark
// counts of an arm, to first order in which its formulas hold.
func TestPublishedGainAndError(t *testing.T) {
	const lambda, y0 = 0.05, 6.02e-6
	s := Slot{
		Pairs: 2 * lambda, Efficiency: [2]float64{0.03, 0.145}, Noise: [2]float64{y0 / 2, y0 / 2},
		Share: 1, Error: 0.015, Modes: 1,
	}
	q, qber := s.Click()
	const tolerance = 5e-5
	if !near(q, 4.8813723772e-4, tolerance) || !near(q*qber, 2.6326639250e-5, tolerance) {
		t.Errorf("gain %v, error gain %v, want 4.8813723772e-4, 2.6326639250e-5", q, q*qber)
	}
}

// The gain and the error of Ma et al., PRA 76, 012307 (2007), as formulas, from
// memory. Without dark counts they are the slot of one mode.
//
// differs: with an error e_d the source multiplies the correlation by
// 1 - 2 e_d; turning Bob's frame, as the slot does, takes in two-pair slots
// whose photons share a wrong detector, and divides it by
// 1 + Y² e_d (1-e_d)/(X D) as well. That is 0.3 % of the error at most here.
func TestPublishedGainAndErrorFormulas(t *testing.T) {
	for _, lambda := range []float64{0.02, 0.1, 0.3} {
		for _, ea := range []float64{0.1, 0.4, 1} {
			for _, eb := range []float64{0.05, 0.7} {
				for _, ed := range []float64{0, 0.015} {
					x, y := (1+ea*lambda)*(1+eb*lambda), lambda*(1+lambda)*ea*eb
					d := 1 + ea*lambda + eb*lambda - ea*eb*lambda
					q := 1 - 1/math.Pow(1+ea*lambda, 2) - 1/math.Pow(1+eb*lambda, 2) + 1/(d*d)
					published := (1 - 2*ed) * y / (x * d) // half of right less wrong
					turned := published / (1 + y*y*ed*(1-ed)/(x*d))
					s := Slot{Pairs: 2 * lambda, Efficiency: [2]float64{ea, eb}, Share: 1, Error: ed, Modes: 1}
					gotQ, gotQBER := s.Click()
					if !near(gotQ, q, 1e-9) || !near(gotQ*gotQBER, q/2-turned, 1e-9) {
						t.Errorf("%+v: gain %v, error gain %v, want %v, %v", s, gotQ, gotQ*gotQBER, q, q/2-turned)
					}
					if !near(gotQ*gotQBER, q/2-published, 0.003) {
						t.Errorf("%+v: error gain %v, published %v", s, gotQ*gotQBER, q/2-published)
					}
				}
			}
		}
	}
}

// Shor, Preskill, PRL 85, 441 (2000): 11.0 %. Neumann et al., EPJ Quantum
// Technol. 5:4 (2018), Table 1: 10.2 % at f = 1.1. The longer figures are
// computed.
func TestPublishedThresholds(t *testing.T) {
	for _, row := range []struct{ f, qber, tolerance float64 }{
		{1, 0.110, 0.0005},
		{1.1, 0.102, 0.0005},
		{1, 0.1100279, 5e-8},
		{1.1, 0.1022828, 5e-8},
		{1.22, 0.0942352, 5e-8},
	} {
		if got := Threshold(row.f); math.Abs(got-row.qber) > row.tolerance {
			t.Errorf("f = %v: no key above a QBER of %v, want %v", row.f, got, row.qber)
		}
	}
}

// Yin et al., Nature 582, 501 (2020): 1.03 sifted bits a second at a QBER of
// 4.51 % are 0.43 secret bits a second, f = 1.19.
func TestPublishedAsymptoticRate(t *testing.T) {
	if got := 1.03 * SecretFraction(0.0451, 0.0451, 1.19); math.Abs(got-0.43) > 0.005 {
		t.Errorf("%v bit/s, want 0.43", got)
	}
	r := Rate{SiftedHz: [2]float64{0.515, 0.515}, QBER: [2]float64{0.0451, 0.0451}}
	if got := secretBps(&r, 1.19); math.Abs(got-0.43) > 0.005 {
		t.Errorf("%v bit/s of both bases, want 0.43", got)
	}
}

// Two arms that count a thousand a second each, and a window of 2 µs: two
// accidental coincidences a second (textbook). The model counts in slots of
// one window, each with one coincidence at most, hence 0.2 % less.
func TestPublishedAccidentals(t *testing.T) {
	l := plainLink()
	for i := range l.Arms {
		l.Arms[i].Detector.DarkCountsHz = 500
		l.Arms[i].Passive = false // two detectors
	}
	p := OperatingPoint{WindowS: 2e-6, KeyShare: 0.5}
	coincidences, accidentals := l.Coincidences(p)
	if math.Abs(accidentals-2) > 0.005 || !near(coincidences, accidentals, 1e-12) {
		t.Errorf("%v coincidences a second, %v accidental, want 2 of both", coincidences, accidentals)
	}
}

// Dead time, non-paralysable: Knoll, Radiation Detection and Measurement,
// ch. 4; figures computed from its formula. Here on a whole arm.
func TestPublishedDeadTimes(t *testing.T) {
	for _, row := range []struct{ clicksHz, deadTimeNs, registeredHz float64 }{
		{1e6, 50, 952381}, {1e5, 10e3, 50000},
	} {
		l := plainLink()
		l.Arms[Bob].Detector.DarkCountsHz, l.Arms[Bob].Detector.DeadTimeNs = row.clicksHz, row.deadTimeNs
		r := l.Key(OperatingPoint{WindowS: 1e-9, KeyShare: 0.5})
		if got := r.Arms[Bob].CountsHz; math.Abs(got-row.registeredHz) > 0.5 {
			t.Errorf("%v /s behind %v ns: %v registered, want %v", row.clicksHz, row.deadTimeNs, got, row.registeredHz)
		}
		if got := r.Arms[Bob].SinglesHz; math.Abs(got-4*row.registeredHz) > 2 {
			t.Errorf("%v singles of four detectors, want %v", got, 4*row.registeredHz)
		}
	}
}

// Neumann et al., PRA 104, 022406 (2021), from memory: at low occupancy a
// continuous-wave link has B η_A η_B w true coincidences a second and S_A S_B τ
// accidental ones, of which half are errors.
func TestPublishedContinuousWaveRates(t *testing.T) {
	for _, passive := range []bool{true, false} {
		l := plainLink()
		l.SpreadFWHMPs = 300
		l.StateError = [2]float64{0.02, 0.05}
		for i, t := range [2]float64{0.05, 0.02} {
			l.Arms[i].Transmittance, l.Arms[i].Passive = t, passive
			l.Arms[i].Detector.DarkCountsHz = 2000
		}
		p := OperatingPoint{PairRateHz: 1e5, WindowS: 400e-12, KeyShare: 0.5}
		r := l.Key(p)
		coincidences, accidentals := l.Coincidences(p)
		matched := p.PairRateHz * 0.05 * 0.02 * math.Erf(math.Sqrt(math.Ln2)*400/300) // erf is that source's window share
		chance := r.Arms[Alice].SinglesHz * r.Arms[Bob].SinglesHz * p.WindowS
		// The next order is the occupancy of a slot, 4e-5 pairs.
		const tolerance = 1e-4
		if !near(accidentals, chance, tolerance) || !near(coincidences-accidentals, matched, tolerance) {
			t.Errorf("passive %v: %v true, %v accidental, want %v, %v", passive, coincidences-accidentals, accidentals, matched, chance)
		}
		for b, e := range l.StateError {
			want := (e*matched + chance/2) / (matched + chance)
			if !near(r.QBER[b], want, tolerance) || !near(r.SiftedHz[b], (matched+chance)/4, tolerance) {
				t.Errorf("passive %v: QBER %v of %v /s, want %v of %v", passive, r.QBER[b], r.SiftedHz[b], want, (matched+chance)/4)
			}
		}
	}
}

// Bennett et al., PRL 68, 557 (1992): half of the coincidences survive
// sifting, and q² + (1-q)² of them if one basis is chosen with probability q.
func TestPublishedSifting(t *testing.T) {
	for _, q := range []float64{0.5, 0.7, 0.9} {
		for _, passive := range []bool{true, false} {
			l := plainLink()
			for i := range l.Arms {
				l.Arms[i].Transmittance, l.Arms[i].Passive = 0.01, passive
			}
			p := OperatingPoint{PairRateHz: 1e5, WindowS: 1e-9, KeyShare: q}
			r := l.Key(p)
			coincidences, _ := l.Coincidences(p)
			// The next order is a slot's occupancy, 1e-4 pairs.
			if want := q*q + (1-q)*(1-q); !near(r.SiftedBps()/coincidences, want, 1e-4) {
				t.Errorf("q = %v, passive %v: %v of the coincidences are kept, want %v", q, passive, r.SiftedBps()/coincidences, want)
			}
		}
	}
}
