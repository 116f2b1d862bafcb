package parquet

import (
	"bytes"
	"fmt"
	"io"

	"github.com/xitongsys/parquet-go/layout"
	"github.com/xitongsys/parquet-go/parquet"
	"github.com/xitongsys/parquet-go/source"

	"nightbook/schema"
)

// What the decoder of a column takes beside its pages, and what a value takes
// beside its bytes, what is known of each word included: measured, and rounded up.
const (
	codecBytes      = 512 << 10
	wordEntry       = 20 // of a dictionary of plain texts
	dictionaryEntry = 40 // of another
	deltaEntry      = 8
)

// mostHeader is the longest page header that is looked for, in bytes: statistics
// may hold texts.
const mostHeader = 1 << 20

// Memory returns about how many bytes reading the file takes at most: of each
// column its largest page, packed and unpacked, and its dictionaries. Each run of
// rows that is in use takes kept bytes more beside its rows, for its part of the
// words of its row group. The page headers say so; no page is read.
func (f *File) Memory() (reading, kept int64, err error) {
	defer recovered(&err)
	words := make([]int64, len(f.meta.RowGroups))
	for i, column := range f.columns {
		var c columnMemory
		for k, g := range f.meta.RowGroups {
			if g.NumRows == 0 {
				continue
			}
			chunk := g.Columns[i]
			if chunk == nil || chunk.MetaData == nil {
				return 0, 0, damaged("column %s of row group %d has no description", column.name, k+1)
			}
			dictionary, err := c.chunk(f.r, f.size, chunk.MetaData)
			if err != nil {
				return 0, 0, fmt.Errorf("column %s, row group %d: %w", column.name, k+1, err)
			}
			switch entries := dictionary.entries; {
			case column.meaning == texts && column.physical == parquet.Type_BYTE_ARRAY:
				words[k] += dictionary.bytes + wordEntry*entries
			case column.meaning == floats, column.meaning == ints, column.meaning == days: // handed on one by one
				c.dictionary = max(c.dictionary, dictionary.bytes+dictionaryEntry*entries)
			default:
				words[k] += dictionary.bytes + dictionaryEntry*entries
			}
		}
		reading += c.bytes()
	}
	var most int64
	for k, bytes := range words {
		runs := max(1, (f.meta.RowGroups[k].NumRows+schema.BatchRows-1)/schema.BatchRows)
		most, kept = max(most, bytes), max(kept, bytes/runs)
	}
	// The first and the last of the runs that are kept may stand in row groups of
	// which they are the only ones; those between are all of theirs.
	return reading + 2*(most-kept), kept, nil
}

// LimitTexts bounds the bytes of text in a run of rows by what a ceiling leaves.
func (f *File) LimitTexts(ceiling, bytes int64) { f.limits.Under(ceiling, schema.BatchBytes, bytes) }

// columnMemory is the largest of what a column's pages ask for.
type columnMemory struct {
	packed, data int64 // bytes of a page
	dictionary   int64 // bytes, where it is not handed on
	deltas       int64 // values of a page whose lengths are taken apart at once
}

func (c *columnMemory) bytes() int64 {
	// A page's memory grows while it is read, and is copied then.
	return codecBytes + (c.packed+c.data)*3/2 + c.dictionary + deltaEntry*c.deltas
}

// dictionarySize is how large a dictionary is.
type dictionarySize struct{ bytes, entries int64 }

// chunk looks at the headers of the pages of a chunk, and returns the size of its
// dictionary.
func (c *columnMemory) chunk(r io.ReaderAt, size int64, m *parquet.ColumnMetaData) (dictionary dictionarySize, err error) {
	at := m.DataPageOffset
	if d := m.DictionaryPageOffset; d != nil && *d > 0 && *d < at {
		at = *d
	}
	var buf []byte
	for left := m.NumValues; left > 0; {
		if at < int64(len(magic)) || at >= size {
			return dictionary, damaged("its pages stand at %d", at)
		}
		h, n, err := pageHeader(r, at, size, &buf)
		if err != nil {
			return dictionary, err
		}
		packed, data := int64(h.CompressedPageSize), int64(h.UncompressedPageSize)
		if packed < 0 || data < 0 {
			return dictionary, damaged("a page of %d bytes, %d unpacked", packed, data)
		}
		c.packed = max(c.packed, packed)
		values, encoding := int64(0), parquet.Encoding_PLAIN
		switch {
		case h.Type == parquet.PageType_DICTIONARY_PAGE && h.DictionaryPageHeader != nil:
			dictionary.bytes = max(dictionary.bytes, data)
			dictionary.entries = max(dictionary.entries, min(int64(h.DictionaryPageHeader.NumValues), data))
			data = 0
		case h.Type == parquet.PageType_DATA_PAGE && h.DataPageHeader != nil:
			values, encoding = int64(h.DataPageHeader.NumValues), h.DataPageHeader.Encoding
		case h.Type == parquet.PageType_DATA_PAGE_V2 && h.DataPageHeaderV2 != nil:
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
	return dictionary, nil
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
