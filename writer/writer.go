package writer

import (
	"fmt"
	"io"
	"strings"

	"nightbook/schema"
	"nightbook/writer/csv"
	"nightbook/writer/parquet"
)

// Table takes the rows of one table. The columns of every frame are those of
// the table, in order. Close writes what is still held and must be called for
// the output to be whole; it does not close the io.Writer below.
type Table interface {
	Write(*schema.Frame) error
	Close() error
}

// Aborter is a Table that goes on writing when Write has returned. Abort returns
// when it no longer does, where the table is given up before Close.
type Aborter interface{ Abort() }

var _, _ Aborter = (*parquet.Writer)(nil), (*csv.Writer)(nil)

// Formats are the names that NewTable knows, which are also the extensions of
// the files.
var Formats = []string{"parquet", "csv"}

// Options are the settings of all formats; the zero value serves.
type Options struct {
	// Workers is how many goroutines encode; 0 is one. The bytes written do not
	// depend on it.
	Workers int

	Version     string            // of this program, told in Parquet files
	Compression string            // of Parquet: zstd, snappy, gzip or none; "" is zstd
	Metadata    map[string]string // key-value pairs for the footer of Parquet files
	GroupRows   int               // rows in a row group of Parquet; 0 is 262,144
	GroupBytes  int64             // bytes of its pages, if texts are long; 0 is 128 MiB

	// BareText turns off, for CSV, the protection against texts that a
	// spreadsheet would run as formulas (see package csv).
	BareText bool
}

// NewTable starts a table in the given format.
func NewTable(format string, w io.Writer, t schema.Table, opt Options) (Table, error) {
	switch format {
	case "parquet":
		return parquet.New(w, t, parquet.Options{
			Workers:     opt.Workers,
			Version:     opt.Version,
			Compression: opt.Compression,
			Metadata:    opt.Metadata,
			GroupRows:   opt.GroupRows,
			GroupBytes:  opt.GroupBytes,
		})
	case "csv":
		return csv.New(w, t, csv.Options{
			Workers:  opt.Workers,
			BareText: opt.BareText,
			AsCame:   evidence(t.Name),
		})
	}
	return nil, fmt.Errorf("output format %q: must be one of %s", format, strings.Join(Formats, ", "))
}

// evidence names the columns that hold text exactly as it came: whoever looks
// into a refused row must see what the file holds, not what we made of it.
func evidence(table string) []string {
	if table == schema.RejectsOut.Name {
		return []string{"value", "row"}
	}
	return nil
}
