package parquet

import (
	"sync/atomic"
	"testing"
	"time"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

// slow is a disk that takes its time over the data of a row group, and is to be
// left alone when it is over.
type slow struct {
	t    *testing.T
	busy atomic.Int64 // bytes that came
	over atomic.Bool
}

func (s *slow) Write(b []byte) (int, error) {
	if len(b) > fewBytes {
		time.Sleep(time.Millisecond)
	}
	if s.over.Load() {
		s.t.Error("written when it is over")
	}
	s.busy.Add(int64(len(b)))
	return len(b), nil
}

// A row group is written beside what comes after it: when Abort returns, none is.
func TestAbort(t *testing.T) {
	s := &slow{t: t}
	w, err := New(s, invent.Table, Options{Workers: 2, GroupRows: pageRows})
	if err != nil {
		t.Fatal(err)
	}
	dict := schema.NewDict()
	if err := w.Write(invent.Rows(0, 2*pageRows+100, dict)); err != nil {
		t.Fatal(err)
	}
	if w.writing == nil {
		t.Fatal("no row group is being written")
	}
	w.Abort()
	s.over.Store(true)
	before := s.busy.Load()
	w.Abort()
	if w.Write(invent.Rows(0, 100, dict)) == nil || w.Close() == nil {
		t.Error("a table that was given up can be written")
	}
	time.Sleep(5 * time.Millisecond)
	if before != s.busy.Load() || before < 1000 {
		t.Errorf("%d bytes, and then %d", before, s.busy.Load())
	}
	done, err := New(&slow{t: t}, invent.Table, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := done.Close(); err != nil {
		t.Fatal(err)
	}
	done.Abort()
}
