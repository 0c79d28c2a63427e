package scenarios

import (
	"io/fs"
	"os"
	"path"
	"regexp"
	"strings"
	"sync"
)

// folder is where a scenario lies: the files that it names must lie inside.
// Each is read once, so that all cases of a plan see the same text.
type folder struct {
	fsys     fs.FS
	scenario string // the scenario's own name, as the person gave it

	mu   sync.Mutex
	read map[string]file
}

type file struct {
	text    []byte
	problem *fileProblem
}

// get returns the text of a file in the folder.
func (f *folder) get(name string) ([]byte, *fileProblem) {
	f.mu.Lock()
	defer f.mu.Unlock()
	known, is := f.read[name]
	if !is {
		known.text, known.problem = readText(
			func() (fs.FileInfo, error) { return fs.Stat(f.fsys, name) },
			func() (fs.File, error) { return f.fsys.Open(name) })
		if f.read == nil {
			f.read = map[string]file{}
		}
		f.read[name] = known
	}
	return known.text, known.problem
}

// shown returns a file's name as an error shows it: beside the scenario.
func (f *folder) shown(name string) string {
	i := strings.LastIndexAny(f.scenario, `/\`)
	return f.scenario[:i+1] + name
}

var drive = regexp.MustCompile(`^[A-Za-z]:`)

// inside returns the path of a file that a scenario names, or says why it
// cannot lie in the scenario's folder.
func inside(name string) (clean, problem, hint string) {
	const rule = "copy the file beside the scenario and name it alone"
	switch {
	case strings.HasPrefix(name, "/") || drive.MatchString(name) || strings.HasPrefix(name, `\`):
		return "", show(name) + " does not lie in the scenario's folder", rule
	case strings.Contains(name, `\`):
		return "", show(name) + " has backslashes", "write / between folder and file"
	}
	clean = path.Clean(name)
	if !fs.ValidPath(clean) {
		return "", show(name) + " leaves the scenario's folder", rule
	}
	return clean, "", ""
}

// directory is a folder of the machine. Nothing outside it can be opened
// through it, not even by a symbolic link.
type directory string

// Open opens a file in the directory.
func (d directory) Open(name string) (fs.File, error) {
	root, err := os.OpenRoot(string(d))
	if err != nil {
		return nil, err
	}
	defer root.Close()
	return root.Open(name)
}

// Stat describes a file without opening it.
func (d directory) Stat(name string) (fs.FileInfo, error) {
	root, err := os.OpenRoot(string(d))
	if err != nil {
		return nil, err
	}
	defer root.Close()
	return root.Stat(name)
}
