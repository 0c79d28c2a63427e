package plan

import (
	"fmt"
	"strconv"

	"pairspan/keyrate"
)

// sameExcess is how far the extra errors of the two bases may differ, relative
// to the greater, and still have one cause.
const sameExcess = 0.2

var (
	basisReading = [2]reading{keyrate.KeyBasis: qberKey, keyrate.CheckBasis: qberCheck}
	basisWord    = [2]string{keyrate.KeyBasis: "key", keyrate.CheckBasis: "check"}
)

// excess is the extra error behind a QBER that is too high.
type excess struct {
	high    bool
	nominal float64 // on top of the nominal state
	atLeast float64 // on top of any state that is left open
}

// explainErrors looks for errors beyond the state's, the planned misalignment
// and the accidentals found.
func (g *diagnosis) explainErrors() {
	predicted := g.now()
	var found [2]excess
	for basis, r := range basisReading {
		switch g.off(r, predicted[r]) {
		case -1:
			g.note(r, g.qberStart(basis, predicted)+": the state or the alignment is better than stated.", "better than the state as stated")
		case 1:
			found[basis] = g.excessOf(basis)
			g.says[r] = "an extra error of " + hundredths(found[basis].nominal)
		}
	}
	key, check := found[keyrate.KeyBasis], found[keyrate.CheckBasis]
	alike := abs(key.nominal-check.nominal) <= sameExcess*max(key.nominal, check.nominal)
	for basis, e := range found {
		if !e.high {
			continue
		}
		why := "the alignment or the phase of this basis, dispersion or PMD"
		if key.high && check.high && alike {
			why = g.whyBoth()
		}
		g.findings = append(g.findings, g.qberStart(basis, predicted)+": an extra error of "+g.sizes(e)+": "+why+".")
	}
}

// whyBoth says what raises the errors of both bases alike.
func (g *diagnosis) whyBoth() string {
	const turnedOrWorse = "a turned polarisation frame, or a state worse than stated in both bases"
	if g.has(car) {
		return turnedOrWorse
	}
	return turnedOrWorse + ", or accidentals (window too wide, noise, too much pump); the CAR will tell"
}

func (g *diagnosis) qberStart(basis int, predicted sheet) string {
	r := basisReading[basis]
	return fmt.Sprintf("QBER of the %s basis: %s where %s is to be expected", basisWord[basis], hundredths(g.measured[r]), hundredths(predicted[r]))
}

// sizes says how large an extra error is: of an open state, what it is on the
// nominal one, and at least.
func (g *diagnosis) sizes(e excess) string {
	if g.given {
		return hundredths(e.nominal)
	}
	return fmt.Sprintf("%s (%s at least, whatever the state)", hundredths(e.nominal), hundredths(e.atLeast))
}

// excessOf returns the extra error that makes a basis's QBER as measured.
func (g *diagnosis) excessOf(basis int) excess {
	r, e := basisReading[basis], excess{high: true}
	solve := func(with func(fault) sheet) (float64, bool) {
		return sizeOf(mostError, g.measured[r], func(x float64) float64 { return with(both(g.fault, erred(basis, x)))[r] })
	}
	var ok bool
	if e.nominal, ok = solve(g.nominalWith); !ok {
		e.nominal = mostError // a QBER of a half, to rounding
	}
	e.atLeast, _ = solve(g.worstWith)
	return e
}

// hundredths shows a share in per cent with two decimals.
func hundredths(x float64) string { return strconv.FormatFloat(100*x, 'f', 2, 64) + " %" }
