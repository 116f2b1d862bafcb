package main

import (
	"fmt"
	"io/fs"
	"strings"
	"syscall"
	"testing"

	"nightbook/writer"
)

// Errors from below are told with what to do, and a remedy that comes with an
// error is told before any of these.
func TestRemedies(t *testing.T) {
	for _, c := range []struct {
		err  error
		want string
	}{
		{fmt.Errorf("out/2026-01-05: %w", writer.ErrBusy), "hint: wait until that run has ended, or give another --out"},
		{fmt.Errorf("out/2026-01-05: %w", writer.ErrNotResults), "hint: give another --out"},
		{&fs.PathError{Op: "write", Path: "x", Err: syscall.ENOSPC}, "hint: make room on the disk"},
		{&fs.PathError{Op: "open", Path: "x", Err: syscall.EROFS}, "hint: give an --out on a disk that can be written"},
		{&fs.PathError{Op: "open", Path: "x", Err: syscall.EACCES}, "hint: let the user of this run read the snapshot"},
		{&hinted{writer.ErrBusy, "its own"}, "hint: its own\n"},
	} {
		var b strings.Builder
		newConsole(&b, "text").problem(c.err, exitFailed)
		if !strings.Contains(b.String(), "\n"+c.want) || strings.Count(b.String(), "hint: ") != 1 {
			t.Errorf("%v is told as %q, want %q", c.err, b.String(), c.want)
		}
	}
}
