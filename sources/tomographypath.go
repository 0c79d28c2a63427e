package sources

import (
	"math"
	"math/cmplx"
)

// likelihood is the Poisson likelihood of counts n given X = N ρ,
//
//	ln L(X) = Σ_i n_i ln μ_i − μ_i + const,  μ_i = p_i† X p_i + a_i,
//
// p_i the polarisation that passes setting i times √exposure_i, a_i the
// accidentals. It is concave in X.
type likelihood struct {
	p    [][4]complex128
	n, a []float64
}

func (c Counts) likelihood() likelihood {
	var l likelihood
	for _, s := range c.Settings {
		p := s.pair()
		for i := range p {
			p[i] *= complex(math.Sqrt(s.Exposure), 0)
		}
		l.p, l.n, l.a = append(l.p, p), append(l.n, s.Counts), append(l.a, s.Accidentals)
	}
	return l
}

// total returns the number of counts.
func (l likelihood) total() (sum float64) {
	for _, n := range l.n {
		sum += n
	}
	return sum
}

// hasPairs tells whether some X > 0 is more likely than none: whether ln L grows
// from X = 0 in any direction.
func (l likelihood) hasPairs() bool {
	var g hermitian // ∂ ln L/∂X at 0
	for i := range l.p {
		weight := -1.0
		switch {
		case l.n[i] > 0 && l.a[i] == 0:
			return true
		case l.n[i] > 0:
			weight = l.n[i]/l.a[i] - 1
		}
		for k, q := range outer(&l.p[i]) {
			g[k] += weight * q
		}
	}
	values, _ := eigenHermitian(g.matrix())
	return values[0] > 0
}

// path is a point on the way to the maximum: X = C C†, seen in the frame in
// which X is 1, where the setting's vectors are v_i = C† p_i.
type path struct {
	likelihood
	c       [4][4]complex128
	v       [][4]complex128
	mu      []float64
	s       [4]float64 // eigenvalues of the slack, see look
	barrier float64    // weight of ln det X in what is maximised
	change  []float64  // of each μ by the next step, as a share of it
}

// start returns the first point: white noise, of which as many counts are
// expected as there were.
func (l likelihood) start() *path {
	w := &path{likelihood: l, v: make([][4]complex128, len(l.p)), mu: make([]float64, len(l.p)), change: make([]float64, len(l.p))}
	weight, n := 0.0, l.total()
	for i := range l.p {
		weight += norm2(&l.p[i])
	}
	for j := range w.c {
		w.c[j][j] = complex(math.Sqrt(n/weight), 0)
	}
	w.barrier = n / 4
	return w
}

// goal is the gap to the maximum at which the way ends.
func (w *path) goal() float64 { return max(optimalityGoal, optimalityRounding*w.total()) }

const (
	maxSteps  = 200  // some twenty are needed
	shrinking = 0.05 // of the barrier, from one point of the path to the next
)

// climb goes to the maximum and returns what is still missing from it at most,
// the number of steps, and whether the goal was reached.
func (w *path) climb() (gap float64, steps int, ok bool) {
	goal := w.goal()
	for steps = range maxSteps {
		gap = w.look()
		if w.s[3] > 0 { // the point is close enough to the path
			if gap <= goal {
				return gap, steps, true
			}
			w.barrier = max(min(w.barrier, shrinking*gap/4), goal/16)
		}
		d, slope := w.direction()
		w.step(&d, slope)
	}
	return gap, maxSteps, false
}

// look works out v, μ and the slack
//
//	S = −C† (∂ ln L/∂X) C = Σ_i (1 − n_i/μ_i) v_i v_i†
//
// and turns the frame so that S is diagonal, smallest last. On the path S is the
// barrier times 1. Wherever S > 0 no X' has a likelihood above that of X by more
// than Tr S, which is the gap: ln L is concave, so that
//
//	ln L(X') − ln L(X) ≤ Tr(∂ ln L/∂X (X' − X)) ≤ Tr S
func (w *path) look() (gap float64) {
	var slack hermitian
	back := dagger(w.c)
	for i := range w.p {
		v := apply(&back, &w.p[i])
		w.v[i] = v
		w.mu[i] = norm2(&v) + w.a[i]
		weight := 1.0
		if w.n[i] > 0 {
			weight = 1 - w.n[i]/w.mu[i]
		}
		for k, q := range outer(&v) {
			slack[k] += weight * q
		}
	}
	var turn [4][4]complex128
	w.s, turn = eigenHermitian(slack.matrix())
	w.c = product(&w.c, &turn)
	back = dagger(turn)
	for i := range w.v {
		w.v[i] = apply(&back, &w.v[i])
	}
	return w.s[0] + w.s[1] + w.s[2] + w.s[3]
}

func apply(m *[4][4]complex128, v *[4]complex128) (u [4]complex128) {
	for i := range u {
		u[i] = m[i][0]*v[0] + m[i][1]*v[1] + m[i][2]*v[2] + m[i][3]*v[3]
	}
	return u
}

func product(a, b *[4][4]complex128) (m [4][4]complex128) {
	for i := range m {
		m[i] = [4]complex128{}
		for k := range b {
			for j := range m[i] {
				m[i][j] += a[i][k] * b[k][j]
			}
		}
	}
	return m
}

func norm2(v *[4]complex128) (sum float64) {
	for _, x := range v {
		sum += real(x)*real(x) + imag(x)*imag(x)
	}
	return sum
}

// hermitian is a Hermitian 4x4 matrix as a real vector of the same length: its
// diagonal, then √2 Re and √2 Im of the six entries below it.
type hermitian [parameters]float64

// outer returns v v†.
func outer(v *[4]complex128) (h hermitian) {
	at := 4
	for j := range v {
		h[j] = real(v[j])*real(v[j]) + imag(v[j])*imag(v[j])
		for k := range j {
			x := v[j] * cmplx.Conj(v[k])
			h[at], h[at+1] = math.Sqrt2*real(x), math.Sqrt2*imag(x)
			at += 2
		}
	}
	return h
}

// matrix returns h as a matrix.
func (h *hermitian) matrix() (m [4][4]complex128) {
	at := 4
	for j := range m {
		m[j][j] = complex(h[j], 0)
		for k := range j {
			m[j][k] = complex(h[at]/math.Sqrt2, h[at+1]/math.Sqrt2)
			m[k][j] = cmplx.Conj(m[j][k])
			at += 2
		}
	}
	return m
}
