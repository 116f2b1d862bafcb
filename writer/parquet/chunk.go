package parquet

import (
	"github.com/xitongsys/parquet-go/parquet"
)

// pageIndex is what the page index of a file tells about one column chunk.
type pageIndex struct {
	column *parquet.ColumnIndex // nil where the bounds of a page are not known
	offset *parquet.OffsetIndex
}

// writeChunk writes the finished pages of the row group, and forgets them.
func (c *column) writeChunk(w *counter) (*parquet.ColumnChunk, pageIndex, error) {
	start := w.n
	meta := &parquet.ColumnMetaData{
		Type:         c.physical,
		PathInSchema: []string{c.Name},
		Codec:        c.codec,
	}
	counts := map[parquet.Encoding]int32{}
	if len(c.dictPage.bytes) > 0 {
		if _, err := w.Write(c.dictPage.bytes); err != nil {
			return nil, pageIndex{}, err
		}
		meta.DictionaryPageOffset = &start
		meta.TotalUncompressedSize = int64(c.dictPage.uncompressed)
	}
	meta.DataPageOffset = w.n

	index := pageIndex{
		column: &parquet.ColumnIndex{BoundaryOrder: parquet.BoundaryOrder_UNORDERED},
		offset: &parquet.OffsetIndex{},
	}
	var chunk encodedBounds
	for i := range c.pages {
		p := &c.pages[i]
		index.add(p, w.n, meta.NumValues)
		chunk.merge(p.bounds, c.physical)
		meta.NumValues += int64(p.rows)
		meta.TotalUncompressedSize += int64(p.uncompressed)
		counts[p.encoding]++
		if _, err := w.Write(p.bytes); err != nil {
			return nil, pageIndex{}, err
		}
	}
	meta.TotalCompressedSize = w.n - start
	meta.Statistics = chunk.statistics()
	meta.Encodings, meta.EncodingStats = encodings(counts, meta.DictionaryPageOffset != nil)
	c.pages = c.pages[:0]
	return &parquet.ColumnChunk{FileOffset: start, MetaData: meta}, index, nil
}

// encodings lists how the pages of a chunk are encoded.
func encodings(counts map[parquet.Encoding]int32, dict bool) ([]parquet.Encoding, []*parquet.PageEncodingStats) {
	used := []parquet.Encoding{parquet.Encoding_RLE} // of the levels
	var stats []*parquet.PageEncodingStats
	if dict {
		stats = append(stats, &parquet.PageEncodingStats{
			PageType: parquet.PageType_DICTIONARY_PAGE, Encoding: parquet.Encoding_PLAIN, Count: 1})
	}
	for _, e := range []parquet.Encoding{parquet.Encoding_PLAIN, parquet.Encoding_RLE_DICTIONARY} {
		if counts[e] > 0 {
			stats = append(stats, &parquet.PageEncodingStats{
				PageType: parquet.PageType_DATA_PAGE, Encoding: e, Count: counts[e]})
		}
		if counts[e] > 0 || e == parquet.Encoding_PLAIN && dict {
			used = append(used, e)
		}
	}
	return used, stats
}

// add notes a data page that stands at an offset of the file and begins with a
// row of the row group.
func (x *pageIndex) add(p *page, at, row int64) {
	x.offset.PageLocations = append(x.offset.PageLocations, &parquet.PageLocation{
		Offset: at, CompressedPageSize: int32(len(p.bytes)), FirstRowIndex: row,
	})
	b := &p.bounds
	if !b.known && b.values > 0 {
		x.column = nil
	}
	if x.column == nil {
		return
	}
	x.column.NullPages = append(x.column.NullPages, b.values == 0)
	x.column.MinValues = append(x.column.MinValues, b.min)
	x.column.MaxValues = append(x.column.MaxValues, b.max)
	x.column.NullCounts = append(x.column.NullCounts, int64(b.nulls))
}
