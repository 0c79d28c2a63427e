package sources

import "math"

// columns3 is a real matrix of three rows and columns, by columns.
type columns3 [3][3]float64

// strengths returns the two largest singular values of m, s1 ≥ s2: the lengths
// of its columns once they are orthogonal, by one-sided Jacobi like
// orthogonalColumns, but at a tenth of its cost. Good to 1e-14 of s1.
func (m columns3) strengths() (s1, s2 float64) {
	const tolerance = 1e-15
	for sweep, turned := 0, true; turned && sweep < maxSweeps; sweep++ {
		turned = false
		for _, pair := range [3][2]int{{0, 1}, {0, 2}, {1, 2}} {
			p, q := &m[pair[0]], &m[pair[1]]
			pp := p[0]*p[0] + p[1]*p[1] + p[2]*p[2]
			qq := q[0]*q[0] + q[1]*q[1] + q[2]*q[2]
			pq := p[0]*q[0] + p[1]*q[1] + p[2]*q[2]
			if pq*pq <= tolerance*tolerance*pp*qq {
				continue
			}
			turned = true
			turn3(p, q, (qq-pp)/(2*pq))
		}
	}
	var s [3]float64
	for k := range m {
		s[k] = math.Sqrt(m[k][0]*m[k][0] + m[k][1]*m[k][1] + m[k][2]*m[k][2])
	}
	s1 = max(s[0], s[1], s[2])
	return s1, max(min(s[0], s[1]), min(max(s[0], s[1]), s[2]))
}

// turn3 turns two columns by the smaller angle that makes them orthogonal, tau
// the cotangent of its double.
func turn3(p, q *[3]float64, tau float64) {
	t := 1 / (math.Abs(tau) + math.Sqrt(1+tau*tau))
	if tau < 0 {
		t = -t
	}
	c := 1 / math.Sqrt(1+t*t)
	s := t * c
	for k := range p {
		p[k], q[k] = c*p[k]-s*q[k], s*p[k]+c*q[k]
	}
}
