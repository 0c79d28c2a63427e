package plan

import (
	"math"
	"regexp"
	"strconv"
	"testing"

	"pairspan/keyrate"
	"pairspan/link"
	"pairspan/scenarios"
)

// Kinds of link that faults are put into: detectors that are blind half of the
// time, fast ones with a biased splitter, and a pulsed source.
var (
	blind = []set{{"window_ps", "600"}, {"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}}
	fast  = append([]set{{"arms.alice.detector", "nanowire"}, {"arms.bob.detector", "nanowire"}}, fixed...)
	pulse = append([]set{{"source.pulse_rate_hz", "1.0e+8"}, {"source.pairs_per_pulse", "0.02"}}, fast...)
)

// running is what a link shows.
func running(s *scenarios.Scenario) scenarios.Measured {
	p := newAsker(s).point(s.DistanceKm())
	return scenarios.Measured{
		SinglesHz:      [2]float64{p.SinglesHz.Alice, p.SinglesHz.Bob},
		CoincidencesHz: *p.CoincidencesHz, CAR: *p.CAR, SiftedBps: *p.SiftedBps,
		QBERKey: p.QBER.Key, QBERCheck: p.QBER.Check,
	}
}

// diagnosed compares a link with its plan.
func diagnosed(s *scenarios.Scenario, m scenarios.Measured) *Acceptance {
	s = s.Clone()
	s.Measured = m
	return newAsker(s).acceptance()
}

// amount finds the number that a pattern captures in the findings.
func amount(t *testing.T, out *Acceptance, pattern string) float64 {
	t.Helper()
	for _, f := range out.Findings {
		if m := regexp.MustCompile(pattern).FindStringSubmatch(f); m != nil {
			x, err := strconv.ParseFloat(m[1], 64)
			if err != nil {
				t.Fatal(err)
			}
			return x
		}
	}
	t.Errorf("nothing like %q in %q", pattern, out.Findings)
	return math.NaN()
}

const anAmount = `([0-9.e+]+)`

// TestFaultsPutBack: a link planned with a known fault shows figures of which
// the sheet of the sound link names the fault and its size, and nothing else.
func TestFaultsPutBack(t *testing.T) {
	for _, kind := range []struct {
		name    string
		changes []set
	}{{"blind", blind}, {"fast", fast}, {"pulsed", pulse}} {
		for _, row := range []struct {
			name    string
			fault   func(s *scenarios.Scenario)
			finding string
			size    float64
			within  float64
			count   int
		}{
			{"bob's loss", func(s *scenarios.Scenario) { s.Arms[1].FixedLossDB += 1.3 }, anAmount + ` dB missing in Bob's arm`, 1.3, 0.005, 1},
			{"alice's loss", func(s *scenarios.Scenario) { s.Arms[0].FixedLossDB += 0.4 }, anAmount + ` dB missing in Alice's arm`, 0.4, 0.005, 1},
			{"both losses", func(s *scenarios.Scenario) {
				s.Arms[0].FixedLossDB++
				s.Arms[1].FixedLossDB++
			}, anAmount + ` dB missing in Bob's arm`, 1, 0.005, 2},
			{"less loss", func(s *scenarios.Scenario) { s.Arms[1].FixedLossDB -= 0.7 }, anAmount + ` dB less loss than planned`, 0.7, 0.005, 1},
			{"pump", func(s *scenarios.Scenario) {
				s.Source.PairRateHz /= link.DB(-1.5).Transmittance()
				s.Source.PairsPerPulse /= link.DB(-1.5).Transmittance()
			}, anAmount + ` dB fewer pairs`, 1.5, 0.005, 1},
			{"more pump", func(s *scenarios.Scenario) {
				s.Source.PairRateHz *= 1.4
				s.Source.PairsPerPulse *= 1.4
			}, anAmount + ` dB more pairs`, 10 * math.Log10(1.4), 0.005, 1},
			{"background", func(s *scenarios.Scenario) { s.Arms[1].BackgroundCountsHz += 4000 }, anAmount + ` extra counts/s in each of Bob's`, 4000, 5, 1},
			{"timing", func(s *scenarios.Scenario) { // pulsed: 3 dB fewer at Bob's end alone
				if s.Pulsed() {
					s.Detectors = append(s.Detectors, *s.Detector(s.Arms[1].Detector))
					s.Detectors[2].Name, s.Arms[1].Detector = "late", "late"
					s.Detectors[2].JitterFWHMPs = 600 / 0.443941
					return
				}
				s.ClockJitterFWHMPs = 900
			}, anAmount + ` dB lost in timing`, nan, 0.006, 1},
			{"misalignment", func(s *scenarios.Scenario) {
				e := &s.Arms[1].MisalignmentError
				*e += 0.05 * (1 - 2**e)
			}, `check basis: .* an extra error of ` + anAmount + ` %`, 5, 0.02, 2},
		} {
			s := parse(t, base, kind.changes...)
			faulty := s.Clone()
			row.fault(faulty)
			if math.IsNaN(row.size) { // what the window holds less, by its definition
				a, b := s.Link(s.DistanceKm(), 0), faulty.Link(s.DistanceKm(), 0)
				p := newAsker(s).setting
				row.size = 10 * math.Log10(heldBy(&a, p)/heldBy(&b, p))
			}
			out := diagnosed(s, running(faulty))
			if got := amount(t, out, row.finding); math.Abs(got-row.size) > row.within {
				t.Errorf("%s, %s: %v, put in %v", kind.name, row.name, got, row.size)
			}
			if len(out.Findings) != row.count {
				t.Errorf("%s, %s: %q", kind.name, row.name, out.Findings)
			}
		}
	}
}

// heldBy is the share of the pairs within the window.
func heldBy(l *keyrate.Link, p keyrate.OperatingPoint) float64 {
	ps := p.WindowS * 1e12
	if l.PulseRateHz > 0 {
		return link.WindowShare(ps, l.Arms[0].SpreadFWHMPs) * link.WindowShare(ps, l.Arms[1].SpreadFWHMPs)
	}
	return link.WindowShare(ps, l.SpreadFWHMPs)
}

// TestDeadTimeIsInverted: half of the time blind, a detector shows much less of
// a loss than there is; the ratio of the counts alone would understate it.
func TestDeadTimeIsInverted(t *testing.T) {
	s := parse(t, base, append(blind, set{"source.pair_rate_hz", "1.0e+7"})...)
	faulty := s.Clone()
	faulty.Arms[1].FixedLossDB += 1.3
	good, m := running(s), running(faulty)
	if naive := 10 * math.Log10(good.SinglesHz[1]/m.SinglesHz[1]); naive > 0.9 {
		t.Fatalf("the counts fall by %v dB: the detectors are not blind enough to tell", naive)
	}
	only := newAsker(s).s.Measured // nothing stated
	only.SinglesHz[1] = m.SinglesHz[1]
	if got := amount(t, diagnosed(s, only), anAmount+` dB missing in Bob's arm`); math.Abs(got-1.3) > 0.005 {
		t.Errorf("%v dB", got)
	}
}

// TestWindowOffTheDelay moves the window by a third of its width: of a Gaussian
// of FWHM F it then holds (erf((τ/2+d) k) + erf((τ/2-d) k))/2, k = 2 √(ln 2)/F,
// which has nothing to do with a wider spread. Singles and accidentals stay.
func TestWindowOffTheDelay(t *testing.T) {
	s := parse(t, base, blind...)
	l := s.Link(s.DistanceKm(), 0)
	p := newAsker(s).point(s.DistanceKm())
	k := 2 * math.Sqrt(math.Ln2) / l.SpreadFWHMPs
	const half, off = 300.0, 200.0
	held := (math.Erf((half+off)*k) + math.Erf((half-off)*k)) / 2 / math.Erf(half*k)
	m := scenarios.Measured{
		SinglesHz:      [2]float64{p.SinglesHz.Alice, p.SinglesHz.Bob},
		CoincidencesHz: (*p.CoincidencesHz-*p.AccidentalsHz)*held + *p.AccidentalsHz,
		CAR:            *p.CAR * held, SiftedBps: nan, QBERKey: nan, QBERCheck: nan,
	}
	out := diagnosed(s, m)
	want := -10 * math.Log10(held)
	if got := amount(t, out, anAmount+` dB lost in timing`); math.Abs(got-want) > 0.006 || want < 0.2 {
		t.Errorf("%v dB, put in %v", got, want)
	}
	if len(out.Findings) != 1 {
		t.Errorf("%q", out.Findings)
	}
}

// TestSeveralFaults are all named with their sizes, the later figures being
// compared with what the earlier ones leave.
func TestSeveralFaults(t *testing.T) {
	s := parse(t, base, blind...)
	faulty := s.Clone()
	faulty.Arms[1].FixedLossDB += 1.3
	faulty.ClockJitterFWHMPs = 700
	faulty.Arms[0].MisalignmentError += 0.03 * (1 - 2*faulty.Arms[0].MisalignmentError)
	a, b := s.Link(6.2, 0), faulty.Link(6.2, 0)
	p := newAsker(s).setting
	out := diagnosed(s, running(faulty))
	for _, row := range []struct {
		pattern      string
		want, within float64
	}{
		{anAmount + ` dB missing in Bob's arm`, 1.3, 0.005},
		{anAmount + ` dB lost in timing`, 10 * math.Log10(heldBy(&a, p)/heldBy(&b, p)), 0.006},
		{`key basis: .* an extra error of ` + anAmount + ` %`, 3, 0.02},
		{`check basis: .* an extra error of ` + anAmount + ` %`, 3, 0.02},
	} {
		if got := amount(t, out, row.pattern); math.Abs(got-row.want) > row.within {
			t.Errorf("%s: %v, put in %v", row.pattern, got, row.want)
		}
	}
	if len(out.Findings) != 4 {
		t.Errorf("%q", out.Findings)
	}
	for figure, want := range map[string]string{
		"singles_alice_hz": "as expected", "singles_bob_hz": "1.30 dB missing in Bob's arm", "sifted_bps": "as the other figures explain",
	} {
		if r := sheetRowOf(t, out, figure); r.MeasuredSays == nil || *r.MeasuredSays != want {
			t.Errorf("%s: %v says %v, want %q", figure, *r.Measured, *r.MeasuredSays, want)
		}
	}
}

// TestOneBasis: an error of one basis alone is that basis's.
func TestOneBasis(t *testing.T) {
	s := parse(t, base, blind...)
	faulty := parse(t, base, append(blind, set{"source.state", "{ visibility: { hv: 0.97, da: 0.88 } }"})...)
	out := diagnosed(s, running(faulty))
	// From a visibility of 0.94 to 0.88: 0.88 = 0.94 (1 - 2 e).
	want := 100 * (1 - 0.88/0.94) / 2
	if got := amount(t, out, `check basis: .* an extra error of `+anAmount+` %: the alignment or the phase of this basis`); math.Abs(got-want) > 0.02 {
		t.Errorf("%v %%, put in %v %%", got, want)
	}
	if len(out.Findings) != 1 {
		t.Errorf("%q", out.Findings)
	}
}

// TestOpenState: where a tangle alone is known an extra error is told from the
// nominal state, and as much of it as no state can excuse.
func TestOpenState(t *testing.T) {
	s := read(t, set{"window_ps", "600"})
	faulty := s.Clone()
	faulty.Arms[1].MisalignmentError += 0.05 * (1 - 2*faulty.Arms[1].MisalignmentError)
	out := diagnosed(s, running(faulty))
	if got := amount(t, out, `key basis: .* an extra error of `+anAmount+` %`); math.Abs(got-5) > 0.02 {
		t.Errorf("nominally %v %%, put in 5 %%", got)
	}
	// Werner's e = (1-C)/3 with 5 % of flips, against (1-C)/2 at worst: 1 - 2e multiply.
	c := math.Sqrt(0.86)
	want := 100 * (1 - (1-2*(1-c)/3)*(1-0.1)/c) / 2
	if got := amount(t, out, `key basis: .*\(`+anAmount+` % at least`); math.Abs(got-want) > 0.02 {
		t.Errorf("at least %v %%, want %v %%", got, want)
	}
}
