package scenarios

import (
	"bytes"
	"fmt"
	"strings"

	"pairspan/link"
	"pairspan/sources"
)

// PowerScan is a scan of the pump's power at the source, and the power at which
// the source runs.
type PowerScan struct {
	Used               bool
	PowerMW            float64
	Order              float64          // 1 or 2: pairs grow as the power to this
	WindowShare        float64          // of the pairs, in the window that was counted; 0 to 1
	LinearNoiseHzPerMW [2]float64       // light without a partner inside the source; NaN: not known
	Detector           [2]string        // that counted, names in Scenario.Detectors; "": not stated
	Fit                *sources.ScanFit // what the scan says, once it is read
}

// EmissionMeasured reports whether the emission follows from counts at the
// source, one point or a scan.
func (src *Source) EmissionMeasured() bool { return src.Counted.Used || src.PowerScan.Used }

// Unpaired returns an arm's light without a partner, in photons per second
// inside the source: as stated, or as the scan tells at the power that it runs at.
func (s *Scenario) Unpaired(i int) float64 {
	if p := &s.Source.PowerScan; p.Used {
		return p.Fit.UnpairedHz(i, p.PowerMW).Value
	}
	return s.Source.UnpairedHz[i]
}

// scanned takes pair rate and collection losses from the scan.
func (s *Scenario) scanned() (Emission, error) {
	p := &s.Source.PowerScan
	rate := p.Fit.PairRateHz(p.PowerMW)
	if !rate.Known() {
		return Emission{}, fmt.Errorf("at order 1 the scan does not tell pairs from linear noise; give linear_noise_hz_per_mw of both arms, 0 if there is none")
	}
	e := Emission{PairRateHz: rate.Value}
	for i, arm := range armNames {
		det := s.Detector(p.Detector[i])
		if det == nil {
			continue
		}
		efficiency := p.Fit.Efficiency[i].Value
		if efficiency > det.Efficiency {
			return Emission{}, fmt.Errorf("%s's arm would let through %.4g of the photons with its detector, which alone has an efficiency of %g",
				arm, efficiency, det.Efficiency)
		}
		e.CollectionLoss[i] = link.LossOf(efficiency / det.Efficiency)
	}
	return e, nil
}

// powerScan fits a power scan.
func (r *reader) powerScan(_ string, data []byte) error {
	scan, err := sources.ReadPowerScan(bytes.NewReader(data))
	if err != nil {
		return err
	}
	p := &r.s.Source.PowerScan
	if !Stated(p.Order) {
		return nil // which is an error already
	}
	options := sources.ScanOptions{Order: int(p.Order)}
	if Stated(p.WindowShare) { // its default is not filled in yet
		options.WindowShare = p.WindowShare
	}
	for i := range p.LinearNoiseHzPerMW {
		if noise := p.LinearNoiseHzPerMW[i]; Stated(noise) {
			options.LinearNoisePerMW[i] = &noise
		}
	}
	fit, err := scan.Fit(options)
	if err != nil {
		return err
	}
	p.Fit = &fit
	if len(fit.Doubts) > 0 {
		r.s.Repairs = append(r.s.Repairs, Repair{scanDoubtful, powerScanEntry + ".file", strings.Join(fit.Doubts, " ")})
	}
	r.beyondScan(scan)
	return nil
}

const (
	powerScanEntry = "source.power_scan"
	scanDoubtful   = "power-scan" // the rule of the warning
)

// beyondScan doubts a power that the scan did not reach.
func (r *reader) beyondScan(scan sources.PowerScan) {
	_, most := scan.Range()
	if power := r.s.Source.PowerScan.PowerMW; power > most {
		r.s.Repairs = append(r.s.Repairs, Repair{
			scanDoubtful, powerScanEntry + ".power_mw",
			fmt.Sprintf("%g mW lies beyond the scan, which ends at %g mW: its laws are taken to hold on.", power, most),
		})
	}
}

// checkScan finds what a scan does not go with.
func (r *reader) checkScan() {
	if !r.s.Source.PowerScan.Used {
		return
	}
	r.exclude("the scan tells the light without a partner", powerScanEntry, "source.unpaired_photons_hz")
	r.exclude("the pump runs at the scan's power_mw", powerScanEntry, "source.max_pair_rate_hz", "source.max_pairs_per_pulse")
	for i, arm := range armNames {
		name := "arms." + arm + ".fixed_loss_db"
		if r.s.Arms[i].FixedLossFromCounts && r.s.Source.PowerScan.Detector[i] == "" {
			r.fail(name, r.stated[name].at, "from_counts, but the detector that counted the scan is not known", "state "+powerScanEntry+".detector, or the loss in dB")
		}
	}
}
