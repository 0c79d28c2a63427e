package scenarios

import (
	"fmt"
	"math"
)

// Range is what a number of a scenario may be.
type Range struct {
	Lo, Hi float64 // both allowed: an end that the entry excludes is its next number inside
	Unit   string  // "" for a pure number
}

// Clamp returns the nearest value in the range.
func (r Range) Clamp(x float64) float64 { return max(r.Lo, min(r.Hi, x)) }

// NumberRange returns the range of a number by its entry's dotted name, such as
// arms.bob.length_km. It is an error if there is no such entry, or if the
// entry is not a number.
func NumberRange(entry string) (Range, error) {
	p, _, _ := pattern(entry)
	r := byName[p]
	switch {
	case r == nil:
		return Range{}, fmt.Errorf("%s: unknown entry", escape(entry))
	case r.form != numberForm:
		return Range{}, fmt.Errorf("%s: not a number", entry)
	}
	out := Range{r.lo, r.hi, r.unit}
	if r.above {
		out.Lo = math.Nextafter(out.Lo, out.Hi)
	}
	if r.below {
		out.Hi = math.Nextafter(out.Hi, out.Lo)
	}
	return out, nil
}
