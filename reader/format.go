package reader

import (
	"nightbook/reader/csv"
	"nightbook/reader/parquet"
	"nightbook/reader/table"
	"nightbook/reader/xlsx"
	"nightbook/schema"
)

// A format is a form of file that is read.
type format struct {
	suffix string
	packed string // "", "gzip" or "zstd"
	magic  string // with which each such file begins; "": none
	what   string
	open   func(*file, *schema.Config) (source, error)
}

// formats is the list of all of them: to read one more is to add a line.
func formats() []format {
	return []format{
		{".csv", "", "", "a text file", openCSV},
		{".csv.gz", "gzip", "\x1f\x8b", "a gzip file", openCSV},
		{".csv.zst", "zstd", "\x28\xb5\x2f\xfd", "a zstd file", openCSV},
		{".parquet", "", "PAR1", "a Parquet file", openParquet},
		{".xlsx", "", "PK\x03\x04", "a workbook", openXLSX},
	}
}

// source is a file of whatever format, as rows.
type source interface {
	// Header returns the names of the columns, in the order of the file.
	Header() []string
	// Next reads the next rows; io.EOF is the end. The rows are valid until it is called again.
	Next(into *table.Rows) error
}

func formatOf(suffix string) (format, bool) {
	for _, f := range formats() {
		if f.suffix == suffix {
			return f, true
		}
	}
	return format{}, false
}

func formatNames() []string {
	var names []string
	for _, f := range formats() {
		names = append(names, f.suffix)
	}
	return names
}

// textFile is a text file: a scanner, with a decoder of its own for those who
// read it in order.
type textFile struct {
	*csv.Scanner
	block   csv.Block
	decoder *csv.Decoder
}

func (t *textFile) Next(into *table.Rows) error {
	if err := t.Scanner.Next(&t.block); err != nil {
		return err
	}
	if t.decoder == nil {
		t.decoder = t.NewDecoder()
	}
	t.decoder.Decode(&t.block, into)
	return nil
}

func openCSV(f *file, cfg *schema.Config) (source, error) {
	text, err := f.unpacked(&cfg.Limits)
	if err != nil {
		return nil, err
	}
	o := csv.Options{Delimiter: cfg.CSV.Delimiter, Limits: cfg.Limits}
	for i, name := range csv.EncodingNames {
		if name == cfg.CSV.Encoding {
			o.Encoding = csv.Encoding(i)
		}
	}
	s, err := csv.NewScanner(text, o)
	if err != nil {
		return nil, err
	}
	return &textFile{Scanner: s}, nil
}

func openParquet(f *file, cfg *schema.Config) (source, error) {
	if err := f.hashAll(); err != nil {
		return nil, err
	}
	return parquet.Open(f, f.size(), cfg.Limits)
}

func openXLSX(f *file, cfg *schema.Config) (source, error) {
	if err := f.hashAll(); err != nil {
		return nil, err
	}
	return xlsx.Open(f, f.size(), cfg.Limits)
}
