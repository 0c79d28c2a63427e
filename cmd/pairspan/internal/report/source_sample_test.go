package report

import (
	"fmt"
	"math"
	"reflect"

	"pairspan/scenarios/plan"
	"pairspan/scenarios/source"
)

// The results of these tests are invented: shaped like a source's, but no
// model made them, so a test may not read physics into them.

func fig(value, sd float64) source.Figure { return source.Figure{Value: ptr(value), SD: ptr(sd)} }

func bareSource() *source.Result {
	return &source.Result{SourceFormat: 1, Program: plan.Program{Name: "pairspan", Version: "0.1.0"}, Title: "bare.csv", Form: source.FormDensityMatrix, Sentence: "Nothing is known."}
}

func sampleSource() *source.Result {
	return &source.Result{
		SourceFormat: 1, Program: plan.Program{Name: "pairspan", Version: "0.1.0"}, Title: "north-bench.csv", Form: source.FormTomography,
		Inputs:     []plan.Input{{Name: "north-bench.csv", SHA256: "9f0c", Text: "alice,bob,counts\nH,H,1204\n"}},
		Warnings:   []source.Warning{{Rule: "fit", Sentence: "The counts scatter more about the fit than counting statistics allow."}, {Rule: "dark-counts", Entry: "detectors.gated.dark_counts_hz", Sentence: "Per arm or per detector?"}},
		Cautions:   plan.Cautions(),
		References: []plan.Reference{{ID: "example", Text: "First author et al. (2001). Journal 1, 2."}},
		Sentence:   "A pair of tangle 0.834 +- 0.011 (concurrence 0.913 +- 0.006), nearest to Phi+ with a fidelity of 0.921: with the analysers aligned a QBER of 2.1 % and 2.6 %, at most 0.681 secret bits per sifted bit.",
		State:      sampleState(), Fit: sampleFit(), PowerScan: sampleScan(), Delays: sampleDelays(), SpectralMap: sampleMap(8), Link: sampleSourceLink(),
	}
}

func sampleState() *source.State {
	s := &source.State{
		Known: source.Whole, Tangle: fig(0.834, 0.011), Concurrence: fig(0.9132, 0.0061), Fidelity: fig(0.951, 0.004), Purity: fig(0.912, 0.006),
		Entropy: fig(0.29, 0.02), LinearEntropy: fig(0.117, 0.008), EntanglementOfFormation: fig(0.869, 0.009), CHSH: fig(2.66, 0.02),
		QBERLab:        source.QBERLab{HV: fig(0.0213, 0.0021), DA: fig(0.0744, 0.0031), RL: fig(0.0801, 0.003)},
		QBERAligned:    source.QBERAligned{Key: fig(0.0208, 0.0021), Check: fig(0.0263, 0.002)},
		SecretFraction: source.SecretFraction{Lab: fig(0.467, 0.015), Aligned: fig(0.681, 0.017)},
		BellState:      ptr("Phi+"), BellFidelity: fig(0.9211, 0.0045), FidelityRange: &source.Range{From: 0.9132, To: 0.9566},
		Alignment: &source.Alignment{
			Alice:    source.Rotation{Axis: [3]float64{0.021, -0.114, 0.993}, AngleDeg: 17.3},
			Bob:      source.Rotation{Axis: [3]float64{-0.311, 0.6, -0.737}, AngleDeg: 3.1},
			KeyBasis: "HV",
		},
		Conversions: "tangle 0.834 = concurrence 0.913; fidelity 0.951, between 0.913 and 0.957 for any state of that tangle",
		Aligning:    "Aligning the analysers is worth 0.214 secret bits per sifted bit.",
	}
	s.DensityMatrix = &[4][4]source.Complex{
		{{Re: 0.489}, {Re: 0.012, Im: 0.031}, {Re: -0.008, Im: -0.022}, {Re: 0.421, Im: -0.172}},
		{{Re: 0.012, Im: -0.031}, {Re: 0.011}, {Re: 0.003, Im: 0.001}, {Re: 0.01, Im: -0.02}},
		{{Re: -0.008, Im: 0.022}, {Re: 0.003, Im: -0.001}, {Re: 0.0103}, {Re: -0.0002, Im: 0.018}},
		{{Re: 0.421, Im: 0.172}, {Re: 0.01, Im: 0.02}, {Re: -0.0002, Im: -0.018}, {Re: 0.4897}},
	}
	return s
}

func sampleFit() *source.Fit {
	f := &source.Fit{
		LogLikelihood: 123456.78, Chi2: 31.2, DegreesOfFreedom: 20, Chi2PerDof: ptr(1.56), PValue: ptr(0.052), Optimality: 3.1e-7, Iterations: 14,
		PairsPerExposure: 2410, BootstrapDraws: 200, BootstrapSeed: 1, Sentence: "The fit is fair: chi-squared per degree of freedom 1.56",
	}
	letters := "HVDARL"
	for i, a := range letters {
		for j, b := range letters {
			expected := 600 + 590*math.Cos(float64(i)*1.1)*math.Cos(float64(j)*1.1)
			z := 1.3 * math.Sin(float64(7*i+3*j))
			s := source.Setting{Alice: string(a), Bob: string(b), Accidentals: 2.1, Exposure: 1, Expected: expected, Counts: math.Round(expected + z*math.Sqrt(expected)), Residual: &z}
			f.Settings = append(f.Settings, s)
		}
	}
	f.Settings[5].Residual = nil
	return f
}

