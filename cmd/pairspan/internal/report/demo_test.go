package report

import (
	"bytes"
	"testing"
)

// A report made from plan.json read back is the same to the byte, and so are
// the other files.
func TestReportFromPlanJSON(t *testing.T) {
	plans := samplePlans()
	plans["demo"] = demoPlan(t)
	plans["demo withheld"] = demoPlan(t).Withhold()
	for name, p := range plans {
		back := readPlan(t, p)
		for _, f := range planFiles {
			var direct, read bytes.Buffer
			if err := f.write(&direct, p); err != nil {
				t.Fatal(err)
			}
			if err := f.write(&read, back); err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(direct.Bytes(), read.Bytes()) {
				t.Errorf("%s: %s from plan.json differs", name, f.name)
			}
		}
	}
}

func TestDemoReportIsSmall(t *testing.T) {
	lib := charting()
	const libraryBytes = 1_150_000 // counted where the library is not compiled in
	size := len(pageOf(t, demoPlan(t), lib))
	if lib.Script == "" {
		size += libraryBytes
	}
	if size > 2_000_000 {
		t.Errorf("the demo's report is %d bytes, want 2 MB at most", size)
	}
}

// BenchmarkDemoReport writes the demo's three files, as --out does; it should
// take less than 0.3 s.
func BenchmarkDemoReport(b *testing.B) {
	p := demoPlan(b)
	dir := b.TempDir()
	b.ReportAllocs()
	for b.Loop() {
		if err := Folder(dir, p); err != nil {
			b.Fatal(err)
		}
	}
}
