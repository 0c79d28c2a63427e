package link

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// anyDetector draws a detector and the clicks per second that it is offered.
func anyDetector(t *rapid.T) (d Detector, clicks float64) {
	d = Detector{
		DeadTimeNs:   math.Pow(10, rapid.Float64Range(-1, 5).Draw(t, "dead time")),
		Afterpulsing: rapid.Float64Range(0, 0.9).Draw(t, "afterpulsing"),
	}
	return d, math.Pow(10, rapid.Float64Range(0, 9).Draw(t, "clicks"))
}

// A detector registers the clicks that find it live, and afterpulses are
// clicks too: m = (n₀ + p m)/(1 + (n₀ + p m) t).
func TestRespondIsItsOwnFixedPoint(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, clicks := anyDetector(t)
		m, live := d.Respond(clicks)
		offered := clicks + d.Afterpulsing*m
		if want := offered / (1 + offered*d.DeadTimeNs*1e-9); !near(m, want, 1e-13) {
			t.Errorf("registered %v, want %v", m, want)
		}
		if !near(offered*live, m, 1e-13) {
			t.Errorf("live share %v of %v clicks is not %v registered", live, offered, m)
		}
	})
}

func TestIncidentUndoesRespond(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, clicks := anyDetector(t)
		m, live := d.Respond(clicks)
		back, backLive := d.Incident(m)
		// A live share ℓ is found as 1 - m t, which leaves it 1e-16/ℓ.
		if tolerance := 1e-14 / live; !near(back, clicks, tolerance/(1-d.Afterpulsing)) || !near(backLive, live, tolerance) {
			t.Errorf("%v clicks, %v live come back as %v and %v", clicks, live, back, backLive)
		}
	})
	d := Detector{DeadTimeNs: 1000}
	for _, registered := range []float64{1e6, 2e6} { // dead all of the time
		if clicks, live := d.Incident(registered); !math.IsNaN(clicks) || !math.IsNaN(live) {
			t.Errorf("%v /s behind 1000 ns: %v clicks, %v live, want NaN", registered, clicks, live)
		}
	}
}

func TestRespondAtItsLimits(t *testing.T) {
	check := func(name string, d Detector, clicks, registered, live float64) {
		t.Helper()
		m, l := d.Respond(clicks)
		if !near(m, registered, 1e-12) || math.Abs(l-live) > 1e-12 {
			t.Errorf("%s: %v registered, %v live, want %v and %v", name, m, l, registered, live)
		}
	}
	check("nothing to register", Detector{DeadTimeNs: 50, Afterpulsing: 0.1}, 0, 0, 1)
	check("ideal", Detector{}, 1e7, 1e7, 1)
	// Each click has p afterpulses, each of those again: 1 + p + p² + ...
	check("no dead time", Detector{Afterpulsing: 0.2}, 4e5, 5e5, 1)
	check("no afterpulses", Detector{DeadTimeNs: 1000}, 3e6, 0.75e6, 0.25)
	// A flood of clicks leaves one count per dead time.
	check("flood", Detector{DeadTimeNs: 1000, Afterpulsing: 0.2}, 1e21, 1e6, 0)
}

// A source of pulses sees a dead time in whole pulses; nothing is lost between.
func TestGated(t *testing.T) {
	for _, row := range []struct{ pulseRateHz, deadTimeNs, gatedNs float64 }{
		{100e6, 8, 0}, {100e6, 10, 10}, {100e6, 59.9, 50}, {100e6, 0, 0}, {1e6, 10e3, 10e3}, {76e6, 3e9 / 76e6, 3e9 / 76e6},
	} {
		d := Detector{Efficiency: 0.5, DarkCountsHz: 3, JitterFWHMPs: 7, DeadTimeNs: row.deadTimeNs, Afterpulsing: 0.01}
		got := d.Gated(row.pulseRateHz)
		if !near(got.DeadTimeNs, row.gatedNs, 1e-12) {
			t.Errorf("%v ns at %v Hz: %v ns, want %v", row.deadTimeNs, row.pulseRateHz, got.DeadTimeNs, row.gatedNs)
		}
		if got.DeadTimeNs = d.DeadTimeNs; got != d {
			t.Errorf("%+v: more than the dead time changed: %+v", d, got)
		}
	}
}

// observe lets a detector meet clicks at random times, one by one, and returns
// what it registered and the share of the time in which it was live. Each
// count is followed, with probability p, by an afterpulse up to 100 µs later.
func observe(d Detector, clicksHz, seconds float64, r *rand.Rand) (registered int, live float64) {
	const afterS = 100e-6
	dead := d.DeadTimeNs * 1e-9
	var afterpulses []float64 // still to come
	liveS, from := 0.0, 0.0   // live since
	next := r.ExpFloat64() / clicksHz
	for {
		now, which := next, -1
		for i, at := range afterpulses {
			if at < now {
				now, which = at, i
			}
		}
		if now >= seconds {
			return registered, (liveS + max(0, seconds-from)) / seconds
		}
		if which < 0 {
			next += r.ExpFloat64() / clicksHz
		} else {
			last := len(afterpulses) - 1
			afterpulses[which] = afterpulses[last]
			afterpulses = afterpulses[:last]
		}
		if now < from {
			continue // lost in dead time
		}
		registered++
		liveS += now - from
		from = now + dead
		if r.Float64() < d.Afterpulsing {
			afterpulses = append(afterpulses, now+r.Float64()*afterS)
		}
	}
}

// The seed was chosen once. The counts' deviation is that of a Poisson number,
// which dead time makes smaller and afterpulses larger, by 1/(1-p) at most.
func TestRespondAgainstClicksOneByOne(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for _, row := range []struct {
		d        Detector
		clicksHz float64
	}{
		{Detector{DeadTimeNs: 50}, 1e6},
		{Detector{DeadTimeNs: 1000}, 5e5},
		{Detector{Afterpulsing: 0.3}, 2e5},
		{Detector{DeadTimeNs: 200, Afterpulsing: 0.1}, 1e6},
		{Detector{DeadTimeNs: 400, Afterpulsing: 0.05}, 8e6},
		{Detector{DeadTimeNs: 100, Afterpulsing: 0.2}, 3e5},
	} {
		seconds := 2e5 / row.clicksHz
		n, live := observe(row.d, row.clicksHz, seconds, r)
		m, wantLive := row.d.Respond(row.clicksHz)
		counts := m * seconds
		sigma := math.Sqrt(counts) / (1 - row.d.Afterpulsing)
		if math.Abs(float64(n)-counts) > 3*sigma {
			t.Errorf("%+v at %v /s: %d counts, want %.0f ± %.0f", row.d, row.clicksHz, n, counts, sigma)
		}
		if math.Abs(live-wantLive) > 3*sigma*row.d.DeadTimeNs*1e-9/seconds+1e-12 {
			t.Errorf("%+v at %v /s: live share %v, want %v", row.d, row.clicksHz, live, wantLive)
		}
	}
}
