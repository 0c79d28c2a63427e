package source

import (
	"bytes"
	"fmt"
	"math"

	"pairspan/link"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// scan says what a power scan tells of a source, and at which power its key is
// greatest.
func (t *task) scan(text []byte) error {
	scan, err := sources.ReadPowerScan(bytes.NewReader(text))
	if err != nil {
		return t.wrong(err)
	}
	fit, err := scan.Fit(sources.ScanOptions{Order: t.Options.Order, WindowShare: t.Options.WindowShare, LinearNoisePerMW: t.Options.LinearNoiseHzPerMW})
	if err != nil {
		return t.wrong(err)
	}
	t.PowerScan = scanOf(scan, fit)
	t.warn("power-scan", fit.Doubts...)
	t.detectors()
	t.Sentence = t.PowerScan.sentence()
	if t.link != nil {
		if err := t.pumped(scan, fit); err != nil {
			return err
		}
	}
	if fit.PairsHzPerMWk.Known() {
		t.scanInScenario(scan)
	}
	return nil
}

// scanOf writes a fit down.
func scanOf(scan sources.PowerScan, fit sources.ScanFit) *ScanResult {
	r := &ScanResult{
		Order: fit.Order, WindowShare: fit.WindowShare, PairsHzPerMWk: estimated(fit.PairsHzPerMWk),
		Efficiency: perArm(fit.Efficiency), LinearNoise: perArm(fit.LinearNoisePerMW), ConstantHz: perArm(fit.ConstantHz),
		Chi2: fit.Chi2, DegreesOfFreedom: fit.DegreesOfFreedom, Chi2PerDof: perDegree(fit.Chi2, fit.DegreesOfFreedom), PValue: number(fit.Chance),
		Parameters: []ScanParameter{}, Correlation: [][]*float64{}, Points: []ScanPoint{},
		Told: listed(fit.Told), NotTold: listed(fit.NotTold), Doubts: listed(fit.Doubts),
	}
	if s := fit.Slopes; fit.Order == 1 {
		r.Slopes = &ScanSlopes{perArm(s.SinglesHzPerMW), estimated(s.CoincidencesHzPerMW), estimated(s.PairsAtMostHzPerMW), perArm(s.EfficiencyAtLeast)}
	}
	for i, p := range fit.Parameters {
		r.Parameters = append(r.Parameters, ScanParameter{p.Name, p.Unit, number(p.Value), number(p.SD), p.AtBound})
		row := make([]*float64, len(fit.Correlation[i]))
		for j, c := range fit.Correlation[i] {
			row[j] = number(c)
		}
		r.Correlation = append(r.Correlation, row)
	}
	for i, p := range fit.Points {
		r.Points = append(r.Points, pointOf(scan.Points[i], p, fit))
	}
	r.Fitted = fittedCurve(scan, fit)
	return r
}

const fittedPowers = 61

// fittedCurve is the fit from the least to the greatest power of a scan.
func fittedCurve(scan sources.PowerScan, fit sources.ScanFit) []ScanFitted {
	lo, hi := scan.Range()
	curve := make([]ScanFitted, fittedPowers)
	for i := range curve {
		at := lo + (hi-lo)*float64(i)/(fittedPowers-1)
		singles, pairs := fit.Expected(at)
		curve[i] = ScanFitted{at, plan.PerArm{Alice: singles[0], Bob: singles[1]}, pairs}
	}
	return curve
}

func pointOf(as sources.ScanPoint, p sources.ScanResidual, fit sources.ScanFit) ScanPoint {
	return ScanPoint{
		PowerMW: p.PowerMW, SinglesHz: plan.PerArm{Alice: p.SinglesHz[0], Bob: p.SinglesHz[1]},
		SinglesFitHz: plan.PerArm{Alice: p.SinglesFitHz[0], Bob: p.SinglesFitHz[1]},
		SinglesSDHz:  MaybePerArm{deviation(p.SinglesHz[0], p.SinglesFitHz[0], p.SinglesResidual[0]), deviation(p.SinglesHz[1], p.SinglesFitHz[1], p.SinglesResidual[1])},
		SinglesResidual: MaybePerArm{
			number(p.SinglesResidual[0]), number(p.SinglesResidual[1]),
		},
		CoincidencesHz: as.CoincidencesHz, AccidentalsHz: p.AccidentalsHz,
		TrueHz: p.TrueHz, TrueFitHz: p.TrueFitHz, TrueSDHz: deviation(p.TrueHz, p.TrueFitHz, p.TrueResidual), TrueResidual: number(p.TrueResidual),
		PairRateHz:        estimated(fit.PairRateHz(p.PowerMW)),
		UnpairedPhotonsHz: PerArm{estimated(fit.UnpairedHz(0, p.PowerMW)), estimated(fit.UnpairedHz(1, p.PowerMW))},
	}
}

// deviation returns the standard deviation in which a residual is counted; null
// where the residual does not tell it.
func deviation(measured, fitted, residual float64) *float64 {
	return number((measured - fitted) / residual)
}

// perDegree returns chi-squared per degree of freedom, null without any.
func perDegree(chi2 float64, degrees int) *float64 { return number(chi2 / float64(degrees)) }

// listed is a list that JSON writes as one even where it is empty.
func listed(sentences []string) []string { return append([]string{}, sentences...) }

// detectors takes the detectors that counted out of the arms' efficiencies: those
// stated, or else those of the link.
func (t *task) detectors() {
	var eff [2]float64
	from := "stated"
	for arm := range eff {
		switch given := t.Options.DetectorEfficiency[arm]; {
		case given != nil:
			eff[arm] = *given
		case t.link != nil:
			eff[arm] = t.link.Detector(t.link.Arms[arm].Detector).Efficiency
			from = "that the link's detectors have, which are taken to have counted"
		default:
			return
		}
	}
	r := t.PowerScan
	r.DetectorEfficiency = &plan.PerArm{Alice: eff[0], Bob: eff[1]}
	for arm, loss := range []*Figure{&r.CollectionLossDB.Alice, &r.CollectionLossDB.Bob} {
		e := []Figure{r.Efficiency.Alice, r.Efficiency.Bob}[arm]
		if e.Value == nil {
			continue
		}
		if *e.Value > eff[arm] {
			t.warn("power-scan", fmt.Sprintf("%s's arm counts %s of its photons, more than the efficiency of %s %s: another detector counted.",
				armNames[arm], perCent(*e.Value), three(eff[arm]), from))
			continue
		}
		loss.Value = number(float64(link.LossOf(*e.Value / eff[arm])))
		if e.SD != nil {
			loss.SD = number(decibelsPerRatio * *e.SD / *e.Value)
		}
	}
}

// decibelsPerRatio is the change in dB of a small relative change.
const decibelsPerRatio = 10 / math.Ln10

// sentence says what the scan tells.
func (r *ScanResult) sentence() string {
	per := "mW"
	if r.Order == 2 {
		per = "mW squared"
	}
	if r.PairsHzPerMWk.Value == nil {
		return fmt.Sprintf("A source of at most %s pairs per second and %s; Alice's arm counts at least %s of its photons, Bob's %s.",
			r.Slopes.PairsAtMostHzPerMW.Text(), per, r.Slopes.EfficiencyAtLeast.Alice.PerCent(), r.Slopes.EfficiencyAtLeast.Bob.PerCent())
	}
	text := fmt.Sprintf("A source of %s pairs per second and %s; Alice's arm counts %s of its photons, Bob's %s",
		r.PairsHzPerMWk.Text(), per, r.Efficiency.Alice.PerCent(), r.Efficiency.Bob.PerCent())
	if a, b := r.CollectionLossDB.Alice, r.CollectionLossDB.Bob; a.Value != nil && b.Value != nil {
		text += fmt.Sprintf(", a loss of %s dB and %s dB without the detectors", a.Text(), b.Text())
	}
	return text + "."
}

// pumped says what the link carries at the pump power that is best for it.
func (t *task) pumped(scan sources.PowerScan, fit sources.ScanFit) error {
	if !fit.PairsHzPerMWk.Known() {
		t.notTold("the scan does not tell the pair rate. Give the linear noise of both arms with --raman-alice and --raman-bob, 0 if there is none.")
		return nil
	}
	p, at := bestPower(writtenOut(t.link), scan, fit)
	if p == nil {
		t.notTold("a pair rate says nothing of entanglement, and the scenario gives no state, so no pump power is best.")
		return nil
	}
	without(at, "source.pair_rate_hz")
	without(at, "source.pairs_per_pulse")
	without(at, "source.unpaired_photons_hz")
	if err := t.carry(at, []plan.Change{
		{Entry: emissionEntry(at.Pulsed()), Value: hz(*pairRate(at))},
		{Entry: "source.unpaired_photons_hz.alice", Value: hz(at.Source.UnpairedHz[0])},
		{Entry: "source.unpaired_photons_hz.bob", Value: hz(at.Source.UnpairedHz[1])},
	}); err != nil {
		return err
	}
	t.Link.Pump = p
	t.looserThanFiled()
	return nil
}

// looserThanFiled doubts a fixed loss below what the scan found in its arm: the
// link's holds analysers besides.
func (t *task) looserThanFiled() {
	const noise = 0.3 // dB
	for arm, loss := range []Figure{t.PowerScan.CollectionLossDB.Alice, t.PowerScan.CollectionLossDB.Bob} {
		if filed := float64(t.link.FixedLoss(arm)); loss.Value != nil && *loss.Value > filed+noise {
			t.Warnings = append(t.Warnings, Warning{"collection-loss", "arms." + armEntries[arm] + ".fixed_loss_db", fmt.Sprintf(
				"the scan finds a collection loss of %s dB in %s's arm, more than the %s dB of the scenario", loss.Text(), armNames[arm], three(filed))})
		}
	}
}
