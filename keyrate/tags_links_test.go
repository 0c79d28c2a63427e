package keyrate

import (
	"math"
	"testing"

	"pairspan/link"
)

// tagged is a continuous-wave link to run in the lab.
type tagged struct {
	name    string
	link    Link
	p       OperatingPoint
	seconds float64
	full    bool // slots hold so much that the pairs of tags are counted exactly instead
	quick   bool // run in short mode too
}

// arms makes a link of two arms, with the spread of their jitters and some
// errors of every kind.
func arms(alice, bob Arm) Link {
	alice.Misalignment, alice.PMDError, bob.Misalignment = 0.01, 0.004, 0.006
	return Link{
		Modes: math.Inf(1), StateError: [2]float64{0.02, 0.05}, Arms: [2]Arm{alice, bob},
		SpreadFWHMPs:     link.RootSumSquare(alice.Detector.JitterFWHMPs, bob.Detector.JitterFWHMPs),
		ErrorCorrectionF: 1, DutyCycle: 1,
	}
}

func taggedLinks() []tagged {
	detector := func(jitterPs, deadTimeNs, afterpulsing float64) link.Detector {
		return link.Detector{Efficiency: 0.8, DarkCountsHz: 1000, JitterFWHMPs: jitterPs, DeadTimeNs: deadTimeNs, Afterpulsing: afterpulsing}
	}
	const passive, active = true, false
	return []tagged{
		{"passive", arms(
			Arm{Transmittance: 0.25, Passive: passive, Detector: detector(50, 0, 0)},
			Arm{Transmittance: 0.25, Passive: passive, Detector: detector(80, 0, 0)},
		), OperatingPoint{1e6, 200e-12, 0.5}, 1.5, false, true},
		{"passive, biased, noisy", arms(
			Arm{Transmittance: 0.4, Passive: passive, Detector: detector(150, 0, 0), UnpairedHz: 4e6},
			Arm{Transmittance: 0.2, Passive: passive, Detector: detector(150, 0, 0), BackgroundHz: 1e6},
		), OperatingPoint{2.4e6, 400e-12, 0.7}, 0.5, false, false},
		{"active, noisy", arms(
			Arm{Transmittance: 0.3, Passive: active, Detector: detector(50, 0, 0), BackgroundHz: 3e5},
			Arm{Transmittance: 0.3, Passive: active, Detector: detector(300, 0, 0), UnpairedHz: 3e6},
		), OperatingPoint{1.5e6, 700e-12, 0.5}, 0.8, false, false},
		{"active, biased, dead time", arms(
			Arm{Transmittance: 0.15, Passive: active, Detector: detector(100, 800, 0), BackgroundHz: 1.5e5},
			Arm{Transmittance: 0.2, Passive: active, Detector: detector(100, 100, 0), BackgroundHz: 1e5},
		), OperatingPoint{8e5, 500e-12, 0.7}, 2, false, false},
		{"passive and active, biased, dead time and afterpulses, narrow window", arms(
			Arm{Transmittance: 0.2, Passive: passive, Detector: detector(200, 1000, 0.04), BackgroundHz: 1e5},
			Arm{Transmittance: 0.3, Passive: active, Detector: detector(200, 100, 0.1), BackgroundHz: 4e5},
		), OperatingPoint{1e6, 220e-12, 0.7}, 1.5, false, false},
		{"active and passive, dead time and afterpulses", arms(
			Arm{Transmittance: 0.1, Passive: active, Detector: detector(0, 400, 0.2), BackgroundHz: 3e5},
			Arm{Transmittance: 0.8, Passive: passive, Detector: detector(30, 20, 0)},
		), OperatingPoint{8e5, 300e-12, 0.5}, 2, false, false},
		{"passive, full slots", arms(
			Arm{Transmittance: 0.375, Passive: passive, Detector: detector(0, 0, 0)},
			Arm{Transmittance: 0.375, Passive: passive, Detector: detector(0, 0, 0)},
		), OperatingPoint{1e8, 1e-9, 0.5}, 0.015, true, true},
		{"active and passive, biased, full slots, noise", arms(
			Arm{Transmittance: 0.5, Passive: active, Detector: detector(300, 0, 0), BackgroundHz: 1e6},
			Arm{Transmittance: 0.25, Passive: passive, Detector: detector(400, 0, 0), UnpairedHz: 2e7},
		), OperatingPoint{5e7, 1e-9, 0.7}, 0.025, true, true},
	}
}

