package main

import (
	"os/exec"
	"slices"
	"strings"
	"testing"
)

// arrows are the packages of ours that each package may rest on, directly or
// not; what is not named here may rest on none.
var arrows = map[string][]string{
	"pairspan/link":                         {},
	"pairspan/sources":                      {},
	"pairspan/keyrate":                      {"pairspan/link"},
	"pairspan/scenarios":                    {"pairspan/sources", "pairspan/link", "pairspan/keyrate"},
	"pairspan/scenarios/internal/jsonpaths": {}, // of tests
	"pairspan/scenarios/plan":               {"pairspan/scenarios", "pairspan/sources", "pairspan/link", "pairspan/keyrate"},
	"pairspan/scenarios/source": {
		"pairspan/scenarios/plan", "pairspan/scenarios", "pairspan/sources", "pairspan/link", "pairspan/keyrate",
	},
	"pairspan/cmd/pairspan/internal/report": {
		"pairspan/scenarios/plan", "pairspan/scenarios/source", "pairspan/scenarios", "pairspan/sources", "pairspan/link", "pairspan/keyrate",
	},
	"pairspan/cmd/pairspan": {
		"pairspan/cmd/pairspan/internal/report", "pairspan/scenarios/plan", "pairspan/scenarios/source", "pairspan/scenarios",
		"pairspan/sources", "pairspan/link", "pairspan/keyrate",
	},
}

// direct are the packages of ours that a package may import itself, where
// that is fewer than it rests on.
var direct = map[string][]string{
	"pairspan/cmd/pairspan/internal/report": {"pairspan/scenarios/plan", "pairspan/scenarios/source"},
	"pairspan/cmd/pairspan": {
		"pairspan/cmd/pairspan/internal/report", "pairspan/scenarios/plan", "pairspan/scenarios/source", "pairspan/scenarios",
	},
}

// TestArrows holds the direction in which packages know of each other.
func TestArrows(t *testing.T) {
	packages := golist(t, "{{.ImportPath}}", "pairspan/...")
	for _, p := range packages {
		allowed, known := arrows[p]
		if !known {
			t.Errorf("%s has no arrows: say what it may rest on", p)
		}
		for _, dep := range golist(t, "{{.ImportPath}}", "-deps", p) {
			if strings.HasPrefix(dep, "pairspan") && dep != p && !slices.Contains(allowed, dep) {
				t.Errorf("%s rests on %s", p, dep)
			}
		}
		if few, ok := direct[p]; ok {
			for _, dep := range golist(t, `{{join .Imports "\n"}}`, p) {
				if strings.HasPrefix(dep, "pairspan") && !slices.Contains(few, dep) {
					t.Errorf("%s imports %s", p, dep)
				}
			}
		}
	}
	if len(packages) != len(arrows) {
		t.Errorf("%d packages, %d with arrows", len(packages), len(arrows))
	}
}

func golist(t *testing.T, format string, args ...string) []string {
	t.Helper()
	out, err := exec.CommandContext(t.Context(), "go", append([]string{"list", "-buildvcs=false", "-f", format}, args...)...).Output()
	if err != nil {
		t.Fatal(err)
	}
	return strings.Fields(string(out))
}
