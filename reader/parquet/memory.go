package parquet

import (
	"bytes"
	"io"

	"github.com/xitongsys/parquet-go/layout"
	"github.com/xitongsys/parquet-go/parquet"
	"github.com/xitongsys/parquet-go/source"

	"nightbook/schema"
)

// What the decoder of a column takes beside its pages, and what a value takes
// beside its bytes: measured, and rounded up.
const (
	codecBytes      = 512 << 10
	dictionaryEntry = 40
	deltaEntry      = 8
)

// mostHeader is the longest page header that is looked for, in bytes: statistics
// may hold texts.
const mostHeader = 1 << 20

// Memory returns about how many bytes reading the file takes at most, beside the
// rows that are handed on: of each column its largest page, packed and unpacked,
// and its largest dictionary. The page headers say so; no page is read.
func (f *File) Memory() (total int64, err error) {
	defer recovered(&err)
	for i := range f.columns {
		var c columnMemory
		for k, g := range f.meta.RowGroups {
			if g.NumRows == 0 {
				continue
			}
			chunk := g.Columns[i]
			if chunk == nil || chunk.MetaData == nil {
				return 0, damaged("column %s of row group %d has no description", f.columns[i].name, k+1)
			}
			if err := c.chunk(f.r, f.size, chunk.MetaData); err != nil {
				return 0, err
			}
		}
		total += c.bytes()
	}
	return total, nil
}

// LimitTexts bounds the bytes of text in a run of rows by what a ceiling leaves.
func (f *File) LimitTexts(ceiling, bytes int64) { f.limits.Under(ceiling, schema.BatchBytes, bytes) }

// columnMemory is the largest of what a column's pages ask for.
type columnMemory struct {
	packed, data        int64 // bytes of a page
	dictionary, entries int64 // bytes and values
	deltas              int64 // values of a page whose lengths are taken apart at once
}

func (c *columnMemory) bytes() int64 {
	// A page's memory grows while it is read, and is copied then.
	return codecBytes + (c.packed+c.data)*3/2 + c.dictionary + dictionaryEntry*c.entries + deltaEntry*c.deltas
}

// chunk looks at the headers of the pages of a chunk.
func (c *columnMemory) chunk(r io.ReaderAt, size int64, m *parquet.ColumnMetaData) error {
	at := m.DataPageOffset
	if d := m.DictionaryPageOffset; d != nil && *d > 0 && *d < at {
		at = *d
	}
	var buf []byte
	for left := m.NumValues; left > 0; {
		if at < int64(len(magic)) || at >= size {
			return damaged("its pages stand at %d", at)
		}
		h, n, err := pageHeader(r, at, size, &buf)
		if err != nil {
			return err
		}
		packed, data := int64(h.CompressedPageSize), int64(h.UncompressedPageSize)
		if packed < 0 || data < 0 {
			return damaged("a page of %d bytes, %d unpacked", packed, data)
		}
		c.packed = max(c.packed, packed)
		values, encoding := int64(0), parquet.Encoding_PLAIN
		switch {
		case h.DictionaryPageHeader != nil:
			c.dictionary, c.entries = max(c.dictionary, data), max(c.entries, min(int64(h.DictionaryPageHeader.NumValues), data))
			data = 0
		case h.DataPageHeader != nil:
			values, encoding = int64(h.DataPageHeader.NumValues), h.DataPageHeader.Encoding
		case h.DataPageHeaderV2 != nil:
			values, encoding = int64(h.DataPageHeaderV2.NumValues), h.DataPageHeaderV2.Encoding
		}
		c.data = max(c.data, data)
		switch encoding {
		case parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY, parquet.Encoding_DELTA_BYTE_ARRAY:
			c.deltas = max(c.deltas, 2*values)
		}
		left -= max(0, values)
		at += n + packed
	}
	return nil
}

// pageHeader reads the page header at a place of the file, and its length.
func pageHeader(r io.ReaderAt, at, size int64, buf *[]byte) (*parquet.PageHeader, int64, error) {
	for want := int64(headerBytes / 8); ; want *= 8 {
		want = min(want, size-at)
		if int64(cap(*buf)) < want {
			*buf = make([]byte, want)
		}
		b := (*buf)[:want]
		if _, err := r.ReadAt(b, at); err != nil {
			return nil, 0, err
		}
		s := skipper{b: b}
		if s.structure(0); s.bad {
			if want == size-at || want >= mostHeader {
				return nil, 0, damaged("a page header at byte %d cannot be read", at)
			}
			continue
		}
		n := want - int64(len(s.b))
		h, err := layout.ReadPageHeader(source.ConvertToThriftReader(newWindow(bytes.NewReader(b[:n]), 0, n), 0, n))
		if err != nil {
			return nil, 0, damaged("a page header at byte %d cannot be read: %v", at, err)
		}
		return h, n, nil
	}
}
