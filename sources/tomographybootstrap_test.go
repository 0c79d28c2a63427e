package sources

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"runtime"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat"
)

func listed(rho DensityMatrix) []float64 { return rho.Figures().List() }

// scatterState is a state as a good source makes it, far enough from the edge of
// what is physical that its figures scatter evenly.
var scatterState = mixed(0.1, Dephased(0.9), AtWorstState(0.2))

// Bootstrap foretells how the figures scatter over repetitions of the whole
// measurement. Each of both deviations is good to 1/√(2·400) = 3.5 %, and the
// one fit that the bootstrap stands on is off too.
func TestBootstrapForetellsScatter(t *testing.T) {
	const repetitions = 400
	settings := combinations("HVDARL")
	counts := settings.simulated(scatterState, 2000, 1000)
	sd, err := counts.Bootstrap(context.Background(), fitOf(t, counts), repetitions, BootstrapSeed, listed, nil)
	if err != nil {
		t.Fatal(err)
	}
	columns := make([][]float64, len(sd))
	for seed := range uint64(repetitions) {
		for i, x := range listed(fitOf(t, settings.simulated(scatterState, 2000, seed)).Rho) {
			columns[i] = append(columns[i], x)
		}
	}
	for i, column := range columns {
		near(t, fmt.Sprintf("ratio of the deviations of figure %d", i), sd[i]/stat.StdDev(column, nil), 1, 0.2)
	}
}

// The number of cores does not change a bit, the seed does.
func TestBootstrapIsReproducible(t *testing.T) {
	counts := combinations("HVDR").simulated(scatterState, 500, 2)
	fit := fitOf(t, counts)
	run := func(cores int, seed uint64) []float64 {
		defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(cores))
		sd, err := counts.Bootstrap(context.Background(), fit, 30, seed, listed, nil)
		if err != nil {
			t.Fatal(err)
		}
		return sd
	}
	one := run(1, 5)
	if eight := run(8, 5); !slices.Equal(one, eight) {
		t.Errorf("one core gives %v, eight give %v", one, eight)
	}
	if other := run(1, 6); slices.Equal(one, other) {
		t.Error("another seed gives the same")
	}
}

// Four times the counts, half the deviation.
func TestDeviationsFallWithCounts(t *testing.T) {
	var sd [2]Figures
	for i, total := range []float64{2000, 8000} {
		counts := combinations("HVDARL").exact(scatterState, total)
		var err error
		if sd[i], err = counts.FigureDeviations(context.Background(), fitOf(t, counts), 400, 1, nil); err != nil {
			t.Fatal(err)
		}
	}
	near(t, "tangle", sd[0].Tangle/sd[1].Tangle, 2, 0.3)
	near(t, "secret fraction", sd[0].SecretFraction.Aligned/sd[1].SecretFraction.Aligned, 2, 0.3)
}

// A figure known in closed form: of one setting's counts n the error of
// Tr(ρ P)·N is √n; by the total of HH, HV, VH, VV, each measured alone, that of
// the share of HH is √(p (1 − p)/n), as for a coin. Sixteen settings give it
// without help of the others if the state is not on the edge.
func TestDeviationOfAShare(t *testing.T) {
	counts := combinations("HVDR").exact(mixed(0.5, bell(1, 1), Werner(0)), 4000)
	sd, err := counts.Bootstrap(context.Background(), fitOf(t, counts), 2000, 3, func(rho DensityMatrix) []float64 { return []float64{real(rho[0][0])} }, nil)
	if err != nil {
		t.Fatal(err)
	}
	p := 0.5*0.5 + 0.5*0.25
	near(t, "deviation over its value", sd[0]/math.Sqrt(p*(1-p)/4000), 1, 4/math.Sqrt(2*2000))
}

func TestBootstrapProgressAndInterrupt(t *testing.T) {
	counts := combinations("HVDR").simulated(scatterState, 500, 2)
	fit := fitOf(t, counts)
	var seen []int
	_, err := counts.Bootstrap(context.Background(), fit, 20, 1, listed, func(done int) { seen = append(seen, done) })
	if err != nil || len(seen) != 20 || !slices.IsSorted(seen) || seen[19] != 20 {
		t.Errorf("progress %v, %v", seen, err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	last := 0
	sd, err := counts.Bootstrap(ctx, fit, 100_000, 1, listed, func(done int) {
		if last = done; done == 10 {
			cancel()
		}
	})
	if !errors.Is(err, context.Canceled) || sd != nil || last > 10+runtime.GOMAXPROCS(0) {
		t.Errorf("after %d draws: %v, %v", last, sd, err)
	}
}

func TestBootstrapErrors(t *testing.T) {
	counts := combinations("HVDR").simulated(scatterState, 500, 2)
	fit := fitOf(t, counts)
	for _, row := range []struct {
		counts Counts
		draws  int
		want   string
	}{
		{counts, 1, "1 draws are outside 2 to 100000; some 200 are enough for error bars"},
		{counts, 100_001, "100001 draws are outside 2 to 100000; some 200 are enough for error bars"},
		{combinations("HVDARL"), 200, "the fit has 16 settings and the counts have 36; give the fit of these counts"},
	} {
		_, err := row.counts.Bootstrap(context.Background(), fit, row.draws, 1, listed, nil)
		expect(t, fmt.Sprint(err), row.want)
	}
	// Two counts in all: some repetition has none.
	few := combinations("HVDR")
	few.Settings[0].Counts, few.Settings[5].Counts = 1, 1
	_, err := few.Bootstrap(context.Background(), fitOf(t, few), 200, 1, listed, nil)
	expect(t, fmt.Sprint(err), "in a simulated repetition of the measurement the accidentals explain all counts: no pairs are left; check the column accidentals: it holds a number for each setting's whole time, not a rate")
}

// Value ± one deviation covers the truth in 68.3 % of measurements, ± 1.96 in
// 95 %: both within three binomial deviations. Slow, hence only on demand.
func TestCoverage(t *testing.T) {
	if os.Getenv("PAIRSPAN_SLOW") == "" {
		t.Skip("set PAIRSPAN_SLOW=1 to run it")
	}
	const measurements = 200
	truth := listed(scatterState)
	names := []string{"tangle", "concurrence", "fidelity", "purity", "entropy", "linear entropy", "entanglement of formation", "CHSH"}
	within := make([][2]int, len(truth))
	for seed := range uint64(measurements) {
		counts := combinations("HVDARL").simulated(scatterState, 5000, seed)
		fit := fitOf(t, counts)
		sd, err := counts.Bootstrap(context.Background(), fit, BootstrapDraws, BootstrapSeed, listed, nil)
		if err != nil {
			t.Fatal(err)
		}
		for i, x := range listed(fit.Rho) {
			for k, bars := range []float64{1, 1.96} {
				if math.Abs(x-truth[i]) <= bars*sd[i] {
					within[i][k]++
				}
			}
		}
	}
	for i, name := range names {
		for k, p := range []float64{0.683, 0.95} {
			near(t, name, float64(within[i][k]), p*measurements, 3*math.Sqrt(p*(1-p)*measurements))
		}
	}
}
