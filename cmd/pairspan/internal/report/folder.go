package report

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"sync"

	"pairspan/scenarios/plan"
)

// Page is the name of the report in its folder.
const Page = "report.html"

// file is one of the files that a folder of results holds.
type file[T any] struct {
	name  string
	write func(io.Writer, T) error
}

// planFiles are those of a plan, the page last.
var planFiles = []file[*plan.Plan]{{"plan.json", JSON}, {"curve.csv", CSV}, {Page, HTML}}

// Folder writes plan.json, curve.csv and report.html into dir, which is made
// where missing, and against.csv where an entry was asked for. Each is written beside its place and then renamed, the old
// ones staying whole until all are written.
func Folder(dir string, p *plan.Plan) error {
	files := planFiles
	if p.Against != nil {
		files = append([]file[*plan.Plan]{{"against.csv", AgainstCSV}}, files...)
	}
	return writeFolder(dir, files, p)
}

func writeFolder[T any](dir string, files []file[T], of T) (err error) {
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return err
	}
	for _, f := range files {
		// What cannot be replaced is found before anything is.
		if info, err := os.Stat(filepath.Join(dir, f.name)); err == nil && info.IsDir() {
			return fmt.Errorf("%s: a folder stands where the file belongs", filepath.Join(dir, f.name))
		}
	}
	texts, err := writeAll(files, of)
	if err != nil {
		return err
	}
	var written []string
	defer func() {
		if err != nil {
			for _, name := range written {
				os.Remove(name)
			}
		}
	}()
	for i, f := range files {
		beside := filepath.Join(dir, "."+f.name+".part")
		written = append(written, beside)
		if err := os.WriteFile(beside, texts[i].Bytes(), 0o644); err != nil {
			return err
		}
	}
	for i, f := range files {
		if err := os.Rename(written[i], filepath.Join(dir, f.name)); err != nil {
			return err
		}
	}
	return nil
}

// writeAll writes the files in memory, side by side: none depends on another.
func writeAll[T any](files []file[T], of T) ([]bytes.Buffer, error) {
	texts, errs := make([]bytes.Buffer, len(files)), make([]error, len(files))
	var wait sync.WaitGroup
	for i, f := range files {
		wait.Go(func() {
			if err := f.write(&texts[i], of); err != nil {
				errs[i] = fmt.Errorf("%s: %w", f.name, err)
			}
		})
	}
	wait.Wait()
	return texts, errors.Join(errs...)
}
