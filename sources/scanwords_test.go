package sources

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// says tells whether one of the sentences holds the words.
func says(sentences []string, words string) bool {
	return slices.ContainsFunc(sentences, func(s string) bool { return strings.Contains(s, words) })
}

func TestScanTooFewPowers(t *testing.T) {
	zero := 0.0
	known := [2]*float64{&zero, &zero}
	for _, x := range []struct {
		order  int
		noise  [2]*float64
		powers []float64
		want   string
	}{
		{1, known, nil, "the power scan has no point, and at order 1 the fit needs at least 2: measure at 2 more"},
		{1, known, []float64{2, 2, 2}, "the power scan has one power only, and at order 1 the fit needs at least 2: measure at 1 more"},
		{2, known, []float64{2}, "the power scan has one power only, and at order 2 the fit needs at least 2: measure at 1 more"},
		{2, [2]*float64{&zero, nil}, []float64{1, 2, 2}, "the power scan has 2 different powers, and at order 2 the fit needs at least 3: measure at 1 more, or give the linear noise of both arms"},
		{1, known, []float64{1, 2}, ""},
		{1, [2]*float64{}, []float64{1, 2}, ""},
		{2, known, []float64{1, 2}, ""},
		{2, [2]*float64{}, []float64{0, 1, 2}, ""},
	} {
		s := fourWave()
		s.order, s.powers, s.raman = x.order, x.powers, [2]float64{}
		_, err := s.scan(nil).Fit(ScanOptions{Order: x.order, LinearNoisePerMW: x.noise})
		if got := textOf(err); got != x.want {
			t.Errorf("order %d, powers %v:\ngot  %s\nwant %s", x.order, x.powers, got, x.want)
		}
	}
}

func textOf(err error) string {
	if err == nil {
		return ""
	}
	return err.Error()
}

func TestScanRefusesWhatCannotBe(t *testing.T) {
	negative, big := -1.0, 1e9
	good := fourWave().scan(nil)
	change := func(f func(p *ScanPoint)) PowerScan {
		s := good
		s.Points = slices.Clone(good.Points)
		f(&s.Points[2])
		return s
	}
	none := good
	none.Points = slices.Clone(good.Points)
	for i := range none.Points {
		none.Points[i].CoincidencesHz = 0
	}
	for _, x := range []struct {
		name string
		scan PowerScan
		o    ScanOptions
		want string
	}{
		{"order", good, ScanOptions{Order: 3}, "the order is 3"},
		{"no order", good, ScanOptions{}, "the order is 0"},
		{"share", good, ScanOptions{Order: 2, WindowShare: 1.2}, "share of 1.2"},
		{"share NaN", good, ScanOptions{Order: 2, WindowShare: math.NaN()}, "share of NaN"},
		{"noise", good, ScanOptions{Order: 2, LinearNoisePerMW: [2]*float64{nil, &negative}}, "the linear noise in Bob's arm is -1"},
		{"power", change(func(p *ScanPoint) { p.PowerMW = -2 }), ScanOptions{Order: 2}, "point 3 of the power scan: the power is -2"},
		{"singles", change(func(p *ScanPoint) { p.SinglesHz[1] = math.NaN() }), ScanOptions{Order: 2}, "the rate of Bob's singles is NaN"},
		{"coincidences", change(func(p *ScanPoint) { p.CoincidencesHz = math.Inf(1) }), ScanOptions{Order: 2}, "the rate of coincidences is +Inf"},
		{"seconds", change(func(p *ScanPoint) { p.Seconds = 0 }), ScanOptions{Order: 2}, "the counting time is 0"},
		{"window", change(func(p *ScanPoint) { p.WindowPs = 0 }), ScanOptions{Order: 2}, "the window is 0"},
		{"no coincidences", none, ScanOptions{Order: 2}, "no coincidences above the accidentals"},
		{"too much noise", downConversion().scan(nil), ScanOptions{Order: 1, LinearNoisePerMW: [2]*float64{&big, &big}}, "no pair rate fits the power scan with a linear noise of 1e+09 and 1e+09"},
	} {
		if _, err := x.scan.Fit(x.o); err == nil || !strings.Contains(err.Error(), x.want) {
			t.Errorf("%s: got %v, want ... %s ...", x.name, err, x.want)
		}
	}
	unused := change(func(p *ScanPoint) { p.AccidentalsHz = math.NaN() })
	if _, err := unused.Fit(ScanOptions{Order: 2}); err != nil {
		t.Errorf("accidentals that do not count: %v", err)
	}
}

