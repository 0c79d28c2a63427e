package plan

import (
	"fmt"
	"math"

	"pairspan/link"
	"pairspan/scenarios"
)

// used calls f once for each detector in use, with an arm that uses it.
func (w *watch) used(f func(arm int, det *scenarios.Detector)) {
	for i := range w.s.Arms {
		if i > 0 && w.s.Arms[i].Detector == w.s.Arms[0].Detector {
			return
		}
		f(i, w.s.Detector(w.s.Arms[i].Detector))
	}
}

func detectorTiming(w *watch) (found []doubt) {
	const (
		telecomNm    = 1000
		lowEfficient = 0.5
		shortDeadNs  = 200
		sharpPs      = 5
		unitStep     = 1000 // µs for ns, ns for ps
		mostBlind    = 0.5
	)
	add := func(name, entry, sentence string, suspect func(*scenarios.Detector)) {
		d := doubt{"detectors." + name + "." + entry, sentence, nil}
		if suspect != nil {
			d.suspect = func(s *scenarios.Scenario) { suspect(s.Detector(name)) }
		}
		found = append(found, d)
	}
	w.used(func(arm int, det *scenarios.Detector) {
		if w.s.Source.WavelengthNm[arm] > telecomNm && det.Efficiency < lowEfficient && det.DeadTimeNs < shortDeadNs && det.DeadTimeNs > 0 {
			add(det.Name, "dead_time_ns", fmt.Sprintf("%s ns is short for a detector of efficiency %s at this wavelength: are these microseconds?",
				plain(det.DeadTimeNs), plain(det.Efficiency)),
				func(d *scenarios.Detector) { d.DeadTimeNs *= unitStep })
		}
		if det.JitterFWHMPs < sharpPs {
			sentence := fmt.Sprintf("%s ps is sharper than detectors are: are these nanoseconds?", plain(det.JitterFWHMPs))
			if det.JitterFWHMPs == 0 {
				add(det.Name, "jitter_fwhm_ps", "no jitter at all: is the figure missing?", nil)
			} else {
				add(det.Name, "jitter_fwhm_ps", sentence, func(d *scenarios.Detector) { d.JitterFWHMPs *= unitStep })
			}
		}
		if blind := 1 - w.now.rate.Arms[arm].Live; blind > mostBlind {
			add(det.Name, "dead_time_ns", fmt.Sprintf("each of these detectors is blind %.0f %% of the time: is %s ns in picoseconds, or the light too bright for them?",
				100*blind, plain(det.DeadTimeNs)),
				func(d *scenarios.Detector) { d.DeadTimeNs /= unitStep })
		}
	})
	return found
}

// perCentOrFraction finds fractions that look like per cent, and the reverse.
func perCentOrFraction(w *watch) (found []doubt) {
	const (
		muchError, muchAfter   = 0.1, 0.2
		littleDuty, littleSeen = 0.05, 0.01
		hundred                = 100
	)
	for i := range w.s.Arms {
		if e := w.s.Arms[i].MisalignmentError; e >= muchError {
			found = append(found, doubt{
				armEntry[i] + "misalignment_error",
				fmt.Sprintf("%s is much for a residual error: is it in per cent?", plain(e)),
				func(s *scenarios.Scenario) { s.Arms[i].MisalignmentError = e / hundred },
			})
		}
	}
	w.used(func(_ int, det *scenarios.Detector) {
		name := det.Name
		if p := det.Afterpulsing; p >= muchAfter {
			found = append(found, doubt{
				"detectors." + name + ".afterpulsing", fmt.Sprintf("%s of the counts is much: is it in per cent?", plain(p)),
				func(s *scenarios.Scenario) { s.Detector(name).Afterpulsing = p / hundred },
			})
		}
		if eff := det.Efficiency; eff <= littleSeen {
			found = append(found, doubt{
				"detectors." + name + ".efficiency", fmt.Sprintf("%s is little: is it 1/100 of what was meant?", plain(eff)),
				func(s *scenarios.Scenario) { s.Detector(name).Efficiency = eff * hundred },
			})
		}
	})
	if duty := w.s.DutyCycle; duty <= littleDuty {
		found = append(found, doubt{
			"duty_cycle", fmt.Sprintf("%s of the time is little: is it 1/100 of what was meant?", plain(duty)),
			func(s *scenarios.Scenario) { s.DutyCycle = min(1, duty*hundred) },
		})
	}
	return found
}

// Rayleigh scattering, common practice, no source: 3.0 dB/km at 810 nm, and as
// the inverse fourth power of the wavelength.
func rayleighDBPerKm(nm float64) float64 { return 3.0 * math.Pow(810/nm, 4) }

// lightAndGlass finds wavelengths that do not go with fibre or detector.
func lightAndGlass(w *watch) (found []doubt) {
	const (
		cutOffNm               = 1260
		shortNm, leastDB       = 1000, 1
		siliconEndNm, ingaasNm = 1000, 950
		wrongEfficient         = 0.3
	)
	for i := range w.s.Arms {
		a, nm := &w.s.Arms[i], w.s.Source.WavelengthNm[i]
		if _, telecom := link.ClassByName(a.Fibre); telecom && nm < cutOffNm {
			found = append(found, doubt{
				armEntry[i] + "fibre",
				fmt.Sprintf("%s carries two or more modes at %s nm: a mode filter is needed, with its loss in fixed_loss_db.", a.Fibre, plain(nm)), nil,
			})
		}
		if db := w.s.Attenuation(i); nm < shortNm && db < leastDB {
			found = append(found, doubt{
				armEntry[i] + "loss_db_per_km",
				fmt.Sprintf("%s dB/km is less than glass scatters at %s nm (some %s dB/km).", bare(db), plain(nm), two(rayleighDBPerKm(nm))),
				func(s *scenarios.Scenario) { s.Arms[i].LossDBPerKm = rayleighDBPerKm(nm) },
			})
		}
		det := w.s.Detector(a.Detector)
		wrong := det.Class == "ingaas" && nm < ingaasNm || det.Class == "silicon" && nm > siliconEndNm
		if wrong && det.Efficiency > wrongEfficient {
			found = append(found, doubt{
				"detectors." + det.Name + ".efficiency",
				fmt.Sprintf("%s at %s nm is more than a detector of class %s sees.", plain(det.Efficiency), plain(nm), det.Class),
				func(s *scenarios.Scenario) { s.Detector(det.Name).Efficiency = blindEfficiency },
			})
		}
	}
	return found
}

// blindEfficiency stands for a detector outside its range of wavelengths.
const blindEfficiency = 1e-3
