package main

import (
	"errors"
	"io/fs"
	"syscall"

	"nightbook/writer"
)

// remedies say what to do about errors that come from below without a remedy.
// The first that fits is told.
var remedies = []struct {
	of   error
	hint string
}{
	{writer.ErrBusy, "wait until that run has ended, or give another --out; the lock is the system's and ends with the process that holds it, however that ends: the file .DATE.nightbook-lock alone locks nothing"},
	{writer.ErrNotResults, "give another --out, or move away what stands there"},
	{syscall.ENOSPC, "make room on the disk, or give an --out on another; of this run nothing is left, and earlier results are as they were"},
	{syscall.EDQUOT, "make room within your quota, or give an --out elsewhere; of this run nothing is left, and earlier results are as they were"},
	{syscall.EFBIG, "the system lets no file become so large (ulimit -f); of this run nothing is left, and earlier results are as they were"},
	{syscall.EROFS, "give an --out on a disk that can be written"},
	{fs.ErrPermission, "let the user of this run read the snapshot and write the folder of the results, or give another --out"},
}

// remedyFor returns the remedy of an error; "" is none.
func remedyFor(err error) string {
	for _, r := range remedies {
		if errors.Is(err, r.of) {
			return r.hint
		}
	}
	return ""
}
