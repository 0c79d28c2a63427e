package report

import (
	"math"

	"pairspan/scenarios/plan"
)

// series is one tidy set of points against distance: what a chart draws and
// what the table under it lists come from the same values.
type series struct {
	Name string
	Y    []*float64 // one per distance; nil: no figure
	Lo   []*float64 // lower edge of a band; nil slice: a line
	Look look
	Ends bool // on a logarithmic axis: mark where the last positive point is followed by a zero

	Short string // what stands at the end of the line; "" for a band
}

// look is how a line is told from the others: never by its colour alone.
type look struct {
	Colour int    // number of a --line-N colour of the style sheet; 0 is the scenario as filed
	Dash   string // a name from dashes
	Symbol string // "" for a plain line
	Width  float32
}

// dashes are the dash patterns by name, in pixels; the boot script and the
// legend draw them alike.
var dashes = []struct{ Name, Pattern string }{
	{"solid", ""},
	{"dashed", "7 4"},
	{"dotted", "2 3"},
	{"dashdot", "9 3 2 3"},
	{"longdash", "14 4"},
}

var symbols = []string{"circle", "triangle", "rect", "diamond"}

const lineColours = 9 // --line-0 to --line-8

// comparedLook gives the i-th compared case its own colour, dash and symbol;
// forty combinations come before one returns.
func comparedLook(i int) look {
	return look{
		Colour: 1 + i%(lineColours-1),
		Dash:   dashes[(i+1)%len(dashes)].Name,
		Symbol: symbols[i%len(symbols)],
		Width:  1.8,
	}
}

// pick returns one figure of every point.
func pick(curve []plan.Point, get func(*plan.Point) *float64) []*float64 {
	ys := make([]*float64, len(curve))
	for i := range curve {
		ys[i] = get(&curve[i])
	}
	return ys
}

// judged is the rate that alone decides: at worst where the state leaves an
// interval open, of the given state otherwise.
func judged(p *plan.Point) *float64 {
	if p.Bounds != nil {
		return &p.Bounds.AtWorst.UsableRateBps
	}
	return p.UsableRateBps
}

func usableAtBest(p *plan.Point) *float64 {
	if p.Bounds == nil {
		return nil
	}
	return &p.Bounds.AtBest.UsableRateBps
}

func distances(curve []plan.Point) []float64 {
	xs := make([]float64, len(curve))
	for i := range curve {
		xs[i] = curve[i].DistanceKm
	}
	return xs
}

// empty reports whether no point holds a figure.
func empty(ys []*float64) bool {
	for _, y := range ys {
		if y != nil {
			return false
		}
	}
	return true
}

// same reports whether two sets of points hold the same figures.
func same(a, b []*float64) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if (a[i] == nil) != (b[i] == nil) || a[i] != nil && *a[i] != *b[i] {
			return false
		}
	}
	return true
}

// positive reports whether a point can stand on a logarithmic axis.
func positive(y *float64) bool { return y != nil && *y > 0 && !math.IsInf(*y, 1) }

// ends returns the indices of the last points before a rate becomes zero; a
// key that comes back has more than one.
func ends(ys []*float64) []int {
	var at []int
	for i := 0; i+1 < len(ys); i++ {
		if positive(ys[i]) && ys[i+1] != nil && *ys[i+1] <= 0 {
			at = append(at, i)
		}
	}
	return at
}
