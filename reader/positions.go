package reader

import (
	"errors"
	"io"

	"nightbook/reader/csv"
	"nightbook/reader/table"
	"nightbook/schema"
)

// Positions is the position file, read piece by piece. Next is called from one
// goroutine, in order; what it cut may be bound by several at once, each with a
// Binder of its own.
type Positions struct {
	folder *Folder
	o      *opened
	cfg    *schema.Config
	dicts  *schema.Dicts
	extra  []string
	market int // underlyings that the market has
	ended  bool
}

// Piece is a run of rows of the position file. Its memory is used again by the
// next call of Next, and part of it goes over into the batch it is bound to, so
// that a piece can be bound once.
type Piece struct {
	Bytes int64 // how far into the file the piece reaches, as it lies on disk
	Rows  int

	text  bool
	block csv.Block  // of a text file: not yet split into fields
	rows  table.Rows // of the other formats
}

// Positions opens the position file and finds its columns.
func (f *Folder) Positions(cfg *schema.Config, d *schema.Dicts) (*Positions, error) {
	o, err := f.open("positions", cfg)
	if err != nil {
		return nil, err
	}
	dropped, err := o.splitExtra(o.in, o.Header())
	if err != nil {
		o.Close()
		return nil, err
	}
	if dropped > 0 {
		f.note(emptyNameNote(o.in, dropped))
	}
	return &Positions{folder: f, o: o, cfg: cfg, dicts: d, extra: o.extraNames(o.Header()), market: d.Underlyings.Len()}, nil
}

// Extra returns the names of the house's own further columns, in file order.
func (p *Positions) Extra() []string { return p.extra }

// Name returns the name of the position file in the folder.
func (p *Positions) Name() string { return p.o.in.name }

// Size returns the size of the file on disk, in bytes: what Piece.Bytes runs up to.
func (p *Positions) Size() int64 { return p.o.size() }

// Rows returns how many data rows the pieces handed out so far hold.
func (p *Positions) Rows() int64 { return p.o.rows }

// Next reads the next piece: up to about schema.BatchRows rows. It returns
// io.EOF at the end, when the file is among the folder's Inputs. Any other
// error means that the file cannot be read on: it is cut short, unreadable, or
// not of its format.
func (p *Positions) Next(pc *Piece) error {
	if p.ended {
		return io.EOF
	}
	var err error
	t, text := p.o.source.(*textFile)
	if pc.text = text; text {
		err = t.Scanner.Next(&pc.block)
		pc.Rows = len(pc.block.Records)
	} else {
		err = p.o.Next(&pc.rows)
		pc.Rows = pc.rows.N
	}
	if errors.Is(err, io.EOF) {
		p.ended = true
		if err := p.o.finish(p.folder); err != nil {
			return err
		}
		return io.EOF
	}
	if err != nil {
		return p.o.fail(p.o.sheet, err)
	}
	if p.o.rows += int64(pc.Rows); p.o.rows > p.cfg.Limits.Of(schema.Rows) {
		return p.o.in.fail(p.o.sheet, p.cfg.Limits.Exceeded(schema.Rows))
	}
	pc.Bytes = p.o.progress()
	return nil
}

// CheckNames fails if the rows bound so far name more books, strategies, or
// underlyings that the market does not have, than the limits allow: each is kept.
func (p *Positions) CheckNames() error {
	for _, x := range [...]struct {
		limit schema.Limit
		names int
	}{
		{schema.Books, p.dicts.Books.Len() - 1}, // the empty text has a code too
		{schema.Underlyings, p.dicts.Underlyings.Len() - p.market},
		{schema.Strategies, p.dicts.Strategies.Len() - 1},
	} {
		if int64(x.names) > p.cfg.Limits.Of(x.limit) {
			return p.o.in.fail(p.o.sheet, p.cfg.Limits.Exceeded(x.limit))
		}
	}
	return nil
}

// Close closes the file.
func (p *Positions) Close() error { return p.o.Close() }
