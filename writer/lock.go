package writer

import (
	"errors"
	"fmt"
	"os"
	"syscall"
)

// lock is a file that one run at a time holds. The system lets go of it when
// the process ends, however it ends.
type lock struct {
	path string
	f    *os.File
}

// takeLock takes the lock at path, or fails at once with ErrBusy.
func takeLock(path string) (*lock, error) {
	for {
		f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE|syscall.O_NOFOLLOW, 0o666)
		if errors.Is(err, syscall.ELOOP) || errors.Is(err, syscall.EISDIR) {
			return nil, fmt.Errorf("%w: a link or a folder stands where the lock is to be: no run has made it, take it away", err)
		}
		if err != nil {
			return nil, err
		}
		if err := syscall.Flock(int(f.Fd()), syscall.LOCK_EX|syscall.LOCK_NB); err != nil {
			if errors.Is(err, syscall.EWOULDBLOCK) {
				err = ErrBusy
			}
			return nil, errors.Join(err, f.Close())
		}
		// The holder before may have removed the file after it was opened here:
		// then this lock is on a file that nobody else can find.
		held, err := f.Stat()
		if err != nil {
			return nil, errors.Join(err, f.Close())
		}
		found, err := os.Lstat(path)
		if ignoreAbsent(err) != nil {
			return nil, errors.Join(err, f.Close())
		}
		if err == nil && os.SameFile(held, found) {
			return &lock{path, f}, nil
		}
		f.Close()
	}
}

// release removes the lock file and lets go of it, in this order: see takeLock.
func (l *lock) release() error {
	return errors.Join(os.Remove(l.path), l.f.Close())
}
