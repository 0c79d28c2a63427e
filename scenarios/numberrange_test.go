package scenarios

import "testing"

// TestNumberRange holds the ends of every range against what reading accepts.
func TestNumberRange(t *testing.T) {
	s := blank([]string{"gated"})
	each(s, func(e *row, _ int, name string) {
		r, err := NumberRange(name)
		if (err == nil) != (e.form == numberForm) {
			t.Errorf("%s: %v", name, err)
		}
		if err != nil {
			return
		}
		if !e.contains(r.Lo) || !e.contains(r.Hi) || r.Unit != e.unit {
			t.Errorf("%s: %+v", name, r)
		}
		if below, above := r.Lo-(r.Hi-r.Lo)/1e9, r.Hi+(r.Hi-r.Lo)/1e9; e.contains(below) || e.contains(above) || r.Clamp(below) != r.Lo || r.Clamp(above) != r.Hi {
			t.Errorf("%s goes beyond %+v", name, r)
		}
	})
	for _, name := range []string{"", "arms", "arms.bob.colour", "title", "arms.Bob.length_km"} {
		if _, err := NumberRange(name); err == nil {
			t.Errorf("%q has a range", name)
		}
	}
}
