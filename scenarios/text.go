package scenarios

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"unicode/utf8"
)

// fileProblem is what keeps a file from being read at all.
type fileProblem struct {
	at            place
	problem, hint string
}

// in returns the problem as the one error of a file.
func (p *fileProblem) in(name string) Errors {
	return Errors{{name, p.at.line, p.at.column, "", p.problem, p.hint}}
}

var tooLarge = largerThan(maxFileBytes)

func largerThan(most int64) fileProblem {
	return fileProblem{place{1, 1}, fmt.Sprintf("the file is larger than %d KiB", most>>10), "is it the right file?"}
}

// ReadFile reads a whole regular file of bounded size, for one that no scenario
// names. The error is Errors.
func ReadFile(name string, mostBytes int64) ([]byte, error) {
	data, problem := readBounded(mostBytes,
		func() (fs.FileInfo, error) { return os.Stat(name) },
		func() (fs.File, error) { return os.Open(name) })
	if problem != nil {
		return nil, problem.in(name)
	}
	return data, nil
}

// readText reads a whole file of the size that a scenario may have.
func readText(stat func() (fs.FileInfo, error), open func() (fs.File, error)) ([]byte, *fileProblem) {
	return readBounded(maxFileBytes, stat, open)
}

// readBounded reads a whole regular file of bounded size. It opens nothing that
// is not a regular file, since a pipe or a device might never end.
func readBounded(most int64, stat func() (fs.FileInfo, error), open func() (fs.File, error)) ([]byte, *fileProblem) {
	large := largerThan(most)
	info, err := stat()
	switch {
	case err != nil:
		return nil, openProblem(err)
	case info.IsDir():
		return nil, &fileProblem{place{1, 1}, "this is a folder, not a file", "name the file in it"}
	case !info.Mode().IsRegular():
		return nil, &fileProblem{place{1, 1}, "this is not a regular file", "save the text to a file first"}
	case info.Size() > most:
		return nil, &large
	}
	f, err := open()
	if err != nil {
		return nil, openProblem(err)
	}
	defer f.Close()
	data, err := io.ReadAll(io.LimitReader(f, most+1)) // it may have grown
	switch {
	case err != nil:
		return nil, openProblem(err)
	case int64(len(data)) > most:
		return nil, &large
	}
	return data, nil
}

func openProblem(err error) *fileProblem {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return &fileProblem{place{1, 1}, "there is no such file", "check the name and the folder"}
	case errors.Is(err, fs.ErrPermission):
		return &fileProblem{place{1, 1}, "no permission to read the file", "check its permissions"}
	}
	return &fileProblem{place{1, 1}, "the file cannot be read", "check the name and the folder"}
}

var (
	utf8Mark = []byte{0xEF, 0xBB, 0xBF}
	utf16LE  = []byte{0xFF, 0xFE}
	utf16BE  = []byte{0xFE, 0xFF}
)

// plainText returns the text of a file without its byte order mark, or says
// why it is not plain UTF-8 text.
func plainText(data []byte) ([]byte, *fileProblem) {
	if bytes.HasPrefix(data, utf16LE) || bytes.HasPrefix(data, utf16BE) || looksUTF16(data) {
		return nil, &fileProblem{place{1, 1}, "the file is in UTF-16", "save it as UTF-8"}
	}
	data = bytes.TrimPrefix(data, utf8Mark)
	at := place{1, 1}
	for rest := data; len(rest) > 0; {
		r, size := utf8.DecodeRune(rest)
		switch {
		case r == 0:
			return nil, &fileProblem{at, "a binary file, not text", "is it the right file?"}
		case r == utf8.RuneError && size == 1:
			return nil, &fileProblem{at, "a binary file, or text in another encoding", "save it as UTF-8"}
		case !allowed(r):
			return nil, &fileProblem{at, fmt.Sprintf("a control character, U+%04X", r), "remove it"}
		case r == '\n':
			at = place{at.line + 1, 0}
		}
		at.column++
		rest = rest[size:]
	}
	return data, nil
}

// looksUTF16 finds UTF-16 without a mark: every second byte of the first
// characters is zero.
func looksUTF16(data []byte) bool {
	return len(data) >= 4 && (data[0] == 0 && data[1] != 0 && data[2] == 0 && data[3] != 0 ||
		data[0] != 0 && data[1] == 0 && data[2] != 0 && data[3] == 0)
}

// allowed reports whether YAML lets a character stand in a file.
func allowed(r rune) bool {
	return r == '\t' || r == '\n' || r == '\r' || r == 0x85 ||
		r >= 0x20 && r <= 0x7E || r >= 0xA0 && r < 0xFEFF || r > 0xFEFF && r < 0xFFFE || r >= 0x10000
}
