package parquet

import "sync"

const (
	// blockBytes is a page of doubles.
	blockBytes = 8 * pageRows

	// slabBytes is how much is allocated at a time.
	slabBytes = 64 * blockBytes
)

// blocks are the memory in which a row group lies until it is in the file: what
// is packed, and numbers from the moment they are added, so that a page which is
// not packed is never copied. They are used again. While a row group is being
// written, no more than a few are made: who needs more waits until some have been
// written, so that a slow disk costs time and not memory.
type blocks struct {
	mu      sync.Mutex
	some    sync.Cond // free, or writing no more
	free    [][]byte
	slab    []byte // to be cut up
	writing bool
	few     int // how many may still be made while writing
}

func newBlocks(few int) *blocks {
	b := &blocks{few: few}
	b.some.L = &b.mu
	return b
}

func (b *blocks) take() []byte {
	b.mu.Lock()
	defer b.mu.Unlock()
	for len(b.free) == 0 {
		if !b.writing {
			return b.cut()
		}
		if b.few > 0 {
			b.few--
			return b.cut()
		}
		b.some.Wait()
	}
	last := len(b.free) - 1
	block := b.free[last]
	b.free = b.free[:last]
	return block
}

// cut makes a block.
func (b *blocks) cut() []byte {
	if len(b.slab) == 0 {
		b.slab = newSlab()
	}
	block := b.slab[:0:blockBytes]
	b.slab = b.slab[blockBytes:]
	return block
}

// give takes blocks back; memory that is none is left to the collector.
func (b *blocks) give(list [][]byte) {
	b.mu.Lock()
	defer b.mu.Unlock()
	for _, block := range list {
		if cap(block) == blockBytes {
			b.free = append(b.free, block[:0])
		}
	}
	b.some.Broadcast()
}

// setWriting notes whether a row group is being written, which gives back blocks.
func (b *blocks) setWriting(yes bool) {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.writing = yes
	b.some.Broadcast()
}
