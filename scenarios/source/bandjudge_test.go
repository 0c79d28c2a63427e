package source

import (
	"math"
	"math/rand/v2"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// variants are links of all kinds for the invented source.
var variants = map[string][]string{
	"continuous":      nil,
	"far":             {"length_km: 9", "length_km: 55"},
	"no key":          {"length_km: 9", "length_km: 140"},
	"window fixed":    {"window_ps: auto", "window_ps: 350"},
	"pump free":       {"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 3.0e+7"},
	"share free":      {"window_ps: auto", "window_ps: auto\nkey_basis_share: auto"},
	"blocks":          {"window_ps: auto", "window_ps: auto\nfinite_key: { sifted_bits_per_block: 3.0e+4, epsilon_total: 1.0e-10 }"},
	"small blocks":    {"window_ps: auto", "window_ps: auto\nfinite_key: { sifted_bits_per_block: 1000, epsilon_total: 1.0e-10 }"},
	"pulsed":          {"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 5.0e+7\n  pairs_per_pulse: 0.05\n  schmidt_number: 3"},
	"pulsed, Poisson": {"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 5.0e+7\n  pairs_per_pulse: 0.05"},
	"bright":          {"pair_rate_hz: 2.0e+6", "pair_rate_hz: 2.0e+8\n  unpaired_photons_hz: { alice: 1.0e+6, bob: 0 }"},
	"pump free, blocks": {
		"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 1.0e+8",
		"window_ps: auto", "window_ps: auto\nfinite_key: { sifted_bits_per_block: 1.0e+5, epsilon_total: 1.0e-10 }",
	},
	"pump free, pulsed":  {"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: auto\n  max_pairs_per_pulse: 0.5"},
	"pump free, thermal": {"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: auto\n  max_pairs_per_pulse: 0.5\n  schmidt_number: 1.5"},
	"pump and share free": {
		"pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 1.0e+8", "window_ps: auto", "window_ps: auto\nkey_basis_share: auto",
	},
	"counted": {
		"pair_rate_hz: 2.0e+6", "counted: { singles_hz: { alice: 3.0e+4, bob: 2.8e+4 }, coincidences_hz: 1500, window_ps: 800, background_hz: { alice: 900, bob: 900 }, detector: { alice: free_running, bob: free_running } }",
		"fixed_loss_db: 4.5", "fixed_loss_db: from_counts",
	},
}

// filtered is the scenario behind a pair of pass bands, put together in the
// scenario's own terms.
func filtered(t testing.TB, s *scenarios.Scenario, m *sources.SpectralMap, b sources.Band) *scenarios.Scenario {
	t.Helper()
	rate := s.Setting().PairRateHz
	c := s.Clone()
	for arm := range c.Arms {
		c.Arms[arm].FixedLossDB, c.Arms[arm].FixedLossFromCounts = float64(s.FixedLoss(arm)), false
		c.Source.UnpairedHz[arm] += rate * b.UnpairedShare[arm]
		c.Source.BandwidthFWHMNm[arm] = s.Bandwidth(arm)
		if b.WidthNm(arm) > 0 {
			c.Source.WavelengthNm[arm], c.Source.BandwidthFWHMNm[arm] = b.CentreNm(arm), b.WidthNm(arm)
		}
	}
	c.Source.Counted.Used = false
	c.Source.PairRateHz = rate * b.Share
	c.Source.PairsPerPulse *= b.Share
	rho, ok := m.Mixture(b.First, b.Last)
	if !ok {
		t.Fatal("a band without pairs")
	}
	c.Source.State = sources.FromDensityMatrix(rho)
	return c
}

// A band on a link is a scenario in whose source the band is built in, asked as
// any scenario is. (A few thermal modes have other statistics.)
func TestBandsAreScenarios(t *testing.T) {
	m := mapFile(t)
	for _, name := range []string{"continuous", "far", "window fixed", "share free", "blocks", "bright", "counted", "pulsed, Poisson"} {
		s := bandScenario(t, variants[name]...)
		j := mustJudge(t, s, m)
		for _, b := range []sources.Band{m.Whole(), m.Band([2]int{1, 2}, [2]int{5, 5}), m.Band([2]int{3, 3}, [2]int{3, 4})} {
			c := filtered(t, s, m, b)
			l := c.Link(c.DistanceKm(), sources.Nominal)
			r := l.Key(c.Settle(&l, c.Setting()))
			if got := j.Worth(b); r.UsableBps > 0 && !near(got, r.UsableBps, 1e-9) || r.UsableBps == 0 && got > 0 {
				t.Errorf("%s: bins %v to %v give %v bit/s, and %v as a scenario", name, b.First, b.Last, got, r.UsableBps)
			}
		}
	}
	// Without parted pairs the pump's search is the scenario's too.
	s, whole := bandScenario(t, variants["pump free"]...), m.Whole()
	c := filtered(t, s, m, whole)
	c.Source.PumpAuto = true
	l := c.Link(c.DistanceKm(), sources.Nominal)
	r := l.Key(c.Settle(&l, c.Setting()))
	if got := mustJudge(t, s, m).Worth(whole); !near(got, r.UsableBps, 1e-9) {
		t.Errorf("pump free: the whole gives %v bit/s, and %v as a scenario", got, r.UsableBps)
	}
}

// The parts of a link that a band changes are those of the scenario with the
// band's wavelengths and widths, pulsed or not.
func TestBandLinks(t *testing.T) {
	m := mapFile(t)
	for name, changes := range variants {
		s := bandScenario(t, changes...)
		j := mustJudge(t, s, m)
		for _, b := range []sources.Band{m.Whole(), m.Band([2]int{1, 4}, [2]int{6, 4}), m.Band([2]int{0, 5}, [2]int{0, 7})} {
			c := filtered(t, s, m, b)
			want, through := c.Link(c.DistanceKm(), sources.Nominal), b.Parting()
			got := j.link(&b)
			for arm := range got.Arms {
				x, y := got.Arms[arm], want.Arms[arm]
				if !near(x.Transmittance, y.Transmittance*through.Passes[arm], 1e-12) || !near(x.PMDError, y.PMDError, 1e-12) ||
					!near(x.SpreadFWHMPs, y.SpreadFWHMPs, 1e-12) || !near(x.UnpairedHz*through.Passes[arm], s.Source.UnpairedHz[arm], 1e-12) {
					t.Errorf("%s: bins %v to %v: arm %d is %+v, want %+v", name, b.First, b.Last, arm, x, y)
				}
			}
			if !near(got.SpreadFWHMPs, want.SpreadFWHMPs, 1e-12) {
				t.Errorf("%s: bins %v to %v: spread %v, want %v", name, b.First, b.Last, got.SpreadFWHMPs, want.SpreadFWHMPs)
			}
		}
	}
}

// Of Poisson light, pairs that lose photons independently are pairs and single
// photons that come independently: in a slot the singles act as noise of the
// same mean. That holds in a pulse as well.
func TestPartingIsUnpairedLight(t *testing.T) {
	b := sources.Band{Share: 0.3, UnpairedShare: [2]float64{0.25, 0.1}}
	through := b.Parting()
	for _, mu := range []float64{1e-6, 0.01, 0.5} {
		eta, noise := [2]float64{0.2, 0.05}, [2]float64{1e-5, 3e-4}
		apart := keyrate.Slot{Pairs: mu * b.Share, Efficiency: eta, Noise: noise, Share: 0.8, Error: 0.02, Modes: math.Inf(1)}
		for arm := range eta {
			apart.Noise[arm] += mu * b.UnpairedShare[arm] * eta[arm] / 2
		}
		lossy := keyrate.Slot{
			Pairs: mu * through.Pairs, Efficiency: [2]float64{eta[0] * through.Passes[0], eta[1] * through.Passes[1]},
			Noise: noise, Share: 0.8, Error: 0.02, Modes: math.Inf(1),
		}
		q1, e1 := apart.Click()
		q2, e2 := lossy.Click()
		if !near(q1, q2, 1e-12) || !near(e1, e2, 1e-12) {
			t.Errorf("at %g pairs a slot: %v, %v apart, and %v, %v as losses", mu, q1, e1, q2, e2)
		}
	}
}

// A single bin has no width, and a map of one is the scenario with that state.
func TestSingleBinIsTheScenario(t *testing.T) {
	m := mapOf(t, "alice_nm,bob_nm,share,row,col,re,im\n"+
		"1550,1550,1,0,0,0.5,0\n1550,1550,1,0,1,0,0\n1550,1550,1,0,2,0,0\n1550,1550,1,0,3,0.47,0\n1550,1550,1,1,1,0,0\n"+
		"1550,1550,1,1,2,0,0\n1550,1550,1,1,3,0,0\n1550,1550,1,2,2,0,0\n1550,1550,1,2,3,0,0\n1550,1550,1,3,3,0.5,0\n")
	for name, changes := range variants {
		s := bandScenario(t, changes...)
		c := s.Clone()
		c.Source.State = sources.FromDensityMatrix(m.Bins[0][0].Rho)
		c.Source.WavelengthNm = [2]float64{1550, 1550}
		c.Source.BandwidthFWHMNm[1] = s.Bandwidth(1)
		l := c.Link(c.DistanceKm(), sources.Nominal)
		r := l.Key(c.Settle(&l, c.Setting()))
		got := mustDescribe(t, m, s)
		if rate := got.Whole.OnLink.UsableRateBps; rate != r.UsableBps && !near(rate, r.UsableBps, 1e-6) {
			t.Errorf("%s: %v bit/s, want %v", name, rate, r.UsableBps)
		}
		if got.BandsCompared != 1 || got.Whole.Alice.WidthNm != nil || got.Whole.Share != 1 {
			t.Errorf("%s: %+v", name, got)
		}
	}
}

// A pump that is free but held back by a low ceiling is a pump at the ceiling;
// with bands that part most pairs the parting makes more pairs than the source.
func TestPumpAtItsCeiling(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 2))
	u, keys := draws(random.Float64), 0
	for range 800 {
		j, b := u.band()
		b.Share, b.UnpairedShare = 0.02, [2]float64{0.3 * u(), 0.3}
		j.setup.PairRateHz *= 1e-3
		fixed := *j
		j.free.MaxPairRateHz = j.setup.PairRateHz
		_, p := j.setting(&b)
		if p.PairRateHz < j.setup.PairRateHz {
			continue
		}
		if got, want := j.Worth(b), fixed.Worth(b); want > 0 && !near(got, want, 1e-12) {
			t.Errorf("%v with the pump free, %v at its ceiling", got, want)
		} else if want > 0 {
			keys++
		}
	}
	if keys < 50 {
		t.Errorf("only %d bands with a key at the ceiling", keys)
	}
}
