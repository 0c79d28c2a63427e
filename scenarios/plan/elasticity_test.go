package plan

import (
	"cmp"
	"math"
	"slices"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// elasticityOf returns that of one entry; ok where it has one.
func elasticityOf(s *scenarios.Scenario, entry string) (float64, bool) {
	all := newAsker(s).elasticities()
	i := slices.IndexFunc(all, func(e Elasticity) bool { return e.Entry == entry })
	if i < 0 {
		return 0, false
	}
	return all[i].Value, true
}

func wantElasticity(t *testing.T, s *scenarios.Scenario, entry string, want, tolerance float64) {
	t.Helper()
	if got, _ := elasticityOf(s, entry); math.Abs(got-want) > tolerance {
		t.Errorf("%s: an elasticity of %v, want %v", entry, got, want)
	}
}

// quietLink is a link at low rates without noise, dead time, multi-pairs or
// accidentals that would matter, so that its rate is a product.
var quietLink = []set{
	{"source.pair_rate_hz", "1"},
	{"window_ps", "600"},
	{"detectors.free_running.dark_counts_hz", "0"},
	{"detectors.free_running.dead_time_ns", "0"},
	{"detectors.nanowire.dark_counts_hz", "0"},
	{"detectors.nanowire.dead_time_ns", "0"},
}

// TestElasticityOfAProduct: the usable rate without noise is
// duty x B eta_A eta_B w/2 x (1 - f h(e) - h(e)).
func TestElasticityOfAProduct(t *testing.T) {
	const tolerance = 1e-6
	same, two := read(t, quietLink...), read(t, append(quietLink, set{"arms.bob.detector", "nanowire"})...)
	wantElasticity(t, same, "duty_cycle", 1, tolerance)
	wantElasticity(t, same, "source.pair_rate_hz", 1, tolerance)
	wantElasticity(t, same, "detectors.free_running.efficiency", 2, tolerance) // it is in both arms
	wantElasticity(t, two, "detectors.free_running.efficiency", 1, tolerance)
	wantElasticity(t, two, "detectors.nanowire.efficiency", 1, tolerance)
	// 10^(-L/10), so d ln/d ln L = -L ln(10)/10: of 4.2 dB, and of 4 pairs of 0.3 dB.
	wantElasticity(t, same, "arms.alice.fixed_loss_db", -4.2*math.Ln10/10, tolerance)
	wantElasticity(t, same, "arms.bob.connector_pair_loss_db", -1.2*math.Ln10/10, tolerance)
	wantElasticity(t, same, "arms.bob.loss_db_per_km", -6.2*0.275*math.Ln10/10, tolerance)

	// f multiplies h(e) alone: -f h/(1 - f h - h).
	a := newAsker(same)
	now := a.judged()
	h := keyrate.BinaryEntropy(now.rate.QBER[keyrate.KeyBasis])
	f := same.ErrorCorrectionF
	wantElasticity(t, same, "error_correction_f", -f*h/(1-f*h-h), tolerance)
	// Jitter and clock share the spread D as its root sum of squares, and the
	// rate has w = erf(sqrt(ln 2) tau/D): d ln w/d ln D = -2 u exp(-u^2)/(sqrt(pi) w),
	// u = sqrt(ln 2) tau/D; ln D moves by jitter^2/D^2 for each arm's.
	d := same.Spread(6.2)
	u := math.Sqrt(math.Ln2) * 600 / d
	slope := -2 * u * math.Exp(-u*u) / (math.Sqrt(math.Pi) * math.Erf(u))
	wantElasticity(t, same, "detectors.free_running.jitter_fwhm_ps", slope*2*180*180/(d*d), tolerance)
}

// TestElasticityAgainstDifferences reads the scenario again with each entry a
// thousandth up and down, the window as the plan found it: another step, and
// the way through the file.
func TestElasticityAgainstDifferences(t *testing.T) {
	for _, changes := range [][]set{
		nil,
		{{"arms.bob.detector", "nanowire"}, {"source.state", "{ fidelity: 0.95, measured_car: 50 }"}, {"arms.bob.background_counts_hz", "300"}},
		{{"finite_key", aBlock}, {"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}, {"key_basis_share", "0.7"}},
		{{"arms.bob.dispersion_ps_per_nm_km", "18"}, {"clock_jitter_fwhm_ps", "40"}, {"detectors.free_running.afterpulsing", "0.02"}},
	} {
		s := read(t, changes...)
		now := newAsker(s).judged()
		window := scenarios.Change{Entry: "window_ps", Value: plain(windowPs(now.setting))}
		all := newAsker(s).elasticities()
		if len(all) < 15 {
			t.Errorf("%v: only %d elasticities", changes, len(all))
		}
		for _, e := range all {
			q, err := s.Quantity(e.Entry)
			if err != nil {
				t.Fatal(err)
			}
			if q.InUse == q.Hi { // no step up
				continue
			}
			ln := func(step float64) float64 {
				changed, err := s.Alone(window, scenarios.Change{Entry: e.Entry, Value: plain(q.InUse * (1 + step))})
				if err != nil {
					t.Fatal(err)
				}
				r := newAsker(changed).judged()
				return math.Log(smoothUsable(&r))
			}
			const h = 1e-3
			want := (8*(ln(h)-ln(-h)) - (ln(2*h) - ln(-2*h))) / (12 * h)
			if math.Abs(e.Value-want) > 1e-5*math.Abs(want)+1e-6 {
				t.Errorf("%v: %s: %v, by differences %v", changes, e.Entry, e.Value, want)
			}
		}
		if !slices.IsSortedFunc(all, func(x, y Elasticity) int { return cmp.Compare(abs(y.Value), abs(x.Value)) }) {
			t.Errorf("%v: not the greatest first: %v", changes, all)
		}
	}
}

// TestElasticityAtAnOptimum: turning the window after the change makes no
// difference, but for its three digits.
func TestElasticityAtAnOptimum(t *testing.T) {
	s := read(t)
	for _, entry := range []string{"detectors.free_running.jitter_fwhm_ps", "source.pair_rate_hz", "source.state.tangle"} {
		held, _ := elasticityOf(s, entry)
		trial := newAsker(s).trialOf(entry)
		value := *trial.at
		ln := func(step float64) float64 {
			r := trial.with(value*(1+step), judged)
			return math.Log(r.rate.UsableBps)
		}
		const h = 0.02
		if turned := (ln(h) - ln(-h)) / (2 * h); math.Abs(turned-held) > 0.01*math.Abs(held)+1e-3 {
			t.Errorf("%s: %v with the window held, %v with it searched again", entry, held, turned)
		}
	}
}

// TestElasticityAtEnds of ranges, where there is one side only.
func TestElasticityAtEnds(t *testing.T) {
	s := read(t, append(quietLink, set{"duty_cycle", "1"}, set{"error_correction_f", "1"}, set{"detectors.free_running.efficiency", "1"})...)
	wantElasticity(t, s, "duty_cycle", 1, 1e-6)
	wantElasticity(t, s, "detectors.free_running.efficiency", 2, 1e-6)
	now := newAsker(s).judged()
	h := keyrate.BinaryEntropy(now.rate.QBER[keyrate.KeyBasis])
	wantElasticity(t, s, "error_correction_f", -h/(1-2*h), 1e-6)
}

// TestElasticityOfStairs: a dead time of exactly ten pulses has none, since
// the rate jumps there; nor has one between, where it does not move.
func TestElasticityOfStairs(t *testing.T) {
	for _, ns := range []string{"100", "105"} {
		s := parse(t, strings.Replace(base, "  max_pair_rate_hz: 2.0e+7\n", "", 1), set{"source.pulse_rate_hz", "1.0e+8"},
			set{"source.pairs_per_pulse", "0.02"}, set{"detectors.free_running.dead_time_ns", ns})
		if e, ok := elasticityOf(s, "detectors.free_running.dead_time_ns"); ok {
			t.Errorf("%s ns at 100 MHz: an elasticity of %v", ns, e)
		}
		if _, ok := elasticityOf(s, "source.pairs_per_pulse"); !ok {
			t.Error("pairs per pulse have none")
		}
	}
}

// TestElasticityLeftOut: entries at 0, settings, unused detectors; and all of
// them without a state or a key.
func TestElasticityLeftOut(t *testing.T) {
	all := newAsker(read(t, set{"window_ps", "600"})).elasticities()
	for _, e := range all {
		if e.Entry == "window_ps" || strings.HasPrefix(e.Entry, "detectors.nanowire") || strings.HasSuffix(e.Entry, "background_counts_hz") {
			t.Errorf("%s: %v", e.Entry, e.Value)
		}
	}
	for _, s := range []*scenarios.Scenario{
		parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1)),
		read(t, set{"arms.bob.length_km", "200"}),
	} {
		if all := newAsker(s).elasticities(); all == nil || len(all) > 0 {
			t.Errorf("without a rate: %v", all)
		}
	}
}
