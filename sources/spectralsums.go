package sources

import "math"

// bandSum is the sum over bins of their share, and of share × correlation T_ij
// by columns. All that the errors of a mixture take is linear in its state.
type bandSum struct {
	share        float64
	correlations columns3
}

func (s *bandSum) add(b *bandSum) {
	s.share += b.share
	for k := range s.correlations {
		for i := range s.correlations[k] {
			s.correlations[k][i] += b.correlations[k][i]
		}
	}
}

// errors returns the bit errors of the mixture with aligned analysers, e1 ≤ e2.
func (s *bandSum) errors() (e [2]float64) {
	t := s.correlations
	for k := range t {
		for i := range t[k] {
			t[k][i] /= s.share
		}
	}
	s1, s2 := t.strengths()
	return [2]float64{errorOf(s1), errorOf(s2)}
}

// prepareSums works out what all bands are summed from.
func (m *SpectralMap) prepareSums() {
	nA, nB := len(m.CentreNm[0]), len(m.CentreNm[1])
	m.cells, m.meanConcurrence = make([][]bandSum, nA), make([][]float64, nA)
	m.before, m.after = make([][]float64, nA+1), make([][]float64, nA+1)
	m.aliceShare = make([]float64, nA)
	m.before[0], m.after[nA] = make([]float64, nB), make([]float64, nB)
	for i, bins := range m.Bins {
		m.cells[i], m.meanConcurrence[i], m.before[i+1] = make([]bandSum, nB), make([]float64, nB), make([]float64, nB)
		for j, bin := range bins {
			m.before[i+1][j] = m.before[i][j] + bin.Share
			m.aliceShare[i] += bin.Share
			if bin.Share > 0 {
				m.cells[i][j] = sumOf(bin)
				m.meanConcurrence[i][j] = bin.Share * math.Sqrt(bin.Tangle)
			}
		}
	}
	for i := nA - 1; i >= 0; i-- {
		m.after[i] = make([]float64, nB)
		for j, bin := range m.Bins[i] {
			m.after[i][j] = m.after[i+1][j] + bin.Share
		}
	}
}

// sumOf returns the sum over a single bin.
func sumOf(bin SpectralBin) bandSum {
	s := bandSum{share: bin.Share}
	for i, row := range bin.Rho.Correlations() {
		for k, t := range row {
			s.correlations[k][i] = bin.Share * t
		}
	}
	return s
}

// bandSums are the sums over one of Alice's bands and each of Bob's. Sums over
// rectangles as differences of prefix sums from a corner would leave rounding
// errors of 1e-16 of all pairs, which is much of a band that few pass. These
// grow by one row and then by one column at a time: prefix sums from every
// start. They add only and never subtract, so that n bins hold n × 1e-16 of
// themselves; a sum depends on its band alone, not on how it was reached; and
// a band costs one addition of each figure.
type bandSums struct {
	m           *SpectralMap
	first, last int       // Alice's band
	columns     []bandSum // of each of Bob's bins, with Alice's photon in her band
	outside     []float64 // share of each of Bob's bins with Alice's photon outside
	left, right []float64 // share with Alice's photon inside, Bob's in a lower bin, in this or a higher one
}

// sumsOver returns the sums over Alice's band from bin first to bin last.
func (m *SpectralMap) sumsOver(first, last int) *bandSums {
	n := len(m.CentreNm[1])
	s := &bandSums{m: m, first: first, last: last, columns: make([]bandSum, n), outside: make([]float64, n), left: make([]float64, n+1), right: make([]float64, n+1)}
	for i := first; i <= last; i++ {
		for j := range s.columns {
			s.columns[j].add(&m.cells[i][j])
		}
	}
	for j := range s.columns {
		s.outside[j] = m.before[first][j] + m.after[last+1][j]
		s.left[j+1] = s.left[j] + s.columns[j].share
	}
	for j := n - 1; j >= 0; j-- {
		s.right[j] = s.right[j+1] + s.columns[j].share
	}
	return s
}

// each calls do for Bob's bands from bin first to bin last and all wider ones
// from the same first bin up to the bin most. It leaves the errors out.
func (s *bandSums) each(first, last, most int, do func(b Band, sum *bandSum)) {
	var sum bandSum
	outside := 0.0
	edge := s.m.EdgeNm
	b := Band{First: [2]int{s.first, first}, FromNm: [2]float64{edge[0][s.first], edge[1][first]}}
	for j := first; j <= most; j++ {
		sum.add(&s.columns[j])
		outside += s.outside[j]
		if j < last {
			continue
		}
		b.Last = [2]int{s.last, j}
		b.ToNm = [2]float64{edge[0][s.last+1], edge[1][j+1]}
		b.Share = sum.share
		b.UnpairedShare = [2]float64{s.left[first] + s.right[j+1], outside}
		do(b, &sum)
	}
}

// Band returns a pair of pass bands, from Alice's bin first[0] to last[0] and
// from Bob's first[1] to last[1]. Shares are good to 1e-16 times the number of
// their bins, the errors to 1e-14.
func (m *SpectralMap) Band(first, last [2]int) (band Band) {
	m.sumsOver(first[0], last[0]).each(first[1], last[1], last[1], func(b Band, sum *bandSum) {
		b.StateError = sum.errors()
		band = b
	})
	return band
}
