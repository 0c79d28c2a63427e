package sources

import (
	"errors"
	"fmt"
)

// SpectralMap is a source's light resolved in wavelength: the pairs by the
// spectral bins of Alice's and of Bob's photon. ReadSpectralMap makes one;
// nothing of it is to be changed.
type SpectralMap struct {
	CentreNm [2][]float64     // of Alice's and of Bob's bins, rising
	EdgeNm   [2][]float64     // between the bins and around them: midway between the centres
	Bins     [][]SpectralBin  // [Alice's bin][Bob's bin]
	Tangles  bool             // of each bin the tangle alone is known, not the state
	ShareSum float64          // of the shares as given, within 1 % of 1; those in Bins add up to 1
	Mended   []SpectralMended // bins whose matrix was not one of a state, in the order of the bins
	Told     []string         // what was done with the figures given, and what they leave open
	Doubts   []string         // what looks amiss

	cells           [][]bandSum // of each bin
	before, after   [][]float64 // share of the pairs in a bin of Bob's with Alice's photon in a lower, a higher bin
	aliceShare      []float64   // of each of Alice's bins
	meanConcurrence [][]float64 // share × concurrence of each bin
}

// SpectralBin is the pairs with Alice's photon in one bin and Bob's in another.
type SpectralBin struct {
	Share  float64       // of all pairs, 0 to 1
	Rho    DensityMatrix // state; where the tangle alone is known, Werner's of that tangle. Zero where Share is 0
	Tangle float64       // 0 to 1; NaN where Share is 0
}

// SpectralMended is how the matrix of one bin was mended.
type SpectralMended struct {
	Bin [2]int // Alice's, Bob's
	Mending
}

// Band is a pair of pass bands, each of contiguous bins, and what passes both.
type Band struct {
	First, Last   [2]int     // bins of Alice's and of Bob's band, both ends inside
	FromNm, ToNm  [2]float64 // edges of both bands
	Share         float64    // of all pairs: both photons inside
	UnpairedShare [2]float64 // of all pairs: this arm's photon inside, the other's not
	StateError    [2]float64 // bit errors of the pairs inside, analysers aligned, e1 ≤ e2; NaN without pairs
}

// Bins returns how many bins an arm's band has.
func (b *Band) Bins(arm int) int { return b.Last[arm] - b.First[arm] + 1 }

// AllBins returns how many bins both bands have together.
func (b *Band) AllBins() int { return b.Bins(0) + b.Bins(1) }

// WidthNm returns the width of an arm's band; 0 where the map has a single bin,
// whose width it does not tell.
func (b *Band) WidthNm(arm int) float64 { return b.ToNm[arm] - b.FromNm[arm] }

// CentreNm returns the middle of an arm's band.
func (b *Band) CentreNm(arm int) float64 { return (b.FromNm[arm] + b.ToNm[arm]) / 2 }

// Within returns the pair of pass bands of the bins whose centres lie between
// two wavelengths in each arm, both inside; NaN stands for the end of the map.
// The error names the arm in which no centre lies there, and -1 where no pair
// passes both.
func (m *SpectralMap) Within(fromNm, toNm [2]float64) (b Band, arm int, err error) {
	var first, last [2]int
	for arm, centres := range m.CentreNm {
		first[arm], last[arm] = -1, -1
		for i, nm := range centres {
			if nm < fromNm[arm] || nm > toNm[arm] { // neither holds of NaN
				continue
			}
			if last[arm] = i; first[arm] < 0 {
				first[arm] = i
			}
		}
		if last[arm] < 0 {
			return Band{}, arm, fmt.Errorf("no bin of %s's lies there: its centres lie from %.9g to %.9g nm", armNames[arm], centres[0], centres[len(centres)-1])
		}
	}
	if b = m.Band(first, last); !(b.Share > 0) {
		return Band{}, -1, errors.New("no pair passes both pass bands")
	}
	return b, 0, nil
}

// BinsWithPairs returns the bins of a band that hold pairs.
func (m *SpectralMap) BinsWithPairs(b *Band) (bins []*SpectralBin) {
	for i := b.First[0]; i <= b.Last[0]; i++ {
		for k := b.First[1]; k <= b.Last[1]; k++ {
			if bin := &m.Bins[i][k]; bin.Share > 0 {
				bins = append(bins, bin)
			}
		}
	}
	return bins
}

// State returns what is known of the pairs in a band: the mixture of its bins,
// or the tangle of its only bin with pairs. It is unknown where tangles of
// several bins alone are known: see MostConcurrence.
func (m *SpectralMap) State(b *Band) State {
	if !m.Tangles {
		rho, _ := m.Mixture(b.First, b.Last)
		return FromDensityMatrix(rho)
	}
	if bins := m.BinsWithPairs(b); len(bins) == 1 {
		return FromTangle(bins[0].Tangle)
	}
	return State{}
}

// Whole returns the widest pair of pass bands, the whole map.
func (m *SpectralMap) Whole() Band {
	return m.Band([2]int{}, [2]int{len(m.CentreNm[0]) - 1, len(m.CentreNm[1]) - 1})
}

// Mixture returns the state of the pairs with both photons in a band: its bins'
// states weighted with their shares, since bins that nobody resolves do not
// interfere. Where tangles alone are known it is that of Werner states about
// the same Bell state, which is an assumption. It is not ok without pairs.
func (m *SpectralMap) Mixture(first, last [2]int) (rho DensityMatrix, ok bool) {
	total := 0.0
	for i := first[0]; i <= last[0]; i++ {
		for j := first[1]; j <= last[1]; j++ {
			bin := &m.Bins[i][j]
			total += bin.Share
			for r := range rho {
				for c, x := range bin.Rho[r] {
					rho[r][c] += complex(bin.Share, 0) * x
				}
			}
		}
	}
	if total == 0 {
		return DensityMatrix{}, false
	}
	return hermitianPart(rho, real(rho[0][0]+rho[1][1]+rho[2][2]+rho[3][3])), true
}

// MostConcurrence returns the mean Σ pᵢ Cᵢ / Σ pᵢ of the concurrences of a
// band's bins, weighted with their shares. The concurrence of the mixture is at
// most that, since concurrence is convex ([1]); NaN without pairs.
//
// [1] Wootters (1998). "Entanglement of formation of an arbitrary state of two qubits". Phys. Rev. Lett. 80, 2245.
func (m *SpectralMap) MostConcurrence(first, last [2]int) float64 {
	share, sum := 0.0, 0.0
	for i := first[0]; i <= last[0]; i++ {
		for j := first[1]; j <= last[1]; j++ {
			share += m.Bins[i][j].Share
			sum += m.meanConcurrence[i][j]
		}
	}
	return sum / share
}
