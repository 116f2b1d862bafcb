package writer

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"nightbook/schema"
)

// Beside OUT/NAME stand, while a run is at work, a lock, the folder being
// filled, and, for a moment on systems that cannot exchange two folders, the
// folder being replaced. Only these exact names are ever removed.
const (
	lockSuffix = ".nightbook-lock"
	partSuffix = ".nightbook-part"
	oldSuffix  = ".nightbook-old"
)

// ErrExists is returned where a folder of results is already there and may not
// be replaced.
var ErrExists = errors.New("already exists")

// ErrNotResults is returned where something other than a folder of results
// bears the name of the folder to write.
var ErrNotResults = errors.New("is not a folder of results, and is never replaced")

// ErrBusy is returned where another run is writing the same folder.
var ErrBusy = errors.New("another run is writing it")

// Folder is a folder of results in the making. It appears under its name whole,
// by one rename, when it is committed; until then, and after Abort, there is
// what was there before.
type Folder struct {
	out, name string
	replace   bool
	lock      *lock
	exchange  func(a, b string) (bool, error) // a field so that tests can do without

	mu    sync.Mutex
	files []*File
	done  bool
}

// NewFolder starts the folder OUT/NAME, making OUT if need be. It fails with
// ErrNotResults if OUT/NAME is there and is not a folder of results, with
// ErrExists if it is one and replace is false, and with ErrBusy if another run
// is writing OUT/NAME. What a killed run left behind is removed.
func NewFolder(out, name string, replace bool) (*Folder, error) {
	if !plainName(name) {
		return nil, fmt.Errorf("result folder %q: not a plain name", name)
	}
	if err := os.MkdirAll(out, 0o777); err != nil {
		return nil, fmt.Errorf("output folder: %w", err)
	}
	f := &Folder{out: out, name: name, replace: replace, exchange: exchange}
	var err error
	if f.lock, err = takeLock(f.hidden(lockSuffix)); err != nil {
		return nil, fmt.Errorf("%s: %w", f.path(), err)
	}
	if err := f.start(); err != nil {
		return nil, errors.Join(err, f.lock.release())
	}
	return f, nil
}

func (f *Folder) start() error {
	if err := f.clearStale(); err != nil {
		return err
	}
	if _, err := f.checkTarget(); err != nil {
		return err
	}
	return os.Mkdir(f.hidden(partSuffix), 0o777)
}

// clearStale removes what a killed run left, and puts back the old results if
// it was killed between the two renames that replace them.
func (f *Folder) clearStale() error {
	if err := os.RemoveAll(f.hidden(partSuffix)); err != nil {
		return fmt.Errorf("leftover of an earlier run: %w", err)
	}
	old := f.hidden(oldSuffix)
	if _, err := os.Lstat(old); err != nil {
		return ignoreAbsent(err)
	}
	if _, err := os.Lstat(f.path()); errors.Is(err, fs.ErrNotExist) {
		return os.Rename(old, f.path())
	}
	return os.RemoveAll(old)
}

// checkTarget reports whether OUT/NAME is there, as an error where it may not
// be replaced.
func (f *Folder) checkTarget() (exists bool, err error) {
	info, err := os.Lstat(f.path())
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return false, nil
	case err != nil:
		return false, err
	case !info.IsDir():
		return true, fmt.Errorf("%s: %w", f.path(), ErrNotResults)
	}
	if err := checkResults(f.path()); err != nil {
		return true, fmt.Errorf("%s: %w", f.path(), err)
	}
	if !f.replace {
		return true, fmt.Errorf("%s: %w", f.path(), ErrExists)
	}
	return true, nil
}

// Create starts a file of the folder. The name must be a plain base name that
// is not in the folder yet. It may be called by several goroutines.
func (f *Folder) Create(name string) (*File, error) {
	if !plainName(name) {
		return nil, fmt.Errorf("result file %q: not a plain name", name)
	}
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.done {
		return nil, fmt.Errorf("result file %s: the folder is finished", name)
	}
	file, err := createFile(filepath.Join(f.hidden(partSuffix), name), name)
	if err != nil {
		return nil, err
	}
	f.files = append(f.files, file)
	return file, nil
}

// Outputs lists the closed files of the folder, by name.
func (f *Folder) Outputs() []schema.OutputFile {
	f.mu.Lock()
	defer f.mu.Unlock()
	var out []schema.OutputFile
	for _, file := range f.files {
		if file.closed {
			out = append(out, file.output)
		}
	}
	slices.SortFunc(out, func(a, b schema.OutputFile) int { return strings.Compare(a.Name, b.Name) })
	return out
}

// Commit makes the folder appear under its name. Every file must be closed and
// whole. If it fails before the folder has appeared, call Abort.
func (f *Folder) Commit() error {
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.done {
		return fmt.Errorf("%s: the folder is finished", f.path())
	}
	for _, file := range f.files {
		if !file.closed {
			return fmt.Errorf("result file %s: still open, or its writing failed", file.output.Name)
		}
	}
	if err := syncDir(f.hidden(partSuffix)); err != nil {
		return err
	}
	exists, err := f.checkTarget()
	if err != nil {
		return err
	}
	if exists {
		err = f.swap()
	} else {
		err = renameNew(f.hidden(partSuffix), f.path())
	}
	if err != nil {
		return fmt.Errorf("putting results in place: %w", err)
	}
	f.done = true
	return errors.Join(syncDir(f.out), f.clearStale(), f.lock.release())
}

// swap puts the new folder in the place of the old one. Afterwards the old one
// bears one of the hidden names.
func (f *Folder) swap() error {
	part := f.hidden(partSuffix)
	ok, err := f.exchange(part, f.path())
	if ok || err != nil {
		return err
	}
	old := f.hidden(oldSuffix)
	if err := os.Rename(f.path(), old); err != nil {
		return err
	}
	if err := renameNew(part, f.path()); err != nil {
		return errors.Join(err, os.Rename(old, f.path()))
	}
	return nil
}

// Abort throws the folder away. After Commit it does nothing.
func (f *Folder) Abort() error {
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.done {
		return nil
	}
	f.done = true
	for _, file := range f.files {
		file.discard()
	}
	return errors.Join(os.RemoveAll(f.hidden(partSuffix)), f.lock.release())
}

func (f *Folder) path() string { return filepath.Join(f.out, f.name) }

func (f *Folder) hidden(suffix string) string { return filepath.Join(f.out, "."+f.name+suffix) }

// plainName reports whether name can only be an entry of the folder it is
// joined to, on any system.
func plainName(name string) bool {
	return name != "" && name[0] != '.' && !strings.ContainsAny(name, "/\\:\x00")
}

func ignoreAbsent(err error) error {
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	return err
}

func syncDir(path string) error {
	d, err := os.Open(path)
	if err != nil {
		return err
	}
	return errors.Join(d.Sync(), d.Close())
}
