package main

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"runtime/debug"
	"runtime/metrics"
	"strconv"
	"strings"
	"time"

	"nightbook/schema"
	"nightbook/writer/parquet"
)

// What the parts of a run take, in bytes: measured, and rounded up.
const (
	mib = 1 << 20

	programMemory  = 24 * mib // the program itself, and what the collector is behind
	jobMemory      = 6 * mib  // a batch on its way, with its piece of the file
	workbookMemory = 40 * mib // report.xlsx: the sheets are on the disk
	csvMemory      = 8 * mib
)

const (
	pieceTexts  = 1 * mib // of jobMemory
	muchReading = 4 * mib // worth a word
)

// input is what the market and the positions say of the memory that they take.
type input interface {
	Market() int64
	Memory() (reading, piece int64, err error)
	LimitTexts(ceiling, bytes int64)
}

// share is how a run divides the memory it may take.
type share struct {
	workers    int
	groupRows  int   // of the row groups of Parquet files; 0: as many as usual
	groupBytes int64 // beyond which they end early
	live       int64 // bytes that may be in use at a time; 0: any number
}

// bound lowers the limits on what is read to what o.memory leaves, before
// anything is: no file may then ask for more than a share of it at once.
func (o *options) bound(cfg *schema.Config) {
	if o.memory == 0 {
		return
	}
	room := max(o.memory-programMemory, leastMarket)
	for _, x := range []struct {
		limit schema.Limit
		share int64
	}{
		{schema.HeldBytes, room / 4},     // the shared texts of a workbook take up to three times their markup
		{schema.WindowBytes, room / 4},   // zstd holds a window and what it unpacks
		{schema.PageBytes, room / 4},     // packed and unpacked, and growing
		{schema.MetadataBytes, room / 8}, // a footer is larger unpacked
		{schema.BatchBytes, room / 8},
		{schema.RowBytes, room / 32}, // rows come in blocks, and a workbook's have markup around them
	} {
		cfg.Limits.Under(o.memory, x.limit, x.share)
	}
}

// divide divides o.memory. It is called when the market is in memory and the
// positions are open. Row groups depend on the ceiling and on what is read, and
// not on the heap, so that the results are the same with any number of workers.
func (o *options) divide(columns []schema.Column, positions input) (share, error) {
	if o.memory == 0 {
		return share{workers: o.workers}, nil
	}
	reading, piece, err := positions.Memory()
	if err != nil {
		return share{}, err
	}
	job := jobMemory + piece
	fewest := reading + (1+moreJobs)*job
	runtime.GC() // what is left of reading is not what the market takes
	var m runtime.MemStats
	runtime.ReadMemStats(&m)
	market := int64(m.HeapAlloc)
	s, need := o.needed(columns, o.memory, fewest+positions.Market())
	if need+market+fewest > o.memory {
		// With more memory the row groups may be larger, which takes some of it.
		enough := o.memory
		for more := need; more+market+fewest > enough; {
			enough = (more + market + fewest + 2*mib) / mib * mib
			_, more = o.needed(columns, enough, fewest+positions.Market())
		}
		hint := "give --memory more, fewer --formats, or leave --memory away"
		if inputs := reading + (1+moreJobs)*piece; inputs >= muchReading {
			hint += fmt.Sprintf("; %d MiB of it are for the pages and dictionaries of the positions: a file written with smaller ones takes less", inputs/mib)
		}
		return s, &hinted{fmt.Errorf("--memory %s is too little for this run, which takes %d MiB", sizeText(o.memory), enough/mib), hint}
	}
	need += market + reading
	s.workers = int(min(int64(o.workers), (o.memory-need)/job-moreJobs))
	// A piece's texts stand in it, in its batch, and in a page that is packed.
	jobs := int64(s.workers + moreJobs)
	positions.LimitTexts(o.memory, pieceTexts+(o.memory-need-jobs*job)/(2*jobs+4))
	most := o.memory - programMemory
	s.live = most / 8 * 7 // what is kept grows by more than it was, now and then
	debug.SetMemoryLimit(most)
	return s, nil
}

// needed returns the row groups under a ceiling, of which inputs are taken, and
// what a run takes beside those. Larger row groups than others are for what is
// left, and for half of the ceiling at most.
func (o *options) needed(columns []schema.Column, ceiling, inputs int64) (s share, need int64) {
	need = programMemory
	groups := false
	for _, f := range o.formats {
		switch f {
		case "xlsx":
			need += workbookMemory
		case "csv":
			need += csvMemory
		case "parquet":
			groups = true
		}
	}
	if groups {
		s.groupRows = parquet.GroupRows(columns, min(ceiling/2, ceiling-need-inputs))
		s.groupBytes = parquet.GroupBytes(columns, s.groupRows)
		need += parquet.Memory(columns, s.groupRows)
	}
	return s, need
}

