package schema

import (
	"encoding/binary"
	"strings"
	"sync"
	"sync/atomic"
)

// Code stands for a text that repeats from row to row: a book, an underlying,
// a currency. Code 0 is the empty text, which means absent.
//
// Which code a text gets depends on which worker met it first: codes may be
// compared for equality within a run, never ordered or written.
type Code uint32

// Dict gives texts their codes. It may be used by several goroutines.
type Dict struct {
	mu    sync.Mutex
	codes map[string]Code
	names atomic.Pointer[[]string]
}

// NewDict returns a dictionary that holds only the empty text.
func NewDict() *Dict {
	d := &Dict{codes: map[string]Code{"": 0}}
	names := make([]string, 1, 64)
	d.names.Store(&names)
	return d
}

// Code returns the code of text, giving it one if it has none.
func (d *Dict) Code(text string) Code {
	d.mu.Lock()
	defer d.mu.Unlock()
	if c, ok := d.codes[text]; ok {
		return c
	}
	text = strings.Clone(text)
	names := *d.names.Load()
	c := Code(len(names))
	names = append(names, text) // readers see their own, shorter header
	d.names.Store(&names)
	d.codes[text] = c
	return c
}

// Find returns the code of text if it has one.
func (d *Dict) Find(text string) (Code, bool) {
	d.mu.Lock()
	defer d.mu.Unlock()
	c, ok := d.codes[text]
	return c, ok
}

// Name returns the text behind a code. It takes no lock.
func (d *Dict) Name(c Code) string { return (*d.names.Load())[c] }

// Len returns the number of codes given, the empty text's included.
func (d *Dict) Len() int { return len(*d.names.Load()) }

// Interner is one worker's view of a Dict: it takes the lock only for a text
// it has not met. The zero value is not usable; see NewInterner.
type Interner struct {
	dict   *Dict
	known  map[string]Code
	last   string
	code   Code
	recent [256]recentText
}

// recentText is a text of up to 16 bytes that was met lately, by its length, its
// first bytes and its last. The zero value is the empty text and its code.
type recentText struct {
	first, last uint64
	length      uint32
	code        Code
}

// NewInterner returns a worker's view of d.
func NewInterner(d *Dict) *Interner {
	return &Interner{dict: d, known: map[string]Code{}}
}

// Code returns the code of text; it allocates only for a text not met before.
func (n *Interner) Code(text []byte) Code {
	if string(text) == n.last { // rows of one book stand together
		return n.code
	}
	if len(text) > 16 {
		return n.find(text)
	}
	first, last := ends(text)
	r := &n.recent[(first^last<<1)*0x9e3779b97f4a7c15>>56]
	if r.first != first || r.last != last || r.length != uint32(len(text)) {
		*r = recentText{first, last, uint32(len(text)), n.find(text)}
	}
	return r.code
}

// find looks a text up that is not the last one.
func (n *Interner) find(text []byte) Code {
	c, ok := n.known[string(text)]
	if !ok {
		s := string(text)
		c = n.dict.Code(s)
		n.known[s] = c
	}
	n.last, n.code = n.dict.Name(c), c
	return c
}

// ends returns the first and the last bytes of a text of up to 16, which may
// overlap: two texts of one length with the same ends are the same.
func ends(text []byte) (first, last uint64) {
	switch n := len(text); {
	case n >= 8:
		return binary.LittleEndian.Uint64(text), binary.LittleEndian.Uint64(text[n-8:])
	case n >= 4:
		return uint64(binary.LittleEndian.Uint32(text)), uint64(binary.LittleEndian.Uint32(text[n-4:]))
	case n > 0:
		return uint64(text[0]) | uint64(text[n/2])<<8, uint64(text[n-1])
	}
	return 0, 0
}

// Dicts are the dictionaries of one run.
type Dicts struct {
	Books, Underlyings, Currencies, Curves, Strategies *Dict
}

// NewDicts returns the empty dictionaries of a run.
func NewDicts() *Dicts {
	return &Dicts{NewDict(), NewDict(), NewDict(), NewDict(), NewDict()}
}
