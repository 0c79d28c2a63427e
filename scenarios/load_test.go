package scenarios

import (
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"pairspan/sources"
)

func write(t *testing.T, name, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

// A matrix of the Bell state in the scenario's folder, and one outside it.
const bellCSV = "row,col,re,im\n0,0,0.5,0\n0,1,0,0\n0,2,0,0\n0,3,0.5,0\n1,1,0,0\n1,2,0,0\n1,3,0,0\n2,2,0,0\n2,3,0,0\n3,3,0.5,0\n"

func TestFilesBesideTheScenario(t *testing.T) {
	dir := t.TempDir()
	write(t, filepath.Join(dir, "lab", "link.yaml"), replaced(t, "tangle: 0.86", "density_matrix: runs/bell.csv"))
	write(t, filepath.Join(dir, "lab", "runs", "bell.csv"), bellCSV)
	write(t, filepath.Join(dir, "bell.csv"), bellCSV)
	path := filepath.Join(dir, "lab", "link.yaml")
	s, err := Load(path)
	if err != nil {
		t.Fatal(err)
	}
	if s.Source.State.Kind != sources.DensityMatrixKind || len(s.Repairs) > 0 {
		t.Errorf("%+v, %v", s.Source.State, s.Repairs)
	}
	if len(s.Inputs) != 2 || s.Inputs[0].Name != path || s.Inputs[1] != (Input{"runs/bell.csv", bellCSV, "source.state.density_matrix"}) {
		t.Errorf("inputs %q", s.Inputs)
	}
	// A link that leads out of the folder is not followed.
	if err := os.Symlink("../../bell.csv", filepath.Join(dir, "lab", "runs", "out.csv")); err != nil {
		t.Skip(err)
	}
	if _, err := s.With(Change{"source.state.density_matrix", "runs/out.csv"}); err == nil || !strings.Contains(err.Error(), "cannot be read") {
		t.Errorf("got %v", err)
	}
}

// What was put right in a measured state is said, and the state is kept as
// given beside its ratio of coincidences to accidentals.
func TestMendedStates(t *testing.T) {
	off := strings.Replace(bellCSV, "3,3,0.5,0", "3,3,0.504,0", 1)
	files := fstest.MapFS{"off.csv": {Data: []byte(off)}, "bell.csv": {Data: []byte(bellCSV)}}
	s, err := Read(files, "x.yaml", []byte(replaced(t, "tangle: 0.86", "density_matrix: off.csv")))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Repairs) != 1 || s.Repairs[0].Rule != "state-mended" || s.Repairs[0].Entry != "source.state.density_matrix" || !strings.Contains(s.Repairs[0].Sentence, "trace") {
		t.Errorf("%v", s.Repairs)
	}
	// A Bell state cannot have been measured with accidentals left in.
	s, err = Read(files, "x.yaml", []byte(replaced(t, "tangle: 0.86", "density_matrix: bell.csv\n    measured_car: 20")))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Repairs) != 1 || s.Repairs[0].Entry != "source.state.measured_car" || s.Source.MeasuredCAR != 20 {
		t.Errorf("%v, %v", s.Repairs, s.Source.MeasuredCAR)
	}
	if s.Source.State.Matrix[0][3] != 0.5 {
		t.Errorf("not as given: %v", s.Source.State.Matrix)
	}
	// At CAR = 20 a visibility of 20/21 is the most there is.
	for _, c := range []struct {
		da      string
		repairs int
	}{{"0.95", 0}, {"0.955", 1}} {
		s := mustRead(t, replaced(t, "tangle: 0.86", "visibility: { hv: 0.9, da: "+c.da+" }\n    measured_car: 20"))
		if len(s.Repairs) != c.repairs {
			t.Errorf("visibility %s: %v", c.da, s.Repairs)
		}
	}
}

func TestFilesThatCannotBeRead(t *testing.T) {
	dir := t.TempDir()
	write(t, filepath.Join(dir, "large.yaml"), errBase+strings.Repeat("#", maxFileBytes-len(errBase)+1))
	write(t, filepath.Join(dir, "just.yaml"), errBase+strings.Repeat("#", maxFileBytes-len(errBase)))
	for name, want := range map[string]string{
		"none.yaml": "there is no such file", "": "this is a folder, not a file", "none/x.yaml": "there is no such file",
		"large.yaml": "the file is larger than 1024 KiB", "just.yaml": "",
	} {
		_, err := Load(filepath.Join(dir, name))
		switch {
		case want == "" && err != nil, want != "" && (err == nil || !strings.Contains(err.Error(), ":1:1: "+want)):
			t.Errorf("%q: %v", name, err)
		}
	}
	if _, err := Load(os.DevNull); err == nil || !strings.Contains(err.Error(), "not a regular file") {
		t.Errorf("device: %v", err)
	}
	if _, err := LoadFS(os.DirFS(dir), "large.yaml"); err == nil || !strings.Contains(err.Error(), "large.yaml:1:1: the file is larger") {
		t.Errorf("file system: %v", err)
	}
	if _, err := Read(noFiles, "x.yaml", make([]byte, maxFileBytes+1)); err == nil || !strings.Contains(err.Error(), "larger") {
		t.Errorf("bytes: %v", err)
	}
	denied := openFails{fstest.MapFS{"x.yaml": {Data: []byte(errBase)}}, fs.ErrPermission}
	if _, err := LoadFS(denied, "x.yaml"); err == nil || !strings.Contains(err.Error(), "x.yaml:1:1: no permission to read the file") {
		t.Errorf("permission: %v", err)
	}
}

// openFails is a file system whose files are seen but not opened.
type openFails struct {
	fstest.MapFS
	err error
}

func (f openFails) Open(string) (fs.File, error) { return nil, f.err }

// A file that grows, or says that it is empty, is read no further than the
// bound; and the whole is over in a moment.
func TestFileWithoutEnd(t *testing.T) {
	if _, err := os.Stat("/proc/self/maps"); err != nil {
		t.Skip(err)
	}
	start := time.Now()
	if _, err := Load("/proc/self/maps"); err == nil {
		t.Error("accepted")
	}
	if d := time.Since(start); d > patience {
		t.Errorf("took %v", d)
	}
}

func TestBuiltInScenariosLoad(t *testing.T) {
	names, err := fs.Glob(Examples, "*.yaml")
	if err != nil || len(names) != 5 {
		t.Fatal(names, err)
	}
	for _, name := range names {
		embedded, err := LoadFS(Examples, name)
		if err != nil {
			t.Error(err)
			continue
		}
		if len(embedded.Repairs) > 0 {
			t.Errorf("%s: %v", name, embedded.Repairs)
		}
		if _, err := Load(name); err != nil {
			t.Error(err)
		}
		if len(embedded.Compare) == 0 || !Stated(embedded.NeedBps) {
			t.Errorf("%s compares nothing or needs nothing", name)
		}
	}
}
