package reader

import (
	"errors"
	"fmt"

	"nightbook/reader/table"
	"nightbook/schema"
)

// opened is a table of the folder, open, with its columns found.
type opened struct {
	in *input
	stored
	source
	*binding
	style style
	sheet string
	rows  int64
}

// stored is where the rows of a table lie: one file, or a folder of parts.
type stored interface {
	size() int64    // bytes on disk
	reached() int64 // how much of them has been read
	fail(sheet string, err error) error
	done(f *Folder, rows int64) error // puts what was read to its end into the inputs
	Close() error
}

// open opens a table of the folder, or returns nil if there is none.
func (f *Folder) open(name string, cfg *schema.Config) (*opened, error) {
	in := f.tables[name]
	if in == nil {
		return nil, nil
	}
	o := &opened{in: in}
	if in.parted {
		p, err := f.openParts(in, cfg)
		if err != nil {
			return nil, err
		}
		o.stored, o.source = p, p
	} else {
		file, err := in.open(f.ctx)
		if err != nil {
			return nil, err
		}
		o.stored = file
		if err = file.checkContent(); err == nil {
			o.source, err = in.format.open(file, cfg)
		}
		if err != nil {
			return nil, errors.Join(file.fail("", err), file.Close())
		}
	}
	if err := o.start(cfg); err != nil {
		o.Close()
		return nil, err
	}
	if t, ok := o.source.(*textFile); ok && t.Detected() != "" {
		f.note(schema.Note{Code: schema.FormatDetected, Subject: in.name, File: in.name, Count: 1,
			Message: "the byte order mark shows the file to be " + t.Detected() + ", and so it was read"})
	}
	return o, nil
}

func (o *opened) start(cfg *schema.Config) (err error) {
	if s, ok := o.source.(interface{ Sheet() string }); ok {
		o.sheet = s.Sheet()
	}
	if o.binding, err = bind(o.in, o.Header(), cfg.Columns[o.in.table.Name], &cfg.Limits); err != nil {
		return err
	}
	o.style.decimalComma = cfg.CSV.DecimalComma
	o.style.utcAsIs = cfg.Parquet.UTCAsIs
	if cfg.CSV.DateFormat != "" {
		o.style.dates, err = parseDateFormat(cfg.CSV.DateFormat)
	}
	return err
}

// finish puts what was read to its end into the folder's inputs, and warns of
// rows inside of fields: a quotation mark out of place, closed by the next that
// is, makes one field of all that stands between them.
func (o *opened) finish(f *Folder) error {
	if t, ok := o.source.(*textFile); ok && t.Within().Lines > 0 {
		w := t.Within()
		f.note(schema.Note{Code: schema.RowInField, Subject: o.in.name, File: o.in.name, Line: w.First, Count: w.Lines,
			Message: "quoted fields hold lines that look like rows of their own: if they are, a quotation mark is out of place, the first from this line on"})
	}
	return o.done(f, o.rows)
}

// progress returns how many bytes of the file, as it lies on disk, the rows read
// so far reach to.
func (o *opened) progress() int64 {
	if q, ok := o.source.(interface{ Read() float64 }); ok {
		return int64(q.Read() * float64(o.size()))
	}
	return o.reached()
}

// fail puts the file's name on an error from below.
func (in *input) fail(sheet string, err error) error {
	var cell *schema.CellError
	if errors.As(err, &cell) {
		named := *cell
		named.File, named.Sheet = in.path, sheet
		return &named
	}
	return fmt.Errorf("%s: %w", in.path, remedied(err))
}

func (f *file) reached() int64 { return f.taken.Load() }

func (f *file) done(folder *Folder, rows int64) error {
	entry, err := f.finish(rows)
	if err != nil {
		return f.fail("", err)
	}
	folder.record(entry)
	return nil
}

// appendRaw appends a row as it came: as text, or as the text of its cells if
// it never was text.
func appendRaw(b []byte, r *table.Rows, i int) []byte {
	if r.Raw.Len() == 0 {
		return r.AppendRow(b, i)
	}
	return append(b, r.Raw.Bytes(i)...)
}
