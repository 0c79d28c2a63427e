//go:build unix

package scenarios

import (
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// A pipe that nobody writes to is refused and not waited for.
func TestPipeIsRefused(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"pipe.yaml", "pipe.csv"} {
		if err := syscall.Mkfifo(filepath.Join(dir, name), 0o600); err != nil {
			t.Skip(err)
		}
	}
	write(t, filepath.Join(dir, "x.yaml"), replaced(t, "tangle: 0.86", "density_matrix: pipe.csv"))
	for _, name := range []string{"pipe.yaml", "x.yaml"} {
		done := make(chan error, 1)
		go func() {
			_, err := Load(filepath.Join(dir, name))
			done <- err
		}()
		select {
		case err := <-done:
			if err == nil || !strings.Contains(err.Error(), "not a regular file") {
				t.Errorf("%s: %v", name, err)
			}
		case <-time.After(5 * time.Second):
			t.Fatalf("%s: still waiting", name)
		}
	}
}
