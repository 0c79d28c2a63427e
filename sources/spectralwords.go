package sources

import "fmt"

// say fills in what was done with the figures given and what they leave open.
func (m *SpectralMap) say() {
	if off := m.ShareSum - 1; off > worthSaying || off < -worthSaying {
		m.told("The shares add up to %.6g; all were divided by it.", m.ShareSum)
	}
	if m.Tangles {
		m.told("Of each bin the tangle alone is known, which does not give that of several together: their concurrence is at most the mean of the bins', and nothing says how far below it lies. " +
			"So there is no value at worst. The nominal values assume that all bins hold Werner states about the same Bell state. Density matrices of the bins would settle it.")
	}
	m.sayMended()
	for arm, centres := range m.CentreNm {
		if len(centres) == 1 {
			m.told("%s has a single bin, and the map does not tell its width.", armNames[arm])
		}
	}
}

// sayMended sums up what was mended, and gives the worst bin an example.
func (m *SpectralMap) sayMended() {
	if len(m.Mended) == 0 {
		return
	}
	worst := m.Mended[0]
	for _, b := range m.Mended {
		if b.size() > worst.size() {
			worst = b
		}
	}
	where := fmt.Sprintf("in the bin of Alice's %g nm and Bob's %g nm", m.CentreNm[0][worst.Bin[0]], m.CentreNm[1][worst.Bin[1]])
	if len(m.Mended) > 1 {
		where = fmt.Sprintf("in %d bins, most so %s", len(m.Mended), where)
	}
	m.told("A density matrix was not one of a state %s: %s.", where, worst.Sentence())
}

// size is the largest amount by which something was off.
func (m Mending) size() float64 { return max(m.TraceOff, m.HermitianOff, -m.LowestEigenvalue) }

func (m *SpectralMap) told(format string, a ...any) {
	m.Told = append(m.Told, fmt.Sprintf(format, a...))
}

func (m *SpectralMap) doubt(format string, a ...any) {
	m.Doubts = append(m.Doubts, fmt.Sprintf(format, a...))
}
