package csv

import (
	"bytes"
	"errors"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

// slow writes late, and notices if two write at a time or after the end.
type slow struct {
	t    *testing.T
	busy atomic.Bool
	over atomic.Bool
	buf  bytes.Buffer
	fail int // bytes to take
}

func (s *slow) Write(p []byte) (int, error) {
	if s.busy.Swap(true) {
		s.t.Error("two at a time")
	}
	defer s.busy.Store(false)
	time.Sleep(time.Millisecond)
	if s.over.Load() {
		s.t.Error("written after the end")
	}
	if s.buf.Len() > s.fail {
		return 0, errors.New("disk full")
	}
	return s.buf.Write(p)
}

// The frame is the caller's again when Write returns, and rows come in order.
func TestWritesBeside(t *testing.T) {
	whole := invent.Rows(0, 4000, schema.NewDict())
	want := write(t, Options{}, whole)
	frames := invent.Slices(whole, 1000)
	s := &slow{t: t, fail: len(want)}
	w, err := New(s, invent.Table, Options{Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range frames {
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
		for i := range f.Cols {
			v := &f.Cols[i]
			clear(v.Codes)
			clear(v.Choices)
			clear(v.Floats)
			clear(v.Ints)
			clear(v.Dates)
			clear(v.Bools)
			clear(v.Strings.End)
			clear(v.Strings.Start)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	s.over.Store(true)
	if s.buf.String() != want {
		t.Error("other bytes")
	}
}

func TestWriteErrorsBeside(t *testing.T) {
	whole := invent.Rows(0, 4000, schema.NewDict())
	for _, fail := range []int{1000, 100_000, 300_000} {
		s := &slow{t: t, fail: fail}
		w, err := New(s, invent.Table, Options{Workers: 2})
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range invent.Slices(whole, 1000) {
			if err = w.Write(f); err != nil {
				break
			}
		}
		closed := w.Close()
		s.over.Store(true)
		if closed == nil || !strings.Contains(closed.Error(), "disk full") || err != nil && !errors.Is(closed, err) {
			t.Errorf("%d bytes: Write returns %v, Close %v", fail, err, closed)
		}
	}
}

func TestAbort(t *testing.T) {
	s := &slow{t: t, fail: 1 << 30}
	w, err := New(s, invent.Table, Options{Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	w.Abort()
	if err := w.Write(invent.Rows(0, 4000, schema.NewDict())); err != nil {
		t.Fatal(err)
	}
	w.Abort()
	s.over.Store(true)
	w.Abort()
	time.Sleep(5 * time.Millisecond)
}