// held looks at what the collector could not free when it last looked: names that
// differ from line to line are kept, and no collector can keep a ceiling for them.
type held struct {
	most   int64 // 0: any number of bytes
	sample [1]metrics.Sample
}

func newHeld(most int64) *held {
	return &held{most, [1]metrics.Sample{{Name: "/gc/heap/live:bytes"}}}
}

func (h *held) over() bool {
	if h.most == 0 {
		return false
	}
	metrics.Read(h.sample[:])
	return int64(h.sample[0].Value.Uint64()) > h.most
}

// marketWatch keeps the ceiling while the market is read and built.
type marketWatch struct {
	stop   chan struct{}
	over   chan error // what it found, once it has stopped
	err    error
	cancel context.CancelFunc
}

const (
	watchEvery  = 5 * time.Millisecond
	leastMarket = 32 * mib // below that it is told later, when it is known what the run takes
)

// watchMarket has the collector keep the ceiling from now on. What it returns is
// cancelled when it cannot, or when the watch is closed.
func (o *options) watchMarket(ctx context.Context) (context.Context, *marketWatch) {
	w := &marketWatch{stop: make(chan struct{}), over: make(chan error, 1), cancel: func() {}}
	if o.memory == 0 {
		w.over <- nil
		return ctx, w
	}
	ctx, w.cancel = context.WithCancel(ctx)
	most := max(o.memory-programMemory, leastMarket)
	debug.SetMemoryLimit(most)
	// A table that grows is copied, and stands twice in memory for a moment.
	h, stop := newHeld(most/8*6), w.stop
	go func() {
		tick := time.NewTicker(watchEvery)
		defer tick.Stop()
		for !h.over() {
			select {
			case <-stop:
				w.over <- nil
				return
			case <-tick.C:
			}
		}
		err := &hinted{
			fmt.Errorf("--memory %s is too little for the market, which is held whole, and copied while it grows: more than %d MiB were in use before it was read", sizeText(o.memory), h.most/mib),
			"give --memory more, or see whether the files of the market hold what they should; [limits] market_rows bounds them",
		}
		w.over <- err
		w.cancel()
	}()
	return ctx, w
}

// end ends the watch and returns what it found, however often it is called.
func (w *marketWatch) end() error {
	if w.stop != nil {
		close(w.stop)
		w.stop, w.err = nil, <-w.over
	}
	return w.err
}

// close ends the watch and what ran under it.
func (w *marketWatch) close() {
	w.end()
	w.cancel()
}

// check fails a run that holds more than it may.
func (h *held) check(o *options, file string, rows int64) error {
	if !h.over() {
		return nil
	}
	return &hinted{
		fmt.Errorf("%s: --memory %s is too little for what is kept of the first %d rows: every name of a book, an underlying or a strategy, every line_id that does not end in a number, and the texts of a row group",
			file, sizeText(o.memory), rows),
		"give --memory more, or see whether these columns, and those that are carried through, hold what they should: their texts are long or differ from row to row",
	}
}

// Once so many rows have been written all buffers have been made. What is
// allocated after that is garbage, and the buffers hold no pointers: to collect
// it early costs next to nothing, and keeps memory from growing with the file.
const (
	steadyRows      = 400_000
	steadyGCPercent = 10
)

// flat has garbage collected early once a run is in its steady state.
type flat struct {
	on     bool
	before int // the percentage that was set
}

func (f *flat) reach(rows int64) {
	if !f.on && rows >= steadyRows {
		f.on, f.before = true, debug.SetGCPercent(steadyGCPercent)
	}
}

func (f *flat) end() {
	if f.on {
		debug.SetGCPercent(f.before)
	}
}

// sizes are the units of --memory.
var sizes = []struct {
	suffix string
	bytes  int64
}{
	{"KiB", 1 << 10}, {"MiB", 1 << 20}, {"GiB", 1 << 30}, {"kB", 1e3}, {"MB", 1e6}, {"GB", 1e9}, {"B", 1}, {"", 1},
}

// parseSize reads a size such as 512MiB; "" is 0, no ceiling.
func parseSize(text string) (int64, error) {
	if text == "" {
		return 0, nil
	}
	for _, u := range sizes {
		digits, ok := strings.CutSuffix(text, u.suffix)
		if !ok {
			continue
		}
		n, err := strconv.ParseInt(digits, 10, 64)
		if err != nil || n <= 0 || n > math.MaxInt64/u.bytes {
			break
		}
		return n * u.bytes, nil
	}
	return 0, usagef("--memory takes a size such as 512MiB (KiB, MiB, GiB, kB, MB, GB or bytes), not %q", text)
}

// sizeText writes a size as parseSize reads it.
func sizeText(n int64) string {
	for _, u := range []int{2, 1, 0} {
		if n%sizes[u].bytes == 0 {
			return strconv.FormatInt(n/sizes[u].bytes, 10) + sizes[u].suffix
		}
	}
	return strconv.FormatInt(n, 10)
}
