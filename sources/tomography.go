package sources

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"
)

// LinearInversion returns the Hermitian matrix of trace 1 that the counts give
// by themselves ([1]). It is not physical where it has negative eigenvalues,
// which noise makes likely; MaximumLikelihood gives a state.
//
// The expected counts are linear in the sixteen Stokes parameters
// S_jk = N Tr(ρ σ_j⊗σ_k), σ_0 = 1,
//
//	counts_i − accidentals_i = exposure_i × 1/4 Σ_jk a_ij b_ik S_jk
//
// with a_i and b_i the Stokes parameters of the analysers. Sixteen independent
// settings give S exactly; more give it by least squares, each setting with the
// weight 1/exposure, so that the result stays linear in the counts.
//
// Settings that leave parameters open are a *CSVError that names those, and so
// are accidentals that leave no pairs.
//
// [1] James et al. (2001). "Measurement of qubits". Phys. Rev. A 64, 052312.
func (c Counts) LinearInversion() ([4][4]complex128, error) {
	design, err := c.design()
	if err != nil {
		return [4][4]complex128{}, err
	}
	stokes := design.solve(c)
	if !(stokes[0] > 0) {
		return [4][4]complex128{}, noPairs
	}
	for i := len(stokes) - 1; i >= 0; i-- {
		stokes[i] /= stokes[0]
	}
	return fromStokes(stokes), nil
}

var noPairs = &CSVError{Problem: "the accidentals explain all counts: no pairs are left", Hint: "check the column accidentals: it holds a number for each setting's whole time, not a rate"}

// parameters is how many real numbers make an unnormalised two-photon state.
const parameters = 16

// inversion is the singular value decomposition of the settings: row i is
// √exposure_i a_ij b_ik/4.
type inversion struct{ svd mat.SVD }

// leastSingular is the smallest singular value, as a share of the largest, at
// which a combination of parameters counts as determined.
const leastSingular = 1e-7

// design returns the decomposition of the settings, or an error that names what
// they leave open.
func (c Counts) design() (*inversion, error) {
	if len(c.Settings) == 0 {
		return nil, &CSVError{Problem: "there are no settings", Hint: "give at least 16 independent ones"}
	}
	rows := mat.NewDense(len(c.Settings), parameters, nil)
	for i, s := range c.Settings {
		if !s.usable() {
			return nil, &CSVError{
				Line: s.line, Problem: fmt.Sprintf("the setting %s, %s has numbers that cannot be: counts %.6g, accidentals %.6g, exposure %.6g", s.Names[0], s.Names[1], s.Counts, s.Accidentals, s.Exposure),
				Hint: "counts and accidentals are 0 or more, exposures above 0",
			}
		}
		a, b, root := s.Alice.stokes(), s.Bob.stokes(), math.Sqrt(s.Exposure)/4
		for jk := range parameters {
			rows.Set(i, jk, root*a[jk/4]*b[jk%4])
		}
	}
	var d inversion
	if !d.svd.Factorize(rows, mat.SVDThin) {
		return nil, &CSVError{Problem: "the settings cannot be analysed", Hint: "check their angles and times"}
	}
	if open := d.open(); len(open) > 0 {
		return nil, c.openError(open)
	}
	return &d, nil
}

// rank returns how many singular values count.
func (d *inversion) rank() int {
	values := d.svd.Values(nil)
	rank := 0
	for rank < len(values) && values[rank] > leastSingular*values[0] {
		rank++
	}
	return rank
}

// open returns the parameters that do not lie in the span of the settings.
func (d *inversion) open() (open []int) {
	rank := d.rank()
	if rank == parameters {
		return nil
	}
	var v mat.Dense
	d.svd.VTo(&v)
	for jk := range parameters {
		inside := 0.0
		for k := range rank {
			inside += v.At(jk, k) * v.At(jk, k)
		}
		if inside < 1-1e-9 {
			open = append(open, jk)
		}
	}
	return open
}

// solve returns the Stokes parameters of the counts by least squares.
func (d *inversion) solve(c Counts) (stokes [parameters]float64) {
	y := mat.NewVecDense(len(c.Settings), nil)
	for i, s := range c.Settings {
		y.SetVec(i, (s.Counts-s.Accidentals)/math.Sqrt(s.Exposure))
	}
	x := mat.NewVecDense(parameters, nil)
	d.svd.SolveVecTo(x, y, parameters)
	copy(stokes[:], x.RawVector().Data)
	return stokes
}

// fromStokes returns 1/4 Σ_jk S_jk σ_j⊗σ_k.
func fromStokes(stokes [parameters]float64) (rho [4][4]complex128) {
	for jk, s := range stokes {
		for row := range 4 {
			a, x := pauli(jk/4, row/2)
			b, y := pauli(jk%4, row%2)
			rho[row][2*a+b] += complex(s/4, 0) * x * y
		}
	}
	return rho
}

// pauli returns where the one entry of the row of σ_j stands, and the entry; σ_0
// is 1.
func pauli(j, row int) (column int, entry complex128) {
	if j == 0 {
		return row, 1
	}
	return row ^ pauliFlips[j-1], pauliEntry[j-1][row]
}

// openError returns the error of settings that leave parameters open.
func (c Counts) openError(open []int) error {
	var names []string
	for _, jk := range open {
		names = append(names, parameterName(jk))
	}
	return &CSVError{
		Problem: fmt.Sprintf("the %d settings do not determine %s (sigma1 is D/A, sigma2 R/L, sigma3 H/V)", len(c.Settings), strings.Join(names, ", ")),
		Hint:    "at least 16 independent settings are needed: " + c.missing(open),
	}
}

// missing says which settings to add.
func (c Counts) missing(open []int) string {
	var lacks []string
	for side, name := range armNames {
		for axis := 1; axis < 4; axis++ {
			if !slices.ContainsFunc(c.Settings, func(s Setting) bool {
				return math.Abs([2]Analyser{s.Alice, s.Bob}[side].stokes()[axis]) > 1e-6
			}) {
				lacks = append(lacks, fmt.Sprintf("%s at %s", name, [4]string{1: "D or A", 2: "R or L", 3: "H or V"}[axis]))
			}
		}
	}
	if len(lacks) > 0 {
		return "add some with " + strings.Join(lacks, ", ")
	}
	letters := [4]string{"H", "D", "R", "H"}
	first := open[0]
	return fmt.Sprintf("add for example Alice at %s with Bob at %s", letters[first/4], letters[first%4])
}

// parameterName returns what S_jk is called.
func parameterName(jk int) string {
	j, k := jk/4, jk%4
	switch {
	case jk == 0:
		return "the number of pairs"
	case k == 0:
		return fmt.Sprintf("sigma%d of Alice", j)
	case j == 0:
		return fmt.Sprintf("sigma%d of Bob", k)
	}
	return fmt.Sprintf("sigma%d x sigma%d", j, k)
}
