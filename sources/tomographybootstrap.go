package sources

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"gonum.org/v1/gonum/stat/distuv"
)

// The number of draws and the seed that a bootstrap has unless told otherwise.
const (
	BootstrapDraws = 200
	BootstrapSeed  = 1
)

const maxDraws = 100_000

// Bootstrap returns one standard deviation of each figure of the fitted state:
// parametric bootstrap ([1]). Each of the draws, 2 to 100,000, repeats the
// measurement with Poisson counts about those that the fit expects and fits a
// state to them; the figures of these states scatter as those of real
// repetitions would. Of D draws the deviations are good to 1/√(2D), 5 % at 200.
//
// Draw k has a generator of its own, PCG with the given seed and stream k, so
// that neither order nor number of cores changes a bit of the result. The draws
// are shared out over the cores: figures is called by several at once, and must
// return a list of the same length for every state. A figure that is NaN for
// some state has the deviation NaN. progress, unless nil, is told the number of
// draws done, by one at a time and rising.
//
// When the context ends first its error is returned. A draw without pairs, or
// one that cannot be fitted, is an error.
//
// [1] Efron, Tibshirani (1993). "An Introduction to the Bootstrap". Chapman & Hall, chapter 6.
func (c Counts) Bootstrap(ctx context.Context, fit Fit, draws int, seed uint64, figures func(DensityMatrix) []float64, progress func(done int)) ([]float64, error) {
	results := make([][]float64, max(0, min(draws, maxDraws)))
	err := c.repetitions(ctx, fit, draws, seed, func(k int, rho DensityMatrix) { results[k] = figures(rho) }, progress)
	if err != nil {
		return nil, err
	}
	return deviations(results), nil
}

// Repetitions returns the states that are fitted to the draws of Bootstrap, in
// their order.
func (c Counts) Repetitions(ctx context.Context, fit Fit, draws int, seed uint64, progress func(done int)) ([]DensityMatrix, error) {
	states := make([]DensityMatrix, max(0, min(draws, maxDraws)))
	err := c.repetitions(ctx, fit, draws, seed, func(k int, rho DensityMatrix) { states[k] = rho }, progress)
	return states, err
}

// repetitions hands over the state fitted to each draw, with its number, to
// several at once.
func (c Counts) repetitions(ctx context.Context, fit Fit, draws int, seed uint64, take func(k int, rho DensityMatrix), progress func(done int)) error {
	if draws < 2 || draws > maxDraws {
		return fmt.Errorf("%d draws are outside 2 to %d; some 200 are enough for error bars", draws, maxDraws)
	}
	if len(fit.Expected) != len(c.Settings) {
		return fmt.Errorf("the fit has %d settings and the counts have %d; give the fit of these counts", len(fit.Expected), len(c.Settings))
	}
	l := c.likelihood()
	return shareOut(ctx, draws, func(k int) error {
		repeated, err := l.repeated(fit, seed, k).fit()
		if err != nil {
			return fmt.Errorf("in a simulated repetition of the measurement %w", err)
		}
		take(k, repeated.Rho)
		return nil
	}, progress)
}

// repeated returns the likelihood of counts drawn about those that the fit
// expects.
func (l likelihood) repeated(fit Fit, seed uint64, draw int) likelihood {
	source := rand.NewPCG(seed, uint64(draw))
	n := make([]float64, len(l.n))
	for i, mu := range fit.Expected {
		n[i] = distuv.Poisson{Lambda: mu, Src: source}.Rand()
	}
	l.n = n
	return l
}

// shareOut calls run(0) to run(jobs − 1) on all cores, until one returns an
// error or the context ends. Of several errors it returns that of the lowest
// number.
func shareOut(ctx context.Context, jobs int, run func(k int) error, progress func(done int)) error {
	var (
		mutex         sync.Mutex
		group         sync.WaitGroup
		next, done    int
		failed, first = jobs, error(nil)
	)
	take := func() (k int, more bool) {
		mutex.Lock()
		defer mutex.Unlock()
		k = next
		next++
		return k, k < failed && ctx.Err() == nil
	}
	finish := func(k int, err error) {
		mutex.Lock()
		defer mutex.Unlock()
		done++
		switch {
		case err != nil && k < failed:
			failed, first = k, err
		case err == nil && progress != nil:
			progress(done)
		}
	}
	for range min(jobs, runtime.GOMAXPROCS(0)) {
		group.Go(func() {
			for k, more := take(); more; k, more = take() {
				finish(k, run(k))
			}
		})
	}
	group.Wait()
	if first == nil {
		return ctx.Err()
	}
	return first
}

// deviations returns the standard deviation of each column.
func deviations(rows [][]float64) []float64 {
	sd := make([]float64, len(rows[0]))
	for column := range sd {
		mean, square := 0.0, 0.0
		for _, row := range rows {
			mean += row[column] / float64(len(rows))
		}
		for _, row := range rows {
			square += (row[column] - mean) * (row[column] - mean)
		}
		sd[column] = math.Sqrt(square / float64(len(rows)-1))
	}
	return sd
}

// FigureDeviations returns one standard deviation of each of the state's Figures;
// see Bootstrap.
func (c Counts) FigureDeviations(ctx context.Context, fit Fit, draws int, seed uint64, progress func(done int)) (Figures, error) {
	sd, err := c.Bootstrap(ctx, fit, draws, seed, func(rho DensityMatrix) []float64 { return rho.Figures().List() }, progress)
	if err != nil {
		return Figures{}, err
	}
	return FiguresOf(sd), nil
}