// expected are the rates of a link in one form, whoever worked them out.
type expected struct {
	singles                   [2]float64
	coincidences, accidentals float64
	sifted, qber              [2]float64
}

func modelled(l *Link, p OperatingPoint) (x expected) {
	r := l.Key(p)
	x.singles = [2]float64{r.Arms[Alice].SinglesHz, r.Arms[Bob].SinglesHz}
	x.coincidences, x.accidentals = l.Coincidences(p)
	x.sifted, x.qber = r.SiftedHz, r.QBER
	return x
}

// counted is what a laboratory counts that pairs all tags within the window,
// without dead time: C = B η_A η_B w + S_A S_B τ, exactly, of two bases that
// are chosen with the probability of both.
func counted(l *Link, p OperatingPoint) (x expected) {
	var inBasis [2][2]float64 // singles of each arm and basis
	share := [2]float64{p.KeyShare, 1 - p.KeyShare}
	matched := p.PairRateHz * link.WindowShare(p.WindowS*psPerSecond, l.SpreadFWHMPs)
	straight := 1.0
	for i, a := range l.Arms {
		eta := a.Transmittance * a.Detector.Efficiency
		matched *= eta
		straight *= (1 - 2*a.Misalignment) * (1 - 2*a.PMDError)
		for b := range share {
			light, noise := (p.PairRateHz+a.UnpairedHz)*eta, 2*(a.Detector.DarkCountsHz+a.BackgroundHz)
			inBasis[i][b] = share[b]*light + noise
			if !a.Passive {
				inBasis[i][b] = share[b] * (light + noise)
			}
			x.singles[i] += inBasis[i][b]
		}
	}
	x.accidentals = x.singles[Alice] * x.singles[Bob] * p.WindowS
	x.coincidences = matched + x.accidentals
	for b, e := range l.StateError {
		true := matched * share[b] * share[b]
		chance := inBasis[Alice][b] * inBasis[Bob][b] * p.WindowS
		x.sifted[b] = true + chance
		x.qber[b] = (true*(1-(1-2*e)*straight) + chance) / 2 / x.sifted[b]
	}
	return x
}

// within holds a count or a share to three standard deviations.
func within(t *testing.T, name string, got, want, sigma float64) {
	t.Helper()
	if off := (got - want) / sigma; !(math.Abs(off) <= 3) {
		t.Errorf("%s: %v, want %v, %+.1f deviations off", name, got, want, off)
	}
}

// compare holds all figures of a run of so many seconds to three standard
// deviations of their counts.
func compare(t *testing.T, tags [2][]tag, windowS, lateS, seconds float64, want expected) {
	t.Helper()
	count := func(name string, got, wantHz float64) {
		t.Helper()
		within(t, name, got, wantHz*seconds, math.Sqrt(wantHz*seconds))
	}
	c := pairUp(tags, windowS, 0)
	if c.total() < 1e4 {
		t.Errorf("only %v coincidences", c.total())
	}
	count("coincidences", c.total(), want.coincidences)
	// All windows count the same tags, whose own scatter no number of them
	// averages out.
	chance := want.accidentals * seconds
	windows := min(20, 2+math.Floor(1e4/chance))
	scatter := math.Sqrt(chance/windows + chance*chance*(1/want.singles[Alice]+1/want.singles[Bob])/seconds)
	within(t, "accidentals", accidentals(tags, windowS, lateS, int(windows)), chance, scatter)
	for b, name := range [2]string{"key basis", "check basis"} {
		n, e := c.all[b][b], want.qber[b]
		count(name, n, want.sifted[b])
		within(t, "QBER of the "+name, c.wrong[b][b]/n, e, math.Sqrt(e*(1-e)/n))
	}
}

// Every figure is held to three standard deviations of its count. The seeds
// are the numbers of the links and were chosen once, before the first run; of
// 64 figures one is more than three deviations off in one seed of seven.
func TestRatesAgainstTimeTags(t *testing.T) {
	for i, row := range taggedLinks() {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			if testing.Short() && !row.quick {
				t.Skip("takes too long")
			}
			seconds := row.seconds
			tags := newLab(&row.link, row.p, seconds, uint64(i)).run()
			want := modelled(&row.link, row.p)
			if row.full {
				want = counted(&row.link, row.p)
			}
			for arm, name := range [2]string{"Alice's singles", "Bob's singles"} {
				singles := want.singles[arm] * seconds
				within(t, name, float64(len(tags[arm])), singles, math.Sqrt(singles))
			}
			compare(t, tags, row.p.WindowS, 5e-6, seconds, want)
		})
	}
}
