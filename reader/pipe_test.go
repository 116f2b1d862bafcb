//go:build unix

package reader

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// A pipe that nobody writes to is refused, and not waited for.
func TestPipe(t *testing.T) {
	for _, name := range []string{"run.toml", "positions.csv", "underlyings.csv"} {
		dir := folderOf(t, nil)
		path := filepath.Join(dir, name)
		if err := os.Remove(path); err != nil {
			t.Fatal(err)
		}
		if err := syscall.Mkfifo(path, 0o600); err != nil {
			t.Skip(err)
		}
		if _, err := readAll(dir); !errors.Is(err, errNotRegular) || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
