package parquet

import "sync"

const (
	// blockBytes is a page of doubles.
	blockBytes = 8 * pageRows

	// slabBlocks is how many blocks are allocated at a time.
	slabBlocks = 64
)

// blocks are the memory in which numbers lie from the moment they are added
// until they are in the file: a page that is not packed is never copied. They
// are used again, and there are only so many: who takes one while all are in
// use waits until some have been written.
type blocks struct {
	free chan []byte

	mu   sync.Mutex
	slab []byte // to be cut up
	left int    // how many may still be cut
}

func newBlocks(n int) *blocks { return &blocks{free: make(chan []byte, n), left: n} }

func (b *blocks) take() []byte {
	select {
	case block := <-b.free:
		return block
	default:
	}
	if block := b.cut(); block != nil {
		return block
	}
	return <-b.free
}

// cut returns a new block, or nil if there are as many as there may be.
func (b *blocks) cut() []byte {
	b.mu.Lock()
	defer b.mu.Unlock()
	if b.left == 0 {
		return nil
	}
	if len(b.slab) == 0 {
		b.slab = make([]byte, min(b.left, slabBlocks)*blockBytes)
		hugePages(b.slab)
	}
	block := b.slab[:0:blockBytes]
	b.slab = b.slab[blockBytes:]
	b.left--
	return block
}

// give takes a block back; memory that is none is left to the collector.
func (b *blocks) give(block []byte) {
	if cap(block) == blockBytes {
		b.free <- block[:0]
	}
}
