package sources

import (
	"fmt"
	"math"
	"slices"
)

// How far the shares may add up to something else than 1, and how evenly bins
// lie without a doubt.
const (
	maxShareOff   = 0.01
	nearBins      = 1e-3 // of the widest spacing: the same bin, written in two ways
	unevenSpacing = 1.5  // the widest over the narrowest
	edgeDigits    = 1e9  // per nm: edges read as a person would write them
)

// finish returns the map of all rows.
func (r *spectralReader) finish() (*SpectralMap, error) {
	m := &SpectralMap{Tangles: r.tangles}
	for _, b := range r.bins {
		m.ShareSum += b.share
	}
	if err := shareError(m.ShareSum, len(r.bins)); err != nil {
		return nil, err
	}
	for arm := range m.CentreNm {
		if err := m.setCentres(arm, r.bins); err != nil {
			return nil, err
		}
	}
	m.Bins = make([][]SpectralBin, len(m.CentreNm[0]))
	for i := range m.Bins {
		m.Bins[i] = slices.Repeat([]SpectralBin{{Tangle: math.NaN()}}, len(m.CentreNm[1]))
	}
	for _, b := range r.bins {
		bin, mending, err := b.bin(r.tangles)
		if err != nil {
			return nil, err
		}
		i, _ := slices.BinarySearch(m.CentreNm[0], b.nm[0])
		j, _ := slices.BinarySearch(m.CentreNm[1], b.nm[1])
		bin.Share /= m.ShareSum
		m.Bins[i][j] = bin
		if mending.Any() {
			m.Mended = append(m.Mended, SpectralMended{[2]int{i, j}, mending})
		}
	}
	slices.SortFunc(m.Mended, func(a, b SpectralMended) int { return slices.Compare(a.Bin[:], b.Bin[:]) })
	m.prepareSums()
	m.say()
	return m, nil
}

// shareError says what is wrong with the sum of the shares.
func shareError(sum float64, bins int) error {
	const all = "shares are parts of all the pairs that the source's pair rate counts, and add up to 1"
	switch {
	case bins == 0:
		return &CSVError{Problem: "the spectral map has no bin", Hint: "give rows for each pair of bins that has pairs"}
	case sum == 0:
		return &CSVError{Problem: "all shares are 0", Hint: all}
	case math.IsInf(sum, 1):
		return &CSVError{Problem: "the shares are too large", Hint: all}
	case math.Abs(sum/100-1) <= maxShareOff+toleranceSlack:
		return &CSVError{Problem: fmt.Sprintf("the shares add up to %.6g, not to 1", sum), Hint: "per cent? divide them by 100"}
	case !(math.Abs(sum-1) <= maxShareOff+toleranceSlack):
		return &CSVError{Problem: fmt.Sprintf("the shares add up to %.6g, not to 1", sum), Hint: fmt.Sprintf("%s: divide all by %.6g, if the whole map was measured", all, sum)}
	}
	return nil
}

// setCentres finds the bins of one arm.
func (m *SpectralMap) setCentres(arm int, bins []spectralRows) error {
	var centres []float64
	for _, b := range bins {
		centres = append(centres, b.nm[arm])
	}
	slices.Sort(centres)
	centres = slices.Compact(centres)
	if len(centres) > spectralMostBins {
		return &CSVError{
			Problem: fmt.Sprintf("%d different wavelengths in %s, and a spectral map has at most %d", len(centres), spectralForms[0].columns[arm], spectralMostBins),
			Hint:    "take wider bins, and write the same bin the same way in every row",
		}
	}
	m.CentreNm[arm], m.EdgeNm[arm] = centres, edges(centres)
	narrowest, widest := spacings(centres)
	if narrowest < nearBins*widest {
		return tooNear(arm, bins, centres, nearBins*widest)
	}
	if widest > unevenSpacing*narrowest {
		m.doubt("%s's bins lie %.4g to %.4g nm apart. If wavelengths are missing, their neighbours count as wider than they are: give each, with a share of 0 where there are no pairs.", armNames[arm], narrowest, widest)
	}
	return nil
}

// tooNear returns the error of two centres that are meant to be one.
func tooNear(arm int, bins []spectralRows, centres []float64, least float64) error {
	for _, b := range bins {
		i, _ := slices.BinarySearch(centres, b.nm[arm])
		if i > 0 && centres[i]-centres[i-1] < least {
			return b.at[arm].fail(fmt.Sprintf("lies next to %g, far nearer than bins lie elsewhere", centres[i-1]), "write the same bin the same way in every row")
		}
	}
	return nil
}

// edges returns where bins begin and end: midway between the centres, the
// outermost as far out as in. A single bin has no width.
func edges(centres []float64) []float64 {
	n := len(centres)
	e := make([]float64, n+1)
	e[0], e[n] = centres[0], centres[n-1]
	for i := 1; i < n; i++ {
		e[i] = (centres[i-1] + centres[i]) / 2
	}
	if n > 1 {
		e[0] -= e[1] - centres[0]
		e[n] += centres[n-1] - e[n-1]
	}
	for i := range e {
		e[i] = math.Round(e[i]*edgeDigits) / edgeDigits
	}
	return e
}

// spacings returns the narrowest and the widest distance of neighbours; 0 of a
// single one.
func spacings(centres []float64) (narrowest, widest float64) {
	for i := 1; i < len(centres); i++ {
		d := centres[i] - centres[i-1]
		if i == 1 || d < narrowest {
			narrowest = d
		}
		widest = max(widest, d)
	}
	return narrowest, widest
}
