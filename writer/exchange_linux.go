package writer

import (
	"errors"
	"os"

	"golang.org/x/sys/unix"
)

// exchange swaps two folders in one step; ok is false where the file system
// cannot do that.
func exchange(a, b string) (ok bool, err error) {
	err = unix.Renameat2(unix.AT_FDCWD, a, unix.AT_FDCWD, b, unix.RENAME_EXCHANGE)
	if cannot(err) {
		return false, nil
	}
	return err == nil, err
}

// renameNew renames a folder to a name that is free. A plain rename would
// silently take the place of an empty folder.
func renameNew(from, to string) error {
	err := unix.Renameat2(unix.AT_FDCWD, from, unix.AT_FDCWD, to, unix.RENAME_NOREPLACE)
	if cannot(err) {
		return os.Rename(from, to)
	}
	if errors.Is(err, unix.EEXIST) {
		return &os.LinkError{Op: "rename", Old: from, New: to, Err: ErrExists}
	}
	return err
}

func cannot(err error) bool {
	return errors.Is(err, unix.ENOSYS) || errors.Is(err, unix.EINVAL) || errors.Is(err, unix.ENOTSUP)
}
