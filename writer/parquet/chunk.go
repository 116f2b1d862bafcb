package parquet

import (
	"github.com/xitongsys/parquet-go/parquet"
)

// chunk is a column chunk: the finished pages of a column in a row group.
type chunk struct {
	name     string
	physical parquet.Type
	codec    parquet.CompressionCodec // settled by the first page
	dict     page                     // of dictionary values; no bytes where there is none
	pages    []page
	held     int64 // bytes of pages

	blocks *blocks
	owned  [][]byte // blocks that the pages' data are in
	tail   []byte   // what is free of the last block that store took
}

// store copies packed data into blocks of the chunk, and appends where they are.
func (c *chunk) store(to [][]byte, data []byte) [][]byte {
	for len(data) > 0 {
		if len(c.tail) == 0 {
			block := c.blocks.take()[:blockBytes]
			c.owned, c.tail = append(c.owned, block), block
		}
		n := copy(c.tail, data)
		to = append(to, c.tail[:n])
		c.tail, data = c.tail[n:], data[n:]
	}
	return to
}

// nextPage returns a page to be filled, with the memory of an earlier row group.
func (c *chunk) nextPage() *page {
	if n := len(c.pages); n < cap(c.pages) {
		c.pages = c.pages[:n+1]
	} else {
		c.pages = append(c.pages, page{})
	}
	return &c.pages[len(c.pages)-1]
}

// write writes the pages, and returns what footer and page index say of them.
func (c *chunk) write(w *counter) (*parquet.ColumnChunk, pageIndex, error) {
	start := w.n
	meta := &parquet.ColumnMetaData{
		Type:         c.physical,
		PathInSchema: []string{c.name},
		Codec:        c.codec,
	}
	counts := map[parquet.Encoding]int32{}
	if len(c.dict.bytes) > 0 {
		if err := c.dict.write(w); err != nil {
			return nil, pageIndex{}, err
		}
		meta.DictionaryPageOffset = &start
		meta.TotalUncompressedSize = int64(c.dict.uncompressed)
	}
	meta.DataPageOffset = w.n

	index := newPageIndex()
	var whole encodedBounds
	for i := range c.pages {
		p := &c.pages[i]
		index.add(p, w.n, meta.NumValues)
		whole.merge(p.bounds, c.physical)
		meta.NumValues += int64(p.rows)
		meta.TotalUncompressedSize += int64(p.uncompressed)
		counts[p.encoding]++
		if err := p.write(w); err != nil {
			return nil, pageIndex{}, err
		}
	}
	meta.TotalCompressedSize = w.n - start
	meta.Statistics = whole.statistics()
	meta.Encodings, meta.EncodingStats = encodings(counts, meta.DictionaryPageOffset != nil)
	return &parquet.ColumnChunk{FileOffset: start, MetaData: meta}, index, nil
}

// reset forgets the pages, and gives back their blocks.
func (c *chunk) reset() {
	c.blocks.give(c.owned)
	clear(c.owned)
	c.owned, c.tail = c.owned[:0], nil
	c.pages, c.held = c.pages[:0], 0
	c.dict.bytes = c.dict.bytes[:0]
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
