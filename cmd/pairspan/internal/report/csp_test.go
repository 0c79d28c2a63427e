package report

import (
	"html"
	"regexp"
	"strings"
	"testing"
)

var (
	policyForm = regexp.MustCompile(`Content-Security-Policy" content="([^"]*)"`)
	styleForm  = regexp.MustCompile(`(?s)<style>(.*?)</style>`)
	scriptForm = regexp.MustCompile(`(?s)<script>(.*?)</script>`)
)

// The policy must allow what the page holds, byte for byte, and nothing else.
func TestPolicyMatchesThePage(t *testing.T) {
	libs := map[string]library{"none": {}, "stand-in": fakeLibrary}
	if lib := charting(); lib.Script != "" {
		libs["real"] = lib
	}
	for name, lib := range libs {
		page := pageOf(t, samplePlan(), lib)
		got := html.UnescapeString(policyForm.FindStringSubmatch(page)[1])
		var hashes []string
		for _, m := range scriptForm.FindAllStringSubmatch(page, -1) {
			hashes = append(hashes, sourceHash(m[1]))
		}
		if wantScripts := map[string]int{"none": 1, "stand-in": 3, "real": 3}[name]; len(hashes) != wantScripts {
			t.Errorf("%s: %d scripts, want %d", name, len(hashes), wantScripts)
		}
		scripts := strings.Join(hashes, " ")
		styles := styleForm.FindAllStringSubmatch(page, -1)
		if len(styles) != 1 {
			t.Fatalf("%s: %d styles", name, len(styles))
		}
		want := "default-src 'none'; style-src " + sourceHash(styles[0][1]) + "; script-src " + scripts + "; base-uri 'none'; form-action 'none'"
		if got != want {
			t.Errorf("%s: policy\n%s\nwant\n%s", name, got, want)
		}
	}
}

// Derived: the SHA-256 of the empty string, in base64, is a known constant.
func TestSourceHash(t *testing.T) {
	if got, want := sourceHash(""), "'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU='"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
