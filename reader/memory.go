package reader

import (
	"fmt"

	"nightbook/reader/parquet"
	"nightbook/reader/xlsx"
)

// Memory returns about how many bytes reading the positions takes at most, beside
// the pieces and what is in memory when they have been opened, and how many each
// piece on its way keeps of the dictionaries. The file says so before it is read.
func (p *Positions) Memory() (reading, piece int64, err error) {
	if reading, piece, err = p.o.memory(); err != nil {
		err = p.o.fail(p.o.sheet, err)
	}
	return reading, piece, err
}

// Market returns about how many bytes the market takes that was read before, counted
// row by row.
func (p *Positions) Market() int64 { return p.folder.held }

// LimitTexts holds the texts of a piece to so many bytes, which is what a ceiling
// on the memory of the run leaves for them. It is called before Next.
func (p *Positions) LimitTexts(ceiling, bytes int64) {
	switch s := p.o.source.(type) {
	case *parquet.File:
		s.LimitTexts(ceiling, bytes)
	case *parts:
		s.texts = bytes
	case *xlsx.Workbook:
		s.LimitTexts(ceiling, bytes)
	}
}

// memory returns what reading takes, and what a piece keeps; 0 where that is little.
func (o *opened) memory() (reading, piece int64, err error) {
	switch s := o.source.(type) {
	case *parquet.File:
		return s.Memory()
	case *parts:
		return s.memory, s.piece, nil
	}
	return 0, 0, nil
}

// checkMemory refuses a table of the market that takes more memory to read than a
// ceiling leaves.
func (o *opened) checkMemory(ceiling int64) error {
	if ceiling == 0 {
		return nil
	}
	n, _, err := o.memory()
	if err == nil && n > ceiling/2 {
		err = fmt.Errorf("its pages and dictionaries take %d MiB of memory to be read, too many under --memory, %d MiB: give --memory more, or write the file with smaller pages", n>>20, ceiling>>20)
	}
	if err != nil {
		return o.fail(o.sheet, err)
	}
	return nil
}

// What a text that is kept takes beside its bytes, and a refused row beside its own.
const (
	textBytes  = 16
	faultBytes = 700
)

// checkMarket refuses a market that takes more than seven eighths of what a
// ceiling leaves: curves and surfaces are made of it yet.
func (f *Folder) checkMarket(ceiling int64) error {
	const program = 24 << 20
	if ceiling == 0 || f.held <= max(ceiling-program, program)/8*7 {
		return nil
	}
	return fmt.Errorf("--memory %dMiB is too little for the market, which is held whole: up to this table it takes more than %d MiB; give --memory more, or see whether the files of the market hold what they should",
		ceiling>>20, f.held>>20)
}
