package parquet

import (
	"errors"
	"io"

	"github.com/xitongsys/parquet-go/source"
)

// window is the part of a file from which the library reads.
type window struct{ *io.SectionReader }

func newWindow(r io.ReaderAt, from, size int64) window {
	return window{io.NewSectionReader(r, from, size)}
}

var errReadOnly = errors.New("parquet: a window can only be read")

// The rest of source.ParquetFile.

func (w window) Write([]byte) (int, error)                 { return 0, errReadOnly }
func (w window) Close() error                              { return nil }
func (w window) Open(string) (source.ParquetFile, error)   { return nil, errReadOnly }
func (w window) Create(string) (source.ParquetFile, error) { return nil, errReadOnly }
