package reader

import (
	"errors"
	"fmt"
	"io"

	"nightbook/reader/table"
	"nightbook/schema"
)

// opened is a table of the folder, open, with its columns found.
type opened struct {
	*file
	source
	*binding
	style style
	sheet string
	rows  int64
}

// open opens a table of the folder, or returns nil if there is none.
func (f *Folder) open(name string, cfg *schema.Config) (*opened, error) {
	in := f.tables[name]
	if in == nil {
		return nil, nil
	}
	o := &opened{}
	var err error
	if o.file, err = in.open(); err != nil {
		return nil, err
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
	if o.source, err = o.in.format.open(o.file, cfg); err != nil {
		return o.in.fail("", err)
	}
	if s, ok := o.source.(interface{ Sheet() string }); ok {
		o.sheet = s.Sheet()
	}
	if o.binding, err = bind(o.in, o.Header(), cfg.Columns[o.in.table.Name]); err != nil {
		return err
	}
	o.style.decimalComma = cfg.CSV.DecimalComma
	o.style.utcAsIs = cfg.Parquet.UTCAsIs
	if cfg.CSV.DateFormat != "" {
		o.style.dates, err = parseDateFormat(cfg.CSV.DateFormat)
	}
	return err
}

// fail puts the file's name on an error from below.
func (in *input) fail(sheet string, err error) error {
	var cell *schema.CellError
	if errors.As(err, &cell) {
		named := *cell
		named.File, named.Sheet = in.path, sheet
		return &named
	}
	if errors.Is(err, io.ErrUnexpectedEOF) {
		return fmt.Errorf("%s: the file is cut short: %w", in.path, err)
	}
	return fmt.Errorf("%s: %w", in.path, err)
}

// appendRaw appends a row as it came: as text, or as the text of its cells if
// it never was text.
func appendRaw(b []byte, r *table.Rows, i int) []byte {
	if r.Raw.Len() == 0 {
		return r.AppendRow(b, i)
	}
	return append(b, r.Raw.Bytes(i)...)
}

// done records the file in the folder's inputs.
func (f *Folder) done(o *opened) error {
	entry, err := o.finish(o.rows)
	if err != nil {
		return o.in.fail("", err)
	}
	f.record(entry)
	return nil
}
