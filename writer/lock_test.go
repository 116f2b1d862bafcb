package writer

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
)

// What no run has made is not taken for a lock, nor followed.
func TestLockIsAFile(t *testing.T) {
	dir := t.TempDir()
	link, target := filepath.Join(dir, "link"), filepath.Join(dir, "target")
	if err := os.Symlink(target, link); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{link, dir} {
		if l, err := takeLock(path); err == nil || !strings.Contains(err.Error(), "stands where the lock is to be") {
			t.Errorf("%v %v", l, err)
		}
	}
	if _, err := os.Lstat(target); err == nil {
		t.Error("the link was followed")
	}
}

// However many take and release the lock, one at a time holds it, though its
// file comes and goes.
func TestLockHasOneHolder(t *testing.T) {
	path := filepath.Join(t.TempDir(), "lock")
	var holders, taken, busy atomic.Int64
	var wg sync.WaitGroup
	for range 8 {
		wg.Go(func() {
			for range 300 {
				l, err := takeLock(path)
				if errors.Is(err, ErrBusy) {
					busy.Add(1)
					continue
				}
				if err != nil {
					t.Error(err)
					return
				}
				if n := holders.Add(1); n != 1 {
					t.Errorf("%d hold the lock", n)
				}
				taken.Add(1)
				holders.Add(-1)
				if err := l.release(); err != nil {
					t.Error(err)
				}
			}
		})
	}
	wg.Wait()
	if taken.Load() == 0 {
		t.Error("nobody got the lock")
	}
	if _, err := os.Lstat(path); err == nil {
		t.Error("the lock file is left behind")
	}
}
