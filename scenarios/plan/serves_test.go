package plan

import (
	"math"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

const (
	needed100 = "need: { secret_rate_bps: 100 }\n"
	aBlock    = "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"
)

// servedLinks are scenarios that between them have every kind of question.
var servedLinks = []struct {
	name    string
	changes []set
	edit    [2]string
}{
	{"met", nil, [2]string{}},
	{"not met", nil, [2]string{"bps: 100", "bps: 1200"}},
	{"no need", nil, [2]string{needed100, ""}},
	{"fixed window", []set{{"window_ps", "600"}}, [2]string{}},
	{"concurrence", []set{{"source.state", "{ concurrence: 0.93 }"}}, [2]string{}},
	{"fidelity", []set{{"source.state", "{ fidelity: 0.95, measured_car: 60 }"}}, [2]string{}},
	{"visibilities", []set{{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}, {"key_basis_share", "0.8"}}, [2]string{}},
	{"two detectors", []set{{"arms.bob.detector", "nanowire"}, {"arms.bob.background_counts_hz", "50"}}, [2]string{}},
	{"measured run", []set{{"arms.bob.measured_loss_db", "3.1"}}, [2]string{}},
	{"finite", []set{{"finite_key", aBlock}}, [2]string{}},
	{"pump searched", []set{{"source.pair_rate_hz", "auto"}}, [2]string{}},
	{"pulsed", []set{{"source.pulse_rate_hz", "1.0e+8"}, {"source.pairs_per_pulse", "0.02"}}, [2]string{"  max_pair_rate_hz: 2.0e+7\n", ""}},
}

// put reads a scenario again with an answer in place.
func put(t *testing.T, s *scenarios.Scenario, entry string, value float64) *asker {
	t.Helper()
	changed, err := newAsker(s).changed(entry, plain(value))
	if err != nil {
		t.Fatalf("%s put back as %v: %v", entry, value, err)
	}
	return newAsker(changed)
}

// judgedAt asks a scenario at its installed distance.
func (a *asker) judged() reply { return a.at(a.s.DistanceKm(), judged, nil) }

// TestServesPutBack puts every answer back into the file: it meets the need,
// by no more than a millionth of it, or one bit a block; and a little further
// does not.
func TestServesPutBack(t *testing.T) {
	for _, row := range servedLinks {
		s := parse(t, strings.Replace(base, row.edit[0], row.edit[1], 1), row.changes...)
		answers, err := newAsker(s).serves(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		values := 0
		for _, v := range answers {
			if v.Value == nil {
				continue
			}
			values++
			a := put(t, s, v.Entry, *v.Value)
			got := a.judged()
			if !a.meets(got) {
				t.Errorf("%s: %s %s %v gives only %v", row.name, v.Bound, v.Entry, *v.Value, got.rate.UsableBps)
			}
			if over := got.rate.UsableBps - a.need; a.need > 0 && over > tolerated(&got, a.need) && !stairs(s, v.Entry) {
				t.Errorf("%s: %s %s %v gives %v too much", row.name, v.Bound, v.Entry, *v.Value, over)
			}
			const little = 1e-5
			further := *v.Value * (1 + little)
			if v.Bound == least {
				further = *v.Value * (1 - little)
			}
			if b := put(t, s, v.Entry, further); b.meets(b.judged()) {
				t.Errorf("%s: %s %s is %v, and yet %v does", row.name, v.Bound, v.Entry, *v.Value, further)
			}
		}
		if values < 4 {
			t.Errorf("%s: only %d of %d questions have a value", row.name, values, len(answers))
		}
	}
}

// tolerated is a millionth of the need, and one bit of each block.
func tolerated(r *reply, need float64) float64 {
	tolerance := 1e-6 * need
	if bits := r.link.BlockBits; bits > 0 {
		tolerance += r.link.DutyCycle * r.rate.SiftedBps() / bits
	}
	return tolerance
}

// stairs reports whether the rate falls in steps with an entry: a dead time
// counts in whole pulses.
func stairs(s *scenarios.Scenario, entry string) bool {
	return s.Pulsed() && strings.HasSuffix(entry, "dead_time_ns")
}

// TestServesFarthest looks for values beyond the answers that serve too, on a
// fine grid up to the end of the range.
func TestServesFarthest(t *testing.T) {
	for _, row := range servedLinks[:4] {
		a := newAsker(parse(t, strings.Replace(base, row.edit[0], row.edit[1], 1), append(row.changes, set{"window_ps", "600"})...))
		for _, q := range a.questions() {
			v := a.serve(q)
			end, _ := a.s.Quantity(q.entry)
			beyond := end.Hi
			if q.bound == least {
				beyond = end.Lo
			}
			if v.Reason != nil && *v.Reason == everyValueDoes {
				continue
			}
			from := end.Hi + end.Lo - beyond // no value does: the whole range
			if v.Value != nil {
				from = *v.Value
			}
			trial := a.trialOf(q.entry)
			for i := 1; i <= 2000; i++ {
				x := from + (beyond-from)*float64(i)/2000
				if i%2 == 0 && from > 0 { // and close to the answer
					x = from * math.Pow(max(beyond, from*1e-6)/from, float64(i)/2000)
				}
				if trial.meets(trial.with(x, judged)) {
					t.Errorf("%s: %s %s is %v, and yet %v does", row.name, q.bound, q.entry, v.Value, x)
					break
				}
			}
		}
	}
}

// serveOf answers one question of a scenario.
func serveOf(t *testing.T, s *scenarios.Scenario, entry string) Serve {
	t.Helper()
	a := newAsker(s)
	for _, q := range a.questions() {
		if q.entry == entry {
			return a.serve(q)
		}
	}
	t.Fatalf("%s is not asked for", entry)
	return Serve{}
}

// TestServesNone names the reasons for a null.
func TestServesNone(t *testing.T) {
	reason := func(entry, edit, by string, changes ...set) string {
		v := serveOf(t, parse(t, strings.Replace(base, edit, by, 1), changes...), entry)
		switch {
		case (v.Value == nil) == (v.Reason == nil):
			t.Errorf("%s: %v and %v", entry, v.Value, v.Reason)
		case v.Reason != nil:
			return *v.Reason
		}
		return plain(*v.Value)
	}
	const need, far = "secret_rate_bps: 100", "secret_rate_bps: 1.0e+9"
	for _, q := range newAsker(read(t)).questions() {
		// A pump without ceiling reaches nothing either, since blind detectors count no more.
		if got := reason(q.entry, need, far); got != noValueDoes {
			t.Errorf("%s for a need out of reach: %s", q.entry, got)
		}
	}
	// Without noise and errors but the state's, any key is left however little light arrives.
	quiet := []set{{"detectors.free_running.dark_counts_hz", "0"}, {"arms.alice.misalignment_error", "0"}, {"arms.bob.misalignment_error", "0"}}
	if got := reason("detectors.free_running.efficiency", needed100, "", quiet...); got != everyValueDoes {
		t.Errorf("without noise and need, an efficiency of %s", got)
	}
	if got := reason("source.pair_rate_hz", needed100, "", quiet...); got != everyValueDoes {
		t.Errorf("without noise and need, a pair rate of %s", got)
	}
	lossless := []set{{"arms.bob.loss_db_per_km", "0"}, {"arms.bob.dispersion_ps_per_nm_km", "0"}, {"arms.bob.pmd_ps_per_sqrt_km", "0"}}
	if got := reason("arms.bob.length_km", need, need, lossless...); got != everyValueDoes {
		t.Errorf("fibre without loss: %s km", got)
	}
}

// TestServesTwoDeadTimes: where many afterpulses drown the key, a long dead
// time makes fewer of them and serves; a short one does not. The answer is the
// greatest that serves.
func TestServesTwoDeadTimes(t *testing.T) {
	s := read(t, set{"window_ps", "1000"}, set{"source.pair_rate_hz", "2.0e+7"}, set{"source.state.tangle", "0.95"},
		set{"arms.alice.fixed_loss_db", "0"}, set{"arms.bob.fixed_loss_db", "0"},
		set{"detectors.free_running.afterpulsing", "0.95"})
	v := serveOf(t, s, "detectors.free_running.dead_time_ns")
	if v.Value == nil {
		t.Fatalf("%+v", v)
	}
	met := func(ns float64) bool { a := put(t, s, v.Entry, ns); return a.meets(a.judged()) }
	if met(0) || !met(*v.Value) || met(*v.Value*1.001) {
		t.Errorf("%v ns; none at all serves: %v, a little more: %v", *v.Value, met(0), met(*v.Value*1.001))
	}
}

// TestServesBrightSource: a pump far too strong does not serve, but the least
// that does is found below it, however narrow the range that serves.
func TestServesBrightSource(t *testing.T) {
	s := read(t, set{"window_ps", "600"}, set{"source.max_pair_rate_hz", "1.0e+12"})
	l := s.Link(s.DistanceKm(), newAsker(s).members(judged)[0])
	p := l.Best(s.Setting(), keyrate.Free{MaxPairRateHz: 1e9})
	most := l.Key(p).UsableBps
	for _, part := range []float64{0.5, 0.99, 0.9999} {
		text := strings.Replace(base, "secret_rate_bps: 100", "secret_rate_bps: "+plain(part*most), 1)
		v := serveOf(t, parse(t, text, set{"window_ps", "600"}, set{"source.max_pair_rate_hz", "1.0e+12"}, set{"source.pair_rate_hz", "1.0e+12"}), "source.pair_rate_hz")
		if v.Value == nil || !(*v.Value < p.PairRateHz) {
			t.Errorf("%v of the best rate, which is at %v pairs/s: %v", part, p.PairRateHz, v.Value)
		}
	}
}

// TestServesQuestions: a detector in both arms is one number, and both arms
// are asked where both lengthen.
func TestServesQuestions(t *testing.T) {
	count := func(part string, text string, changes ...set) (n int) {
		for _, q := range newAsker(parse(t, text, changes...)).questions() {
			if strings.Contains(q.entry, part) {
				n++
			}
		}
		return n
	}
	both := strings.Replace(base, "distance: {", "distance: { lengthen: both,", 1)
	bare := strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1)
	for _, row := range []struct {
		got, want int
		what      string
	}{
		{count("efficiency", base), 1, "efficiencies of one detector in both arms"},
		{count("efficiency", base, set{"arms.bob.detector", "nanowire"}), 2, "efficiencies of two"},
		{count("length_km", base), 1, "lengths"},
		{count("length_km", both), 2, "lengths where both lengthen"},
		{count("", bare), 1, "questions without a state"},
	} {
		if row.got != row.want {
			t.Errorf("%s: %d, want %d", row.what, row.got, row.want)
		}
	}
}

// TestServesAgree with the answer, where it says the same another way.
func TestServesAgree(t *testing.T) {
	c := filed(t)
	for _, v := range c.Serves {
		var want float64
		switch v.Entry {
		case "arms.bob.length_km":
			want = *c.Answer.ReachKm
		case "arms.bob.fixed_loss_db":
			want = 4.2 + *c.Answer.MarginDB
		default:
			continue
		}
		if math.Abs(*v.Value-want) > 1e-6 {
			t.Errorf("%s: %v, the answer says %v", v.Entry, *v.Value, want)
		}
	}
	text := strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1)
	unknown := answeredCase(parse(t, text)).Answer
	if v := serveOf(t, parse(t, text), tangleEntry); v.Stated != nil || math.Abs(*v.Value-*unknown.LeastTangle) > 1e-8 {
		t.Errorf("an unknown state: %v, the answer says %v", *v.Value, *unknown.LeastTangle)
	}
}

