//go:build !linux

package writer

import "os"

// exchange swaps two folders in one step; ok is false: this system cannot.
func exchange(a, b string) (ok bool, err error) { return false, nil }

// renameNew renames a folder to a name that was found free a moment ago.
func renameNew(from, to string) error { return os.Rename(from, to) }
