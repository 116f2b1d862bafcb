package schema

import (
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
	dict  *Dict
	known map[string]Code
	last  string
	code  Code
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
	c, ok := n.known[string(text)]
	if !ok {
		s := string(text)
		c = n.dict.Code(s)
		n.known[s] = c
	}
	n.last, n.code = n.dict.Name(c), c
	return c
}

// Dicts are the dictionaries of one run.
type Dicts struct {
	Books, Underlyings, Currencies, Curves, Strategies *Dict
}

// NewDicts returns the empty dictionaries of a run.
func NewDicts() *Dicts {
	return &Dicts{NewDict(), NewDict(), NewDict(), NewDict(), NewDict()}
}
