package sources

import (
	"math"
	"slices"
)

// leastMean is the least number of counts that the reciprocal can be taken of.
const leastMean = 1e-300

// fitWorkspace holds what a countFit needs from step to step.
type fitWorkspace struct {
	countFit
	mean, trialMean []float64
	slopes          [][]float64
	gradient        []float64   // half the derivative of the deviance
	information     [][]float64 // Fisher's, expected
}

func (f countFit) workspace() *fitWorkspace {
	n, p := len(f.counts), len(f.lower)
	return &fitWorkspace{
		countFit: f, mean: make([]float64, n), trialMean: make([]float64, n),
		slopes: matrixOf(p, n), gradient: make([]float64, p), information: matrixOf(p, p),
	}
}

// matrixOf returns a zero matrix.
func matrixOf(rows, columns int) [][]float64 {
	m := make([][]float64, rows)
	for i := range m {
		m[i] = make([]float64, columns)
	}
	return m
}

// held tells whether a parameter has no range.
func (f countFit) held(p int) bool { return f.lower[p] == f.upper[p] }

// trialDeviance returns the deviance at theta, infinite where it is no number.
func (w *fitWorkspace) trialDeviance(theta []float64) float64 {
	w.model(theta, w.trialMean, nil)
	d := deviance(w.counts, w.trialMean)
	if math.IsNaN(d) {
		return math.Inf(1)
	}
	return d
}

// derive sets mean, slopes, gradient and information at theta:
//
//	gradient_p = Σ s_p (1 − y/m)      information_pq = Σ s_p s_q/m
//
// Where nothing is expected and nothing was counted y/m is 0, and the
// information, which would be infinite, is left out.
func (w *fitWorkspace) derive(theta []float64) {
	w.model(theta, w.mean, w.slopes)
	for p := range w.gradient {
		w.gradient[p] = 0
		clear(w.information[p])
	}
	for i, m := range w.mean {
		ratio, weight := 0.0, 0.0
		if m > leastMean {
			ratio, weight = w.counts[i]/m, 1/m
		}
		for p, s := range w.slopes {
			w.gradient[p] += s[i] * (1 - ratio)
			for q := range p + 1 {
				w.information[p][q] += s[i] * weight * w.slopes[q][i]
			}
		}
	}
	for p := range w.information {
		for q := range p {
			w.information[q][p] = w.information[p][q]
		}
	}
}

// free tells which parameters may move: not those that are held, nor those at
// an end of their range that the counts push outwards.
func (w *fitWorkspace) free(theta []float64) []bool {
	free := make([]bool, len(theta))
	for p, g := range w.gradient {
		free[p] = !w.held(p) && !(theta[p] <= w.lower[p] && g >= 0) && !(theta[p] >= w.upper[p] && g <= 0)
	}
	return free
}

// step returns where the damped step from theta leads, and its length in
// standard deviations. Parameters that the counts do not tell stay.
func (w *fitWorkspace) step(theta []float64, damp float64) (trial []float64, distance float64) {
	trial = slices.Clone(theta)
	inverse, _ := invertInformation(w.information, w.free(theta), damp)
	square := 0.0
	for p := range trial {
		move := 0.0
		for q, g := range w.gradient {
			move -= inverse[p][q] * g
		}
		trial[p] += move
		square -= move * w.gradient[p]
	}
	return trial, math.Sqrt(max(0, square))
}

// result returns what was found at theta.
func (w *fitWorkspace) result(theta []float64, converged bool) fitted {
	w.derive(theta)
	free := w.free(theta)
	r := fitted{theta: theta, mean: slices.Clone(w.mean), deviance: deviance(w.counts, w.mean), converged: converged, atBound: make([]bool, len(theta))}
	for p := range theta {
		r.atBound[p] = !free[p] && !w.held(p)
	}
	r.covariance, r.told = w.covariance()
	return r
}

// covariance returns the inverse of the information of all parameters that are
// not held, also of those at a bound, which so have the standard deviation that
// the counts give them and widen the others, and whether the counts tell each.
// Of those that they do not tell it is NaN.
func (w *fitWorkspace) covariance() (covariance [][]float64, told []bool) {
	moving := make([]bool, len(w.lower))
	for p := range moving {
		moving[p] = !w.held(p)
	}
	covariance, told = invertInformation(w.information, moving, 0)
	for p := range moving {
		for q := range moving {
			if moving[p] && moving[q] && !(told[p] && told[q]) {
				covariance[p][q] = math.NaN()
			}
		}
		told[p] = told[p] || !moving[p]
	}
	return covariance, told
}

// leastPivot is how much of a parameter's information must remain, beside that
// of the others, for the counts to tell it.
const leastPivot = 1e-13

// invertInformation returns the inverse of the part of a symmetric matrix,
// positive or zero, that the chosen rows and columns make, its diagonal raised by
// the share damp; the other entries are zero. Rows that depend on others are left
// out too, and told is false for them.
//
// The method is Gauss and Jordan's in place, the largest pivot of the matrix
// scaled to a unit diagonal first.
func invertInformation(matrix [][]float64, chosen []bool, damp float64) (inverse [][]float64, told []bool) {
	n := len(matrix)
	inverse, told = matrixOf(n, n), make([]bool, n)
	scale := make([]float64, n)
	for p := range matrix {
		if d := matrix[p][p]; chosen[p] && d > 0 && !math.IsInf(d, 1) {
			scale[p] = 1 / math.Sqrt(d)
		}
	}
	for p := range matrix {
		for q := range matrix {
			if scale[p] > 0 && scale[q] > 0 {
				inverse[p][q] = matrix[p][q] * scale[p] * scale[q]
			}
		}
		inverse[p][p] *= 1 + damp
	}
	for k := nextPivot(inverse, told); k >= 0; k = nextPivot(inverse, told) {
		told[k] = true
		eliminate(inverse, k)
	}
	for p := range inverse {
		for q := range inverse {
			if !told[p] || !told[q] {
				inverse[p][q] = 0
			}
			inverse[p][q] *= scale[p] * scale[q]
		}
	}
	return inverse, told
}

// nextPivot returns the row of the largest pivot that is not done, -1 if none is
// large enough.
func nextPivot(a [][]float64, done []bool) int {
	best, most := -1, leastPivot
	for k := range a {
		if !done[k] && a[k][k] > most {
			best, most = k, a[k][k]
		}
	}
	return best
}

// eliminate turns row and column k of a into those of the inverse.
func eliminate(a [][]float64, k int) {
	pivot := a[k][k]
	a[k][k] = 1
	for j := range a {
		a[k][j] /= pivot
	}
	for i := range a {
		if f := a[i][k]; i != k {
			a[i][k] = 0
			for j := range a {
				a[i][j] -= f * a[k][j]
			}
		}
	}
}
