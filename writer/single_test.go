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

// Of two that write one file at once the second is refused, and the first's is whole.
func TestWriteFileTwice(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "x.csv")
	err := WriteFile(path, false, func(w io.Writer) error {
		if err := WriteFile(path, false, func(w io.Writer) error { _, err := io.WriteString(w, "other"); return err }); !errors.Is(err, ErrBusy) {
			t.Errorf("the second: %v", err)
		}
		_, err := io.WriteString(w, "whole")
		return err
	})
	got, _ := os.ReadFile(path)
	if err != nil || string(got) != "whole" {
		t.Errorf("the first: %v, the file holds %q", err, got)
	}
	if entries, _ := os.ReadDir(dir); len(entries) != 1 {
		t.Errorf("%d files in the folder", len(entries))
	}
}

// A link is replaced and what it leads to is left; a folder is never replaced.
func TestWriteFileOverLink(t *testing.T) {
	dir := t.TempDir()
	target, link := filepath.Join(dir, "target"), filepath.Join(dir, "x.csv")
	if err := errors.Join(os.WriteFile(target, []byte("kept"), 0o666), os.Symlink("target", link)); err != nil {
		t.Fatal(err)
	}
	put := func(w io.Writer) error { _, err := io.WriteString(w, "new"); return err }
	if err := WriteFile(link, true, put); err != nil {
		t.Error(err)
	}
	kept, _ := os.ReadFile(target)
	made, _ := os.ReadFile(link)
	if string(kept) != "kept" || string(made) != "new" {
		t.Errorf("the target holds %q, the file %q", kept, made)
	}
	if err := WriteFile(dir, true, put); err == nil {
		t.Error("a folder was replaced")
	}
}