// Every sentence about what was assumed or is amiss comes when it is due, and a
// good scan has none.
func TestScanDoubts(t *testing.T) {
	truth := fourWave()
	truth.giveAccidental = true
	good := truth.scan(poissonFrom(45))
	fit := func(change func(s *PowerScan, o *ScanOptions)) []string {
		s, o := good, truth.options()
		s.Points = slices.Clone(good.Points)
		if change != nil {
			change(&s, &o)
		}
		return mustScan(t, s, o).Doubts
	}
	if doubts := fit(nil); len(doubts) > 0 {
		t.Errorf("a good scan is doubted: %q", doubts)
	}
	for want, change := range map[string]func(s *PowerScan, o *ScanOptions){
		"taken as the product of the singles":  func(s *PowerScan, _ *ScanOptions) { s.HasAccidentals, s.HasWindow = false, true },
		"Accidentals were taken as zero":       func(s *PowerScan, _ *ScanOptions) { s.HasAccidentals = false },
		"counted for one second":               func(s *PowerScan, _ *ScanOptions) { s.HasSeconds = false },
		"taken to hold all pairs":              func(_ *PowerScan, o *ScanOptions) { o.WindowShare = 0 },
		"The points have different windows":    func(s *PowerScan, _ *ScanOptions) { s.HasWindow = true; s.Points[1].WindowPs = 5 },
		"Coincidences without power at 1":      func(s *PowerScan, _ *ScanOptions) { s.Points[0].CoincidencesHz, s.Points[0].AccidentalsHz = 3, 0 },
		"scatter more about the fit":           func(s *PowerScan, _ *ScanOptions) { s.Points[5].SinglesHz[0] *= 1.2 },
		"scatter less about the fit":           func(s *PowerScan, _ *ScanOptions) { *s = truth.scan(nil) },
		"is vague":                             func(s *PowerScan, _ *ScanOptions) { s.Points = s.Points[:4]; shorten(s.Points, 1e-3) },
		"efficiency of Alice's arm is held at": func(s *PowerScan, _ *ScanOptions) { multiply(s.Points, 30) },
	} {
		if doubts := fit(change); !says(doubts, want) {
			t.Errorf("not said: %s\nbut: %q", want, doubts)
		}
	}
}

// shorten multiplies the counting times.
func shorten(points []ScanPoint, by float64) {
	for i := range points {
		points[i].Seconds *= by
	}
}

// multiply multiplies the coincidences.
func multiply(points []ScanPoint, by float64) {
	for i := range points {
		points[i].CoincidencesHz *= by
	}
}

// Singles that bend the other way than linear noise lets them, and fewer counts
// at low power than the slope leaves room for: the noise is held at 0, said so,
// and the rest is fitted.
func TestScanHoldsNoiseAtZero(t *testing.T) {
	s := fourWave()
	s.raman, s.n = [2]float64{-3e3, 0}, [2]float64{0, -200}
	s.powers = s.powers[2:] // no rate is below 0
	r := mustScan(t, s.scan(nil), s.options())
	if r.LinearNoisePerMW[0].Value != 0 || !says(r.Doubts, "linear noise in Alice's arm is held at its bound of 0") {
		t.Errorf("linear noise %v, %q", r.LinearNoisePerMW, r.Doubts)
	}
	if r.ConstantHz[1].Value != 0 || !says(r.Doubts, "constant counts of Bob are held") {
		t.Errorf("constant counts %v, %q", r.ConstantHz, r.Doubts)
	}
	if !r.Parameters[3].AtBound || !(r.Parameters[3].SD > 0) || r.Parameters[1].AtBound {
		t.Errorf("%+v", r.Parameters)
	}
	near(t, "pairs over the true ones", r.PairsHzPerMWk.Value/s.xi, 1, 0.1)
}

func TestScanSaysWhatItRestsOn(t *testing.T) {
	four, down := fourWave(), downConversion()
	three := 3.0
	for _, x := range []struct {
		truth         scanTruth
		noise         [2]*float64
		told, notTold string
		parameters    int
	}{
		{four, [2]*float64{}, "the scan tells the pair rate, both efficiencies, the linear noise and the constant counts", "How much of an efficiency is the detector's", 7},
		{four, [2]*float64{&three, nil}, "with linear noise taken as given: 3 photons per second and mW in Alice's arm.", "", 6},
		{down, [2]*float64{&three, &three}, "rest on the linear noise given: 3 photons per second and mW in Alice's arm and 3", "at order 1 the scan looks the same with any", 5},
		{down, [2]*float64{nil, &three}, "an upper bound of the pair rate", "Give the linear noise of Alice's arm, 0 if there is none", 5},
		{down, [2]*float64{&three, nil}, "lower bounds of the efficiencies", "Give the linear noise of Bob's arm", 5},
		{down, [2]*float64{}, "how singles and coincidences grow", "Give the linear noise of both arms", 5},
	} {
		r := mustScan(t, x.truth.scan(nil), ScanOptions{Order: x.truth.order, LinearNoisePerMW: x.noise})
		if !says(r.Told, x.told) || !says(r.NotTold, x.notTold) && x.notTold != "" {
			t.Errorf("told %q, not told %q", r.Told, r.NotTold)
		}
		if len(r.Parameters) != x.parameters || len(r.Correlation) != x.parameters {
			t.Errorf("%d parameters, %d correlations, want %d", len(r.Parameters), len(r.Correlation), x.parameters)
		}
	}
}
