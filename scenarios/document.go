package scenarios

import (
	"io/fs"
	"os"
	"path"
	"path/filepath"
)

// Document is a scenario file as a tree of entries, before it is read: what
// changes are made to.
type Document struct {
	root  *node
	files *folder
	text  string // of the file
}

// Load reads the scenario file at a path, and the files that it names in its
// folder. The error is Errors: everything that is wrong, sorted by place.
func Load(name string) (*Scenario, error) {
	data, problem := readText(
		func() (fs.FileInfo, error) { return os.Stat(name) },
		func() (fs.File, error) { return os.Open(name) })
	if problem != nil {
		return nil, problem.in(name)
	}
	return Read(directory(filepath.Dir(name)), name, data)
}

// LoadFS is Load for a file of a file system, such as an embedded one.
func LoadFS(fsys fs.FS, name string) (*Scenario, error) {
	data, problem := readText(
		func() (fs.FileInfo, error) { return fs.Stat(fsys, name) },
		func() (fs.File, error) { return fsys.Open(name) })
	if problem != nil {
		return nil, problem.in(name)
	}
	folder, err := fs.Sub(fsys, path.Dir(name))
	if err != nil {
		return nil, openProblem(err).in(name)
	}
	return Read(folder, name, data)
}

// Read reads the text of a scenario that was called name; the files that it
// names are looked for in fsys. The error is Errors.
func Read(fsys fs.FS, name string, data []byte) (*Scenario, error) {
	d, err := Parse(fsys, name, data)
	if err != nil {
		return nil, err
	}
	return d.Scenario()
}

// Parse reads a scenario's text into a Document, as far as it is YAML. The
// error is Errors.
func Parse(fsys fs.FS, name string, data []byte) (*Document, error) {
	d := &Document{files: &folder{fsys: fsys, scenario: name}, text: string(data)}
	if len(data) > maxFileBytes {
		return nil, tooLarge.in(name)
	}
	plain, problem := plainText(data)
	if problem != nil {
		return nil, problem.in(name)
	}
	root, errs := parseTree(name, plain)
	if len(errs) > 0 {
		return nil, errs.sorted(name)
	}
	d.root = root
	return d, nil
}

// Scenario reads the document with all its compared cases. The error is
// Errors.
func (d *Document) Scenario() (*Scenario, error) {
	r := d.read(d.root)
	r.s.Compare = d.cases(r)
	if len(r.errs) > 0 {
		return nil, r.errs.sorted(d.files.scenario)
	}
	return r.s, nil
}

// With returns the scenario's file read again with some entries changed, its
// compared cases included. The error is Errors, placed where the file states
// the entries, or what they stand in. Numbers that were set in s itself are
// not kept.
func (s *Scenario) With(changes ...Change) (*Scenario, error) {
	d, err := s.document.With(changes...)
	if err != nil {
		return nil, err
	}
	return d.Scenario()
}

// With returns a copy of the document with some entries changed; a value is
// written as in the file, a group in braces. Setting one of several entries
// that exclude each other removes the others. The error is Errors.
func (d *Document) With(changes ...Change) (*Document, error) {
	edits, errs := d.edits(changes)
	if len(errs) == 0 {
		c := *d
		c.root, errs = d.edited(d.root, edits)
		if len(errs) == 0 {
			return &c, nil
		}
	}
	return nil, errs.sorted(d.files.scenario)
}