// TestServesCounted: a source that was counted is asked for its pair rate, and
// the collection loss that the counts tell stays.
func TestServesCounted(t *testing.T) {
	text := strings.Replace(base, "  pair_rate_hz: 2.0e+6\n  max_pair_rate_hz: 2.0e+7\n",
		"  counted: { singles_hz: { alice: 31000, bob: 29000 }, coincidences_hz: 2500, window_ps: 1000, background_hz: { alice: 1200, bob: 1200 }, detector: { alice: free_running, bob: free_running } }\n", 1)
	s := parse(t, text, set{"arms.bob.fixed_loss_db", "from_counts"}, set{"arms.alice.fixed_loss_db", "from_counts"})
	v := serveOf(t, s, "source.pair_rate_hz")
	emission, _ := s.Emission()
	if v.Value == nil || *v.Stated != emission.PairRateHz {
		t.Fatalf("%+v, emission %v", v, emission.PairRateHz)
	}
	stated := parse(t, base, set{"source.max_pair_rate_hz", "1.0e+12"}, set{"source.pair_rate_hz", plain(*v.Value)},
		set{"arms.alice.fixed_loss_db", plain(float64(s.FixedLoss(0)))}, set{"arms.bob.fixed_loss_db", plain(float64(s.FixedLoss(1)))})
	if a := newAsker(stated); math.Abs(a.judged().rate.UsableBps/a.need-1) > 1e-6 {
		t.Errorf("put back it gives %v of %v", a.judged().rate.UsableBps, a.need)
	}
}