func sampleScan() *source.ScanResult {
	arm := func(a, b float64) source.PerArm { return source.PerArm{Alice: fig(a, a/40), Bob: fig(b, b/30)} }
	s := &source.ScanResult{
		Order: 2, WindowShare: 0.97, PairsHzPerMWk: fig(411000, 8300), Efficiency: arm(0.0312, 0.0291), DetectorEfficiency: &plan.PerArm{Alice: 0.2, Bob: 0.2},
		CollectionLossDB: arm(8.07, 8.37), LinearNoise: arm(51000, 43000), ConstantHz: arm(1210, 1340),
		Parameters: []source.ScanParameter{
			{Name: "pairs", Unit: "/s per mW²", Value: ptr(411000.0), SD: ptr(8300.0)},
			{Name: "efficiency of Alice's arm", Value: ptr(0.0312), SD: ptr(0.0004)},
			{Name: "efficiency of Bob's arm", Value: ptr(0.0291), SD: ptr(0.0004)},
			{Name: "linear noise in Alice's arm", Unit: "/s per mW", Value: ptr(51000.0), SD: ptr(2100.0)},
			{Name: "linear noise in Bob's arm", Unit: "/s per mW", Value: ptr(0.0), AtBound: true},
		},
		Correlation: [][]*float64{}, Chi2: 20.1, DegreesOfFreedom: 17, Chi2PerDof: ptr(1.18), PValue: ptr(0.27),
		Told:    []string{"Pairs grow as the square of the power and other light as the power, so the scan tells the pair rate, both efficiencies, the linear noise and the constant counts of both arms."},
		NotTold: []string{"How much of an efficiency is the detector's: take it out to get the loss of the arm."},
		Doubts:  []string{"The coincidence window is taken to hold all pairs."},
	}
	for i := range s.Parameters {
		line := make([]*float64, len(s.Parameters))
		for j := range line {
			line[j] = ptr(math.Pow(-0.7, math.Abs(float64(i-j))))
		}
		s.Correlation = append(s.Correlation, line)
	}
	s.Correlation[4][3], s.Correlation[3][4] = nil, nil
	for k := range 8 {
		p := 0.5 * float64(k+1)
		z := math.Sin(float64(5 * k))
		a, b, c := 1210+1590*p+12800*p*p, 1340+1250*p+11900*p*p, 373*p*p
		at := source.ScanPoint{
			PowerMW: p, SinglesHz: plan.PerArm{Alice: a + 12*z*math.Sqrt(a), Bob: b - z*math.Sqrt(b)}, SinglesFitHz: plan.PerArm{Alice: a, Bob: b},
			SinglesSDHz: source.MaybePerArm{Alice: ptr(12 * math.Sqrt(a)), Bob: ptr(math.Sqrt(b))}, SinglesResidual: source.MaybePerArm{Alice: ptr(z), Bob: ptr(-z)},
			CoincidencesHz: c + 20, AccidentalsHz: 20, TrueHz: c + 2*z*math.Sqrt(c), TrueFitHz: c, TrueSDHz: ptr(2 * math.Sqrt(c)), TrueResidual: ptr(z),
			PairRateHz: fig(411000*p*p, 8300*p*p), UnpairedPhotonsHz: source.PerArm{Alice: fig(51000*p, 2100*p), Bob: fig(43000*p, 1900*p)},
		}
		s.Points = append(s.Points, at)
		s.Fitted = append(s.Fitted, source.ScanFitted{PowerMW: p, SinglesHz: at.SinglesFitHz, TrueHz: c})
	}
	s.Points[0].TrueSDHz, s.Points[0].TrueResidual = nil, nil
	return s
}

func sampleDelays() *source.DelayResult {
	r := &source.DelayResult{
		Kind: "one_peak", BinWidthPs: 50, DelayPs: fig(-312.4, 1.2), FWHMPs: fig(283, 4), Coincidences: fig(10412, 110), FloorPerBin: fig(21.3, 0.4),
		WindowPs: ptr(566.0), WindowShare: fig(0.981, 0.001), InWindow: fig(10214, 106), AccidentalsIn: fig(482, 9), CAR: fig(21.2, 0.5),
		Chi2: 211, DegreesOfFreedom: 196, Chi2PerDof: ptr(1.08), PValue: ptr(0.22), Told: []string{"The peak is one Gaussian on a flat floor."},
	}
	for i := range 100 {
		x := -2500 + 50*float64(i)
		fit := 21.3 + 860*math.Exp(-4*math.Ln2*math.Pow((x+312.4)/283, 2))
		r.Bins = append(r.Bins, source.DelayBin{DelayPs: x, Fitted: fit, Counts: math.Round(fit + math.Sqrt(fit)*math.Sin(float64(i*i)))})
	}
	return r
}

