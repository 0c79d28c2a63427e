package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"pairspan/sources"
)

// TestSourceFitsOneScreen asks every laboratory file and scenario of the house,
// alone and on every link.
func TestSourceFitsOneScreen(t *testing.T) {
	t.Chdir("../../scenarios")
	links, _ := filepath.Glob("*.yaml")
	files, _ := filepath.Glob("*.csv")
	if len(links) < 4 || len(files) < 4 {
		t.Fatal(links, files)
	}
	for _, file := range append(files, links...) {
		args := []string{"source", file}
		if strings.HasPrefix(file, "power-scan") {
			args = append(args, "--order", "2")
		}
		onScreen(t, args)
		for _, link := range links {
			onScreen(t, append(args[:len(args):len(args)], "--link", link))
		}
	}
}

// onScreen holds that what a command prints fits one screen, in ASCII.
func onScreen(t *testing.T, args []string) {
	t.Helper()
	var out, errs bytes.Buffer
	if status := run(args, &out, &errs); status > statusNo {
		t.Errorf("%v: status %d: %s", args, status, errs.String())
		return
	}
	lines := strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")
	if len(lines) > mostLines {
		t.Errorf("%v: %d lines", args, len(lines))
	}
	for _, line := range lines {
		if n := utf8.RuneCountInString(line); n > mostColumns || n != len(line) {
			t.Errorf("%v: %d columns, %d bytes: %q", args, n, len(line), line)
		}
	}
	if !strings.Contains(out.String(), "IEC 60825-1") || strings.Contains(out.String(), "NaN") {
		t.Errorf("%v:\n%s", args, out.String())
	}
}

// TestSourceInterrupt stops error bars that take long: status 130 and nothing
// written.
func TestSourceInterrupt(t *testing.T) {
	dir := t.TempDir()
	file, out := filepath.Join(dir, "counts.csv"), filepath.Join(dir, "out")
	if err := os.WriteFile(file, []byte(manySettings()), 0o600); err != nil {
		t.Fatal(err)
	}
	interrupted(t, out, "source", file, "--out", out)
}

// manySettings is a tomography of a Bell state with plates at 4000 angles.
func manySettings() string {
	var b strings.Builder
	b.WriteString("alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n")
	for k := range 4000 {
		alice := sources.Plates{HWPDeg: float64(k % 90), QWPDeg: float64(k % 77)}
		bob := sources.Plates{HWPDeg: float64(k % 83), QWPDeg: float64(k) / 25}
		x, y := alice.Analyser(), bob.Analyser()
		both := x[0]*y[0] + x[1]*y[1] // of |HH> + |VV>
		counts := 200 * (real(both)*real(both) + imag(both)*imag(both))
		fmt.Fprintf(&b, "%g,%g,%g,%g,%.0f\n", alice.HWPDeg, alice.QWPDeg, bob.HWPDeg, bob.QWPDeg, counts)
	}
	return b.String()
}
