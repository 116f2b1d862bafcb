package writer

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"os"
	"syscall"

	"nightbook/schema"
)

// File is a file of results in the making. It hashes and counts what is
// written to it. It is for one goroutine at a time.
type File struct {
	f      *os.File
	sum    hash.Hash
	failed error
	closed bool
	output schema.OutputFile

	started int64 // how far the system has been told to write to the disk
}

// writebackBytes is how much is written to a file before the system is told to
// take it to the disk: what waits until the end is what Close waits for.
const writebackBytes = 8 << 20

func createFile(path, name string) (*File, error) {
	// A new file only, and never through a link that somebody put there.
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL|syscall.O_NOFOLLOW, 0o666)
	if err != nil {
		return nil, fmt.Errorf("result file: %w", err)
	}
	return &File{f: f, sum: sha256.New(), output: schema.OutputFile{Name: name}}, nil
}

// Write appends p to the file.
func (f *File) Write(p []byte) (int, error) {
	n, err := f.f.Write(p)
	f.sum.Write(p[:n])
	f.output.Bytes += int64(n)
	if ahead := f.output.Bytes - f.started; ahead >= writebackBytes {
		startWriteback(f.f, f.started, ahead)
		f.started = f.output.Bytes
	}
	if err != nil {
		f.failed = err
	}
	return n, err
}

// SetRows notes how many rows of data the file holds.
func (f *File) SetRows(n int64) { f.output.Rows = n }

// Close forces the file to the disk. A file that a Write has failed on cannot
// be closed to become part of the results.
func (f *File) Close() error {
	if f.closed {
		return nil
	}
	if f.failed != nil {
		return errors.Join(f.failed, f.f.Close())
	}
	if err := errors.Join(f.f.Sync(), f.f.Close()); err != nil {
		f.failed = err
		return err
	}
	f.output.SHA256 = hex.EncodeToString(f.sum.Sum(nil))
	f.closed = true
	return nil
}

// discard lets go of the file: its folder is about to be removed.
func (f *File) discard() {
	if !f.closed {
		f.f.Close()
	}
}
