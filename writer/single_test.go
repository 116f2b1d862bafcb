package writer

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"testing"
)

func TestWriteFile(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "x.csv")
	put := func(text string, fail error) func(io.Writer) error {
		return func(w io.Writer) error { _, err := io.WriteString(w, text); return errors.Join(err, fail) }
	}
	holds := func(want string) {
		t.Helper()
		got, err := os.ReadFile(path)
		if err != nil || string(got) != want {
			t.Errorf("the file holds %q (%v), want %q", got, err, want)
		}
		if entries, _ := os.ReadDir(dir); len(entries) != 1 {
			t.Errorf("%d files in the folder", len(entries))
		}
	}
	bad := errors.New("bad")
	if err := WriteFile(path, false, put("half", bad)); !errors.Is(err, bad) {
		t.Errorf("error %v", err)
	}
	if _, err := os.Lstat(path); err == nil {
		t.Error("half a file has appeared")
	}
	if err := WriteFile(path, false, put("one", nil)); err != nil {
		t.Fatal(err)
	}
	holds("one")
	if err := WriteFile(path, false, put("two", nil)); !errors.Is(err, ErrExists) {
		t.Errorf("error %v", err)
	}
	holds("one")
	if err := WriteFile(path, true, put("half", bad)); !errors.Is(err, bad) {
		t.Errorf("error %v", err)
	}
	holds("one")
	if err := os.WriteFile(filepath.Join(dir, ".x.csv.nightbook-part"), []byte("left over"), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := WriteFile(path, true, put("three", nil)); err != nil {
		t.Fatal(err)
	}
	holds("three")
	if err := WriteFile(filepath.Join(dir, "nowhere", "x.csv"), false, put("", nil)); err == nil {
		t.Error("a file was written into a folder that is not there")
	}
}
