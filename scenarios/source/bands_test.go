package source

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"pairspan/scenarios"
	"pairspan/sources"
)

func near(a, b, within float64) bool {
	return math.Abs(a-b) <= within*math.Max(math.Abs(a), math.Abs(b))
}

func mustJudge(t testing.TB, s *scenarios.Scenario, m *sources.SpectralMap) *BandJudge {
	t.Helper()
	j, err := NewBandJudge(s, m)
	if err != nil {
		t.Fatal(err)
	}
	return j
}

func mustDescribe(t testing.TB, m *sources.SpectralMap, s *scenarios.Scenario) *SpectralMap {
	t.Helper()
	r, err := DescribeSpectralMap(context.Background(), m, s, nil)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := json.Marshal(r); err != nil {
		t.Fatal(err)
	}
	return r
}

func mapFile(t testing.TB) *sources.SpectralMap {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("testdata", "map.csv"))
	if err != nil {
		t.Fatal(err)
	}
	return mapOf(t, string(text))
}

func mapOf(t testing.TB, text string) *sources.SpectralMap {
	t.Helper()
	m, err := sources.ReadSpectralMap(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// The example: narrower pass bands raise the tangle, cost pairs and make more
// key, up to a point.
func TestNarrowerBands(t *testing.T) {
	r := mustDescribe(t, mapFile(t), bandScenario(t))
	best, whole := r.Best, r.Whole
	if best == nil || !(best.OnLink.UsableRateBps > 1.2*whole.OnLink.UsableRateBps) || !(*best.Tangle > *whole.Tangle+0.1) || !(best.Share < 0.8) {
		t.Fatalf("best %+v, whole %+v", best, whole)
	}
	if len(r.ByWidth) != 15 || r.BandsCompared < 1000 || r.BandsCompared > 36*36 {
		t.Errorf("%d widths, %d bands", len(r.ByWidth), r.BandsCompared)
	}
	most := 0.0
	for k, b := range r.ByWidth {
		if n := b.Alice.Bins + b.Bob.Bins; n != 16-k {
			t.Errorf("place %d has %d bins", k, n)
		}
		if k > 0 && !(*b.Tangle > *r.ByWidth[k-1].Tangle-0.02) {
			t.Errorf("the tangle falls from %v to %v with %d bins", *r.ByWidth[k-1].Tangle, *b.Tangle, 16-k)
		}
		most = max(most, b.OnLink.UsableRateBps)
	}
	if most != best.OnLink.UsableRateBps {
		t.Errorf("the best gives %v, and the best of some width %v", best.OnLink.UsableRateBps, most)
	}
	if narrowest := r.ByWidth[14]; !(narrowest.OnLink.UsableRateBps < 0.5*most) {
		t.Errorf("a single bin gives %v of %v", narrowest.OnLink.UsableRateBps, most)
	}
	for _, words := range []string{"Pass bands of ", " give most key on this link: ", "They pass ", " instead of "} {
		if !strings.Contains(r.Sentence, words) {
			t.Errorf("%q has no %q", r.Sentence, words)
		}
	}
}

// On a link so bright that any band is full, and with a state that is the same
// everywhere, nothing is gained by a pass band unless pairs are too many.
func TestWholeMapCanBeBest(t *testing.T) {
	alike := inventedSource{bins: 4, stepNm: 0.4, centreNm: [2]float64{1548, 1552}, acrossNm: 0.75, pumpNm: 0.3, noise: 0.05}
	r := mustDescribe(t, alike.spectralMap(t), bandScenario(t, "length_km: 9", "length_km: 0.1"))
	if r.Best == nil || r.Best.Share < 0.999999 || !strings.HasPrefix(r.Sentence, "No narrower pass bands give more key on this link than all 4 x 4 bins: ") {
		t.Errorf("%s\n%+v", r.Sentence, r.Best)
	}
}

func TestMapWithoutKeyOrLink(t *testing.T) {
	m := mapFile(t)
	r := mustDescribe(t, m, bandScenario(t, variants["no key"]...))
	if r.Best != nil || len(r.ByWidth) != 15 || !strings.HasPrefix(r.Sentence, "No pair of pass bands gives a key on this link: ") {
		t.Errorf("%s\n%+v", r.Sentence, r.Best)
	}
	r = mustDescribe(t, m, nil)
	if r.Best != nil || r.Whole.OnLink != nil || len(r.ByWidth) != 0 || !strings.HasPrefix(r.Sentence, "The pairs of all 8 x 8 bins together have a tangle of ") {
		t.Errorf("%s\n%+v", r.Sentence, r)
	}
	shares := 0.0
	for _, b := range r.Bins {
		shares += b.Share
		if b.QBERLab == nil || b.QBERAligned == nil || !(b.QBERAligned.Key <= b.QBERLab.HV+1e-12) {
			t.Errorf("bin %+v", b)
		}
	}
	if !near(shares, 1, 1e-12) {
		t.Errorf("shares add up to %v", shares)
	}
}

// Tangles of several bins give no value at worst; a single bin's does.
func TestMapOfTangles(t *testing.T) {
	m := mapOf(t, "alice_nm,bob_nm,share,tangle\n1547.8,1552.2,0.5,0.9\n1548.2,1551.8,0.5,0.64\n")
	r := mustDescribe(t, m, bandScenario(t))
	whole := r.Whole
	c := (math.Sqrt(0.9) + 0.8) / 2
	if whole.Tangle != nil || whole.Fidelity != nil || whole.QBERLab != nil || !near(*whole.TangleAtMost, c*c, 1e-12) || !near(whole.QBERAligned.Key, (1-c)/3, 1e-12) {
		t.Errorf("the whole is %+v", whole)
	}
	on := whole.OnLink
	if on.UsableRateAtWorstBps != nil || !(*on.UsableRateAtBestBps > on.UsableRateBps && on.UsableRateBps > 0) {
		t.Errorf("on the link %+v", on)
	}
	narrow := r.ByWidth[1]
	if narrow.Tangle == nil || !near(*narrow.Tangle, 0.9, 1e-12) || narrow.OnLink.UsableRateAtWorstBps == nil || !(*narrow.OnLink.UsableRateAtWorstBps < narrow.OnLink.UsableRateBps) {
		t.Errorf("one bin is %+v, on the link %+v", narrow, narrow.OnLink)
	}
	if r.Known != Bounded || !strings.Contains(strings.Join(r.Told, " "), "no value at worst") {
		t.Errorf("%s: told %q", r.Known, r.Told)
	}
}

func TestLinksThatDoNotFitTheMap(t *testing.T) {
	m := mapOf(t, "alice_nm,bob_nm,share,tangle\n1547,1570,0.5,0.9\n1548,1571,0.5,0.64\n")
	_, err := DescribeSpectralMap(context.Background(), m, bandScenario(t), nil)
	const want = "the loss of G.652.D fibre at 1570 nm, in the middle of a pass band of Bob, is not known: state arms.bob.loss_db_per_km"
	if err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	r := mustDescribe(t, m, bandScenario(t, "length_km: 9", "length_km: 9, loss_db_per_km: 0.25"))
	if len(r.Doubts) != 1 || !strings.HasPrefix(r.Doubts[0], "The scenario's wavelength of Bob, 1552 nm, lies outside the map, 1569.5 to 1571.5 nm") {
		t.Errorf("doubts %q", r.Doubts)
	}
}

func TestMapProgressAndEnd(t *testing.T) {
	calls := 0
	if _, err := DescribeSpectralMap(context.Background(), mapFile(t), bandScenario(t), func(done, total int) {
		if calls++; done != calls || total != 36 {
			t.Errorf("%d of %d", done, total)
		}
	}); err != nil || calls != 36 {
		t.Errorf("%d calls, %v", calls, err)
	}
	ctx, stop := context.WithCancel(context.Background())
	stop()
	if _, err := DescribeSpectralMap(ctx, mapFile(t), bandScenario(t), nil); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
}
