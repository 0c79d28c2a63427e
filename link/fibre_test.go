package link

import "testing"

func TestEveryClassIsFoundByItsName(t *testing.T) {
	names := ClassNames()
	if len(names) == 0 {
		t.Fatal("no class")
	}
	for _, name := range names {
		if class, ok := ClassByName(name); !ok || class.Name != name {
			t.Errorf("%s: found %+v, %v", name, class, ok)
		}
	}
	for _, name := range []string{"", "G.655", "g.652.d", "G.652.D "} {
		if class, ok := ClassByName(name); ok || class.Name != "" || class.PMDPsPerSqrtKm != 0 {
			t.Errorf("%q: found %+v, want none", name, class)
		}
	}
}

// A caller may change the list that it was given.
func TestClassNamesAreACopy(t *testing.T) {
	ClassNames()[0] = "changed"
	if name := ClassNames()[0]; name == "changed" {
		t.Error("the list of classes was changed from outside")
	}
}
