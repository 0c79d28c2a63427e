package sources

import "math"

// direction returns the step D of Newton's method, X → C (1 + D) C†, towards
// the maximum of ln L(X) + barrier ln det X, and how fast that grows along it.
//
// Where the slack S exceeds the barrier, S takes the barrier's place in the
// second derivative: they are the same on the path, and S sees further ahead
// (primal-dual method).
func (w *path) direction() (d hermitian, slope float64) {
	var h [parameters][parameters]float64 // minus the second derivative, lower triangle
	at := 4
	for j := range w.s {
		sj := max(w.s[j], w.barrier)
		h[j][j] = sj
		d[j] = w.barrier - w.s[j]
		for k := range j {
			mean := (sj + max(w.s[k], w.barrier)) / 2
			h[at][at], h[at+1][at+1] = mean, mean
			at += 2
		}
	}
	for i := range w.v {
		if w.n[i] == 0 {
			continue
		}
		weight, q := w.n[i]/(w.mu[i]*w.mu[i]), outer(&w.v[i])
		for a := range q {
			x := weight * q[a]
			for b := range a + 1 {
				h[a][b] += x * q[b]
			}
		}
	}
	gradient := d
	solvePositive(&h, &d)
	slope = gradient.dot(&d)
	for i := range w.v {
		q := outer(&w.v[i])
		w.change[i] = q.dot(&d) / w.mu[i]
	}
	return d, slope
}

func (h *hermitian) dot(other *hermitian) (sum float64) {
	for k := range h {
		sum += h[k] * other[k]
	}
	return sum
}

// step goes along D as far as X stays positive and ln L + barrier ln det X grows
// well: all the way, most often.
func (w *path) step(d *hermitian, slope float64) {
	values, turn := eigenHermitian(d.matrix())
	share := 1.0
	if values[3] < 0 {
		share = min(1, -0.97/values[3])
	}
	rounding := 1e-15 * w.total()
	for share > 1e-12 && w.growth(share, &values) < 0.01*share*slope-rounding {
		share /= 2
	}
	w.c = product(&w.c, &turn)
	for k, value := range values {
		length := complex(math.Sqrt(1+share*value), 0)
		for j := range w.c {
			w.c[j][k] *= length
		}
	}
}

// growth returns by how much ln L + barrier ln det X grows along a share of the
// step with the given eigenvalues.
func (w *path) growth(share float64, values *[4]float64) (sum float64) {
	for _, value := range values {
		sum += w.barrier * math.Log1p(share*value)
	}
	for i, x := range w.change {
		sum -= share * x * w.mu[i]
		if w.n[i] > 0 {
			sum += w.n[i] * math.Log1p(share*x)
		}
	}
	return sum
}

// solvePositive replaces x by h⁻¹ x, h positive definite, of which the lower
// triangle is given and overwritten: Cholesky's method.
func solvePositive(h *[parameters][parameters]float64, x *hermitian) {
	for j := range h {
		for k := range j + 1 {
			sum := h[j][k]
			for i := range k {
				sum -= h[j][i] * h[k][i]
			}
			if k < j {
				h[j][k] = sum / h[k][k]
			} else {
				h[j][j] = math.Sqrt(max(sum, math.SmallestNonzeroFloat64))
			}
		}
		for i := range j {
			x[j] -= h[j][i] * x[i]
		}
		x[j] /= h[j][j]
	}
	for j := len(x) - 1; j >= 0; j-- {
		for i := j + 1; i < len(x); i++ {
			x[j] -= h[i][j] * x[i]
		}
		x[j] /= h[j][j]
	}
}