func sampleSourceLink() *source.Link {
	l := &source.Link{
		Title: "Harbour campus", Replaced: []plan.Change{{Entry: "source.state", Value: "the state of north-bench.csv"}}, Outcome: plan.Met, State: ptr("given"),
		UsableRateBps: ptr(394.0), NeedBps: ptr(256.0), MarginDB: ptr(2.1), ReachKm: ptr(14.2), PairRateHz: ptr(2e6), WindowPs: ptr(800.0), QBER: &plan.QBER{Key: 0.031, Check: 0.035},
		Sentence: "Yes, with 2.1 dB to spare: 394 bit/s at 6.2 km, 1.5 times the 256 bit/s needed", RestsOn: "Rests on the state given", InTheWay: "First in the way: the detectors",
		Pump: &source.Pump{PowerMW: 1.9, FromMW: 0.5, ToMW: 4, PairRateHz: 1.48e6, WindowPs: 760, UsableRateBps: 402, Sentence: "The key is greatest at 1.9 mW"},
	}
	for i := range 40 {
		p := 0.5 + 3.5*float64(i)/39
		l.Pump.Points = append(l.Pump.Points, source.PumpPoint{PowerMW: p, PairRateHz: 411000 * p * p, WindowPs: 760, UsableRateBps: max(0, 402-90*math.Pow(p-1.9, 2))})
	}
	return l
}

// boundedSource knows a tangle alone.
func boundedSource() *source.Result {
	r := bareSource()
	r.Form, r.Sentence = source.FormScenario, "What is known leaves the state open."
	r.State = &source.State{
		Known: source.Bounded, Tangle: source.Figure{Value: ptr(0.86)}, Concurrence: source.Figure{Value: ptr(0.927)}, FidelityRange: &source.Range{From: 0.927, To: 0.964},
		Members:     &source.Members{AtWorst: source.Member{QBERKey: 0.036, QBERCheck: 0.036, SecretFraction: 0.55}, Nominal: source.Member{QBERKey: 0.024, QBERCheck: 0.024, SecretFraction: 0.67}, AtBest: source.Member{QBERCheck: 0.036, SecretFraction: 0.78}},
		Conversions: "tangle 0.86 = concurrence 0.927; fidelity between 0.927 and 0.964",
	}
	return r
}

// emptySource has every section and nothing in any.
func emptySource() *source.Result {
	r := bareSource()
	r.State = &source.State{DensityMatrix: &[4][4]source.Complex{}, BellState: ptr("other"), Alignment: &source.Alignment{}, Members: &source.Members{}}
	r.Fit, r.PowerScan, r.Delays = &source.Fit{Settings: []source.Setting{{}}}, &source.ScanResult{Points: make([]source.ScanPoint, 1), Slopes: &source.ScanSlopes{}}, &source.DelayResult{Bins: make([]source.DelayBin, 1)}
	r.SpectralMap = &source.SpectralMap{Bins: make([]source.SpectralBin, 1), ByWidth: make([]source.SpectralBand, 2), Best: &source.SpectralBand{}}
	r.Link = &source.Link{Outcome: source.NotTold, Pump: &source.Pump{Points: make([]source.PumpPoint, 1)}}
	return r
}

// manySource has more settings and bins than a drawing shows one by one.
func manySource() *source.Result {
	r := bareSource()
	r.Fit = sampleFit()
	for i := range 300 {
		r.Fit.Settings = append(r.Fit.Settings, source.Setting{Alice: fmt.Sprintf("%d° %d°", i, 2*i), Bob: "45° 0°", Counts: 100, Expected: 100 + float64(i%7), Residual: ptr(float64(i%7) / 10)})
	}
	r.Delays = sampleDelays()
	for i := range 9000 {
		r.Delays.Bins = append(r.Delays.Bins, source.DelayBin{DelayPs: 2500 + 25*float64(i), Counts: 20, Fitted: 21.3})
	}
	return r
}

func sourceSamples() map[string]*source.Result {
	return map[string]*source.Result{
		"sample": sampleSource(), "bounded": boundedSource(), "bare": bareSource(), "empty": emptySource(), "many": manySource(), "hostile": hostileSource(),
		"map": mapSource(40), "tangles": tanglesSource(),
	}
}

// hostileSource has hostile text wherever a result can hold text.
func hostileSource() *source.Result { return withText(sampleSource(), hostile) }

// withText puts a text into every field of a result that holds one.
func withText(r *source.Result, text string) *source.Result {
	fillTexts(reflect.ValueOf(r), text)
	return r
}

func fillTexts(v reflect.Value, text string) {
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			fillTexts(v.Elem(), text)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			fillTexts(v.Field(i), text)
		}
	case reflect.Slice, reflect.Array:
		for i := range v.Len() {
			fillTexts(v.Index(i), text)
		}
	case reflect.String:
		v.SetString(text)
	}
}
