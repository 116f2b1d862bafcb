package writer

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"syscall"
)

// WriteFile makes the file path of what write writes: whole, by one step, or
// not at all. It fails with ErrExists if the file is there and replace is false,
// with ErrBusy if another run is writing it, and if path is a folder.
func WriteFile(path string, replace bool, write func(io.Writer) error) (err error) {
	if info, err := os.Lstat(path); err == nil && info.IsDir() {
		return fmt.Errorf("%s: it is a folder: give the name of a file", path)
	} else if err == nil && !replace {
		return fmt.Errorf("%s: %w", path, ErrExists)
	}
	if _, err := os.Stat(filepath.Dir(path)); err != nil {
		return fmt.Errorf("result file %s: %w: make its folder first, or give another", path, err)
	}
	lock, err := takeLock(filepath.Join(filepath.Dir(path), "."+filepath.Base(path)+lockSuffix))
	if err != nil {
		return fmt.Errorf("%s: %w", path, err)
	}
	defer func() { err = errors.Join(err, lock.release()) }()
	part := filepath.Join(filepath.Dir(path), "."+filepath.Base(path)+partSuffix)
	if err := os.Remove(part); err != nil && !errors.Is(err, fs.ErrNotExist) { // of a killed run
		return fmt.Errorf("leftover of an earlier run: %w", err)
	}
	f, err := os.OpenFile(part, os.O_WRONLY|os.O_CREATE|os.O_EXCL|syscall.O_NOFOLLOW, 0o666)
	if err != nil {
		return fmt.Errorf("result file: %w", err)
	}
	defer os.Remove(part) // gone already where all went well
	w := bufio.NewWriterSize(f, 1<<20)
	if err := errors.Join(write(w), w.Flush(), f.Sync(), f.Close()); err != nil {
		return err
	}
	if !replace { // a hard link fails where a rename would replace
		err := os.Link(part, path)
		if errors.Is(err, fs.ErrExist) {
			return fmt.Errorf("%s: %w", path, ErrExists)
		}
		if err == nil {
			return syncDir(filepath.Dir(path))
		}
	}
	if err := os.Rename(part, path); err != nil {
		return fmt.Errorf("putting the result in place: %w", err)
	}
	return syncDir(filepath.Dir(path))
}
