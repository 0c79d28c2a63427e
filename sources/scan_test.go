package sources

import (
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// scanTruth is a source and its arms, from which scans are made.
type scanTruth struct {
	order          int
	xi, share      float64
	eta, raman, n  [2]float64
	windowPs       float64 // of the accidentals S_A S_B τ
	seconds        float64
	powers         []float64
	noWindow       bool // no accidentals at all
	giveAccidental bool // counts them instead of giving the window
}

// fourWave is a source with pairs, Raman light and dark counts that all matter.
func fourWave() scanTruth {
	return scanTruth{
		order: 2, xi: 2e5, share: 0.95, eta: [2]float64{0.05, 0.08}, raman: [2]float64{1.5e5, 0.8e5}, n: [2]float64{400, 700},
		windowPs: 1000, seconds: 5, powers: []float64{0, 0.25, 0.5, 1, 1.5, 2, 3, 4},
	}
}

// downConversion is a source whose singles hold linear noise too.
func downConversion() scanTruth {
	return scanTruth{
		order: 1, xi: 1e6, share: 0.9, eta: [2]float64{0.1, 0.06}, raman: [2]float64{2e5, 1e5}, n: [2]float64{300, 500},
		windowPs: 500, seconds: 3, powers: []float64{0.1, 0.3, 0.5, 0.5, 0.8, 1.2},
	}
}

// scan returns the rates as poisson draws their counts; nil draws the mean.
func (s scanTruth) scan(poisson func(mean float64) float64) PowerScan {
	if poisson == nil {
		poisson = func(mean float64) float64 { return mean }
	}
	scan := PowerScan{HasSeconds: true, HasWindow: !s.noWindow && !s.giveAccidental, HasAccidentals: s.giveAccidental}
	for _, p := range s.powers {
		point := ScanPoint{PowerMW: p, Seconds: s.seconds, WindowPs: s.windowPs}
		var mean [2]float64
		for arm := range 2 {
			mean[arm] = s.eta[arm]*(s.xi*math.Pow(p, float64(s.order))+s.raman[arm]*p) + s.n[arm]
			point.SinglesHz[arm] = poisson(mean[arm]*s.seconds) / s.seconds
		}
		chance := mean[0] * mean[1] * s.windowPs * 1e-12
		if s.noWindow {
			chance = 0
		}
		pairs := s.eta[0] * s.eta[1] * s.share * s.xi * math.Pow(p, float64(s.order))
		point.CoincidencesHz = poisson((pairs+chance)*s.seconds) / s.seconds
		point.AccidentalsHz = poisson(chance*s.seconds) / s.seconds
		scan.Points = append(scan.Points, point)
	}
	return scan
}

func (s scanTruth) options() ScanOptions {
	o := ScanOptions{Order: s.order, WindowShare: s.share}
	if s.order == 1 {
		o.LinearNoisePerMW = [2]*float64{&s.raman[0], &s.raman[1]}
	}
	return o
}

// figures returns the parameters that the fit found beside the true ones, those
// of which something is known.
func (s scanTruth) figures(r ScanFit) (found []Estimate, want []float64) {
	all := []Estimate{r.PairsHzPerMWk, r.Efficiency[0], r.Efficiency[1], r.LinearNoisePerMW[0], r.LinearNoisePerMW[1], r.ConstantHz[0], r.ConstantHz[1]}
	for i, x := range []float64{s.xi, s.eta[0], s.eta[1], s.raman[0], s.raman[1], s.n[0], s.n[1]} {
		if all[i].Known() && all[i].SD > 0 {
			found, want = append(found, all[i]), append(want, x)
		}
	}
	return found, want
}

func mustScan(t *testing.T, s PowerScan, o ScanOptions) ScanFit {
	t.Helper()
	r, err := s.Fit(o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// poissonFrom returns a source of Poisson numbers.
func poissonFrom(seed uint64) func(mean float64) float64 {
	src := rand.NewPCG(seed, 1)
	return func(mean float64) float64 {
		if mean == 0 {
			return 0
		}
		return distuv.Poisson{Lambda: mean, Src: src}.Rand()
	}
}

// slowTests tells whether the long tests run.
func slowTests() bool { return os.Getenv("PAIRSPAN_SLOW") != "" }

// Scans without noise give back the source that made them, whatever it is.
func TestScanOfExactRatesFindsTheSource(t *testing.T) {
	d := normalDrawer(400)
	for i := range 300 {
		s := scanTruth{
			order: 1 + i%2, xi: math.Pow(10, 3+4*d.share()), share: 0.3 + 0.7*d.share(), seconds: 10, windowPs: 300,
			eta: [2]float64{0.01 + 0.9*d.share(), 0.01 + 0.9*d.share()}, n: [2]float64{1000 * d.share(), 2000 * d.share()},
			powers: []float64{0.2 * d.share(), 1, 1.5, 2, 3 + d.share()}, giveAccidental: i%3 == 0, noWindow: i%3 == 1,
		}
		s.raman = [2]float64{s.xi * d.share(), s.xi * d.share()}
		r := mustScan(t, s.scan(nil), s.options())
		found, want := s.figures(r)
		if len(found) != 5+2*(s.order-1) {
			t.Fatalf("order %d tells %d figures", s.order, len(found))
		}
		for j, e := range found {
			if off := math.Abs(e.Value - want[j]); !(off <= 1e-7*want[j]+1e-6*e.SD) {
				t.Fatalf("scan %d %+v: figure %d is %.12g, want %.12g", i, s, j, e.Value, want[j])
			}
		}
		// Mean accidentals S_A S_B τ differ from the rates' own by nothing here.
		if !(r.Chi2 < 1e-9) {
			t.Fatalf("chi-squared of exact rates %g", r.Chi2)
		}
	}
}

// One scan with counting noise, fixed seed: every figure within four standard
// deviations, and the standard deviations small enough for that to say
// something.
func TestScanFindsTheSourceInNoise(t *testing.T) {
	for _, s := range []scanTruth{fourWave(), downConversion()} {
		for _, counted := range []bool{false, true} {
			s.giveAccidental = counted
			r := mustScan(t, s.scan(poissonFrom(41)), s.options())
			found, want := s.figures(r)
			for i, e := range found {
				if z := (e.Value - want[i]) / e.SD; !(math.Abs(z) < 4) || !(e.SD < 0.3*want[i]) {
					t.Errorf("order %d: figure %d is %.4g +- %.2g, want %.4g", s.order, i, e.Value, e.SD, want[i])
				}
			}
			if !(r.Chance > 1e-3 && r.Chance < 0.999) {
				t.Errorf("order %d: chi-squared %.3g of %d degrees", s.order, r.Chi2, r.DegreesOfFreedom)
			}
		}
	}
}

// Over many scans 68 % and 95 % of the bars of one and two standard deviations
// hold the truth, and the bars are as wide as the scatter. The tolerance is four
// standard deviations of the binomial, and of the scatter.
func TestScanErrorBarsHold(t *testing.T) {
	repetitions := 200
	if slowTests() {
		repetitions = 4000
	}
	for _, s := range []scanTruth{fourWave(), downConversion()} {
		s.giveAccidental = s.order == 2
		poisson := poissonFrom(42)
		var zs [7][]float64
		chi2, degrees := 0.0, 0
		for range repetitions {
			r := mustScan(t, s.scan(poisson), s.options())
			found, want := s.figures(r)
			for i, e := range found {
				zs[i] = append(zs[i], (e.Value-want[i])/e.SD)
			}
			chi2 += r.Chi2
			degrees += r.DegreesOfFreedom
		}
		for i, z := range zs {
			if len(z) > 0 {
				checkCoverage(t, i, z)
			}
		}
		if off := chi2/float64(degrees) - 1; math.Abs(off) > 4*math.Sqrt(2/float64(degrees)) {
			t.Errorf("order %d: chi-squared per degree of freedom off 1 by %.3g", s.order, off)
		}
	}
}

// checkCoverage judges deviations in units of their standard deviations.
func checkCoverage(t *testing.T, figure int, zs []float64) {
	t.Helper()
	n := float64(len(zs))
	var one, two, square float64
	for _, z := range zs {
		square += z * z
		if math.Abs(z) < 1 {
			one++
		}
		if math.Abs(z) < 2 {
			two++
		}
	}
	for _, x := range []struct{ got, want float64 }{{one / n, math.Erf(math.Sqrt(0.5))}, {two / n, math.Erf(math.Sqrt2)}} {
		if off := math.Abs(x.got - x.want); off > 4*math.Sqrt(x.want*(1-x.want)/n) {
			t.Errorf("figure %d: bars hold the truth in %.3f of the cases, want %.3f", figure, x.got, x.want)
		}
	}
	if scatter := math.Sqrt(square / n); math.Abs(scatter-1) > 4/math.Sqrt(2*n) {
		t.Errorf("figure %d: the scatter is %.3f standard deviations", figure, scatter)
	}
}

// A second route to order 2: singles are linear in (P², P, 1) and coincidences
// in P², so with exact rates three powers give the coefficients by elimination
// and the source from them, without any fit.
func TestScanAgreesWithElimination(t *testing.T) {
	s := fourWave()
	s.powers = []float64{1, 2, 4}
	scan := s.scan(nil)
	r := mustScan(t, scan, s.options())
	var square [2]float64
	for arm := range 2 {
		y := [3]float64{scan.Points[0].SinglesHz[arm], scan.Points[1].SinglesHz[arm], scan.Points[2].SinglesHz[arm]}
		square[arm] = (y[2]-y[1])/6 - (y[1]-y[0])/3 // second divided difference
	}
	p := scan.Points[2]
	c := (p.CoincidencesHz - p.SinglesHz[0]*p.SinglesHz[1]*1e-9) / 16
	near(t, "pairs over the eliminated ones", r.PairsHzPerMWk.Value/(square[0]*square[1]*s.share/c), 1, 1e-8)
	near(t, "Alice's efficiency", r.Efficiency[0].Value, c/(square[1]*s.share), 1e-9)
}

// At order 1 the bound S_A' S_B' w/C' is the pair rate itself without linear
// noise, and above it by the noise with: S_A' S_B' w/C' = (ξ + r_A)(ξ + r_B)/ξ.
func TestScanBoundOfOrderOne(t *testing.T) {
	s := downConversion()
	o := ScanOptions{Order: 1, WindowShare: s.share}
	bound := mustScan(t, s.scan(nil), o).Slopes
	near(t, "bound over the noisy source's", bound.PairsAtMostHzPerMW.Value/((s.xi+s.raman[0])*(s.xi+s.raman[1])/s.xi), 1, 1e-8)
	near(t, "least efficiency", bound.EfficiencyAtLeast[0].Value, s.eta[0]*s.xi/(s.xi+s.raman[1]), 1e-9)
	near(t, "slope of the singles", bound.SinglesHzPerMW[1].Value/(s.eta[1]*(s.xi+s.raman[1])), 1, 1e-8)
	s.raman = [2]float64{}
	bound = mustScan(t, s.scan(nil), o).Slopes
	near(t, "bound over the pairs", bound.PairsAtMostHzPerMW.Value/s.xi, 1, 1e-8)
	near(t, "least efficiency without noise", bound.EfficiencyAtLeast[1].Value, s.eta[1], 1e-9)

	zero := mustScan(t, s.scan(poissonFrom(43)), s.options())
	open := mustScan(t, s.scan(poissonFrom(43)), o)
	near(t, "noise stated zero against the bound", zero.PairsHzPerMWk.Value/open.Slopes.PairsAtMostHzPerMW.Value, 1, 1e-9)
	near(t, "and its error", zero.PairsHzPerMWk.SD/open.Slopes.PairsAtMostHzPerMW.SD, 1, 1e-6)
	near(t, "efficiency's error", zero.Efficiency[0].SD/open.Slopes.EfficiencyAtLeast[0].SD, 1, 1e-6)
	if open.PairsHzPerMWk.Known() || open.Efficiency[0].Known() || open.LinearNoisePerMW[1].Known() || open.PairRateHz(2).Known() {
		t.Error("order 1 without linear noise tells what it cannot know")
	}
	if len(open.Parameters) != 5 || !slices.ContainsFunc(open.NotTold, func(s string) bool { return strings.Contains(s, "linear noise of both arms") }) {
		t.Errorf("parameters %v, not told %q", open.Parameters, open.NotTold)
	}
}

// With Alice's noise known and Bob's not, the bound shrinks by Alice's.
func TestScanOneArmsNoiseKnown(t *testing.T) {
	s := downConversion()
	o := s.options()
	o.LinearNoisePerMW[1] = nil
	r := mustScan(t, s.scan(nil), o)
	product := (s.xi + s.raman[0]) * (s.xi + s.raman[1]) / s.xi
	near(t, "bound", r.Slopes.PairsAtMostHzPerMW.Value/(product-s.raman[0]), 1, 1e-8)
	if r.PairsHzPerMWk.Known() || r.LinearNoisePerMW[0].Value != s.raman[0] || r.LinearNoisePerMW[0].SD != 0 {
		t.Errorf("%+v", r)
	}
}

// Between the points the fit expects what it expects at them, pairs and noise
// known apart or not; and what made the scan, where that had no noise.
func TestScanExpected(t *testing.T) {
	same := func(a, b, within float64) bool { return math.Abs(a-b) <= within*math.Abs(b) }
	for _, truth := range []scanTruth{fourWave(), downConversion()} {
		for _, o := range []ScanOptions{truth.options(), {Order: truth.order, WindowShare: truth.share}} {
			r := mustScan(t, truth.scan(nil), o)
			for _, p := range r.Points {
				singles, pairs := r.Expected(p.PowerMW)
				if !same(singles[0], p.SinglesFitHz[0], 1e-9) || !same(singles[1], p.SinglesFitHz[1], 1e-9) || !same(pairs, p.TrueFitHz, 1e-9) {
					t.Errorf("order %d at %g mW: %v, %v, and in the list %+v", truth.order, p.PowerMW, singles, pairs, p)
				}
			}
			const between = 0.9
			made := truth.xi * math.Pow(between, float64(truth.order))
			singles, pairs := r.Expected(between)
			if want := truth.eta[1]*(made+truth.raman[1]*between) + truth.n[1]; !same(singles[1], want, 1e-4) || !same(pairs, truth.eta[0]*truth.eta[1]*truth.share*made, 1e-4) {
				t.Errorf("order %d between: %v, %v; made with %v", truth.order, singles, pairs, want)
			}
		}
	}
}
