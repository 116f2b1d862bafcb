package parquet

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/snappy"
	"github.com/klauspost/compress/zstd"
	"github.com/xitongsys/parquet-go/layout"
	"github.com/xitongsys/parquet-go/parquet"
	"github.com/xitongsys/parquet-go/source"

	"nightbook/schema"
)

// pages reads the pages of one column of one row group, in order.
type pages struct {
	codec  parquet.CompressionCodec
	next   func() (*parquet.PageHeader, error)
	body   io.Reader
	left   int // rows of the page not yet read
	levels hybrid
	packed []byte // the page as it lies in the file
	own    []byte // memory of those that are not unpacked at once
	data   []byte // memory of the page unpacked
	unpack unpacker
}

// headerBytes is how much is read at a time where page headers stand.
const headerBytes = 4 << 10

// maxPage is more than any page may have, in bytes, whatever the limits.
const maxPage = 1 << 30

// start begins with the pages of a chunk. The size that the chunk claims is
// known to be wrong in files of some writers: the rows say when it ends.
func (p *pages) start(r io.ReaderAt, size int64, m *parquet.ColumnMetaData) error {
	from := m.DataPageOffset
	if d := m.DictionaryPageOffset; d != nil && *d > 0 && *d < from {
		from = *d
	}
	if from < int64(len(magic)) || from >= size {
		return damaged("its pages stand at %d", from)
	}
	t := source.ConvertToThriftReader(newWindow(r, from, size-from), 0, headerBytes)
	p.codec, p.body, p.left = m.Codec, t, 0
	p.next = func() (*parquet.PageHeader, error) { return layout.ReadPageHeader(t) }
	return nil
}

// nextPage reads pages up to and with the next one that holds rows.
func (c *column) nextPage() error {
	p := &c.pages
	h, err := p.next()
	if err != nil {
		return damaged("a page header cannot be read: %v", err)
	}
	if h.CompressedPageSize < 0 || h.UncompressedPageSize < 0 {
		return damaged("a page of %d bytes, %d unpacked", h.CompressedPageSize, h.UncompressedPageSize)
	}
	limits := c.file.limits
	if int64(max(h.CompressedPageSize, h.UncompressedPageSize)) > limits.Of(schema.PageBytes) {
		return limits.Exceeded(schema.PageBytes)
	}
	c.file.unpacked += int64(h.UncompressedPageSize)
	if err := limits.Unpacked(c.file.unpacked, c.file.size); err != nil {
		return err
	}
	// A page that is unpacked at once can share its memory with the other columns'.
	buf := &c.file.packed
	if p.codec == parquet.CompressionCodec_UNCOMPRESSED || h.Type == parquet.PageType_DATA_PAGE_V2 {
		buf = &p.own
	}
	*buf, err = readBytes(p.body, *buf, int(h.CompressedPageSize))
	if p.packed = *buf; err != nil {
		if errors.Is(err, io.EOF) {
			err = io.ErrUnexpectedEOF
		}
		return fmt.Errorf("a page cannot be read to its end: %w", err)
	}
	if h.Crc != nil && uint32(*h.Crc) != crc32.ChecksumIEEE(p.packed) {
		return damaged("the checksum of a page is not that of its bytes")
	}
	size := int(h.UncompressedPageSize)
	switch h.Type {
	case parquet.PageType_DICTIONARY_PAGE:
		if h.DictionaryPageHeader == nil {
			return damaged("a dictionary without a header")
		}
		data, err := c.unpackDictionary(size)
		if err != nil {
			return err
		}
		return c.values.setDictionary(c, data, int(h.DictionaryPageHeader.NumValues), h.DictionaryPageHeader.Encoding)
	case parquet.PageType_DATA_PAGE:
		if h.DataPageHeader == nil {
			return damaged("a page without a header")
		}
		return c.startPage(h.DataPageHeader, size)
	case parquet.PageType_DATA_PAGE_V2:
		if h.DataPageHeaderV2 == nil {
			return damaged("a page without a header")
		}
		return c.startPageV2(h.DataPageHeaderV2, size)
	}
	return nil // an index: not needed
}

// unpackDictionary unpacks a dictionary. Numbers are taken from it at once; of
// texts and the like, the bytes are kept as they are.
func (c *column) unpackDictionary(size int) ([]byte, error) {
	p := &c.pages
	switch c.physical {
	case parquet.Type_INT32, parquet.Type_INT64, parquet.Type_FLOAT, parquet.Type_DOUBLE:
		return p.unpacked(p.codec, p.packed, size)
	}
	return p.unpack.page(p.codec, p.packed, size, nil)
}

// unpacked returns a page unpacked, valid until the next is read.
func (p *pages) unpacked(codec parquet.CompressionCodec, packed []byte, size int) ([]byte, error) {
	if codec == parquet.CompressionCodec_UNCOMPRESSED && len(packed) == size {
		return packed, nil
	}
	if cap(p.data) < size && size/21 <= len(packed) { // no larger than Snappy can make it; the next is about as long
		p.data = make([]byte, 0, size+size/8)
	}
	data, err := p.unpack.page(codec, packed, size, p.data)
	if cap(data) > cap(p.data) {
		p.data = data
	}
	return data, err
}

// readBytes reads n bytes, asking for memory as they come: the size is only a
// claim of the file until then.
func readBytes(r io.Reader, buf []byte, n int) ([]byte, error) {
	const step = 1 << 20
	buf = buf[:0]
	for len(buf) < n {
		k := min(step, n-len(buf))
		if cap(buf) < len(buf)+k {
			buf = append(make([]byte, 0, min(n+n/8, 2*len(buf)+step)), buf...) // the next page is about as long
		}
		got, err := io.ReadFull(r, buf[len(buf):len(buf)+k])
		buf = buf[:len(buf)+got]
		if err != nil {
			return buf, err
		}
	}
	return buf, nil
}

// startPage begins a page of the first layout: levels and values packed together.
func (c *column) startPage(h *parquet.DataPageHeader, size int) error {
	p := &c.pages
	data, err := p.unpacked(p.codec, p.packed, size)
	if err != nil {
		return err
	}
	if c.optional {
		if h.DefinitionLevelEncoding != parquet.Encoding_RLE {
			return fmt.Errorf("levels in the encoding %s are not read: write the file with levels in RLE", h.DefinitionLevelEncoding)
		}
		if len(data) < 4 {
			return damaged("a page without levels")
		}
		n := uint64(binary.LittleEndian.Uint32(data))
		if n > uint64(len(data)-4) {
			return damaged("levels longer than their page")
		}
		p.levels.reset(data[4:4+n], 1)
		data = data[4+n:]
	}
	p.left = int(h.NumValues)
	return c.startValues(h.Encoding, data)
}

// startPageV2 begins a page of the second layout: only the values are packed.
func (c *column) startPageV2(h *parquet.DataPageHeaderV2, size int) error {
	p := &c.pages
	d, r := int(h.DefinitionLevelsByteLength), int(h.RepetitionLevelsByteLength)
	if d < 0 || r < 0 || d+r > len(p.packed) || d+r > size {
		return damaged("levels longer than their page")
	}
	p.levels.reset(p.packed[r:r+d], 1)
	codec := p.codec
	if !h.IsCompressed {
		codec = parquet.CompressionCodec_UNCOMPRESSED
	}
	data, err := p.unpacked(codec, p.packed[r+d:], size-r-d)
	if err != nil {
		return err
	}
	p.left = int(h.NumValues)
	return c.startValues(h.Encoding, data)
}

func (c *column) startValues(e parquet.Encoding, data []byte) error {
	if c.pages.left < 0 {
		return damaged("a page of %d rows", c.pages.left)
	}
	return c.values.start(c, e, data)
}

// unpacker undoes the compression of pages.
type unpacker struct {
	gzip *gzip.Reader
	zstd *zstd.Decoder
}

// page unpacks a page into size bytes, in the memory of buf if it has room.
func (u *unpacker) page(codec parquet.CompressionCodec, packed []byte, size int, buf []byte) (data []byte, err error) {
	if len(packed) == 0 && size == 0 { // a page of nulls in the second layout
		return buf[:0], nil
	}
	switch codec {
	case parquet.CompressionCodec_UNCOMPRESSED:
		data = append(buf[:0], packed...)
	case parquet.CompressionCodec_SNAPPY:
		if n, err := snappy.DecodedLen(packed); err != nil || n != size {
			return nil, damaged("a Snappy page does not have the size in its header")
		}
		data, err = snappy.Decode(buf[:cap(buf)], packed)
	case parquet.CompressionCodec_GZIP:
		data, err = u.ungzip(packed, size, buf)
	case parquet.CompressionCodec_LZ4_RAW:
		data, err = unlz4(packed, size, buf)
	case parquet.CompressionCodec_ZSTD:
		if u.zstd == nil {
			u.zstd, err = zstd.NewReader(nil, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxMemory(maxPage), zstd.WithDecodeAllCapLimit(true))
			if err != nil {
				return nil, err
			}
		}
		if cap(buf) < size {
			buf = make([]byte, 0, size)
		}
		data, err = u.zstd.DecodeAll(packed, buf[:0:size]) // no further than the size claimed
	default:
		return nil, fmt.Errorf("pages packed with %s are not read: write the file with zstd, snappy, gzip or LZ4_RAW", codec)
	}
	if err != nil {
		return nil, damaged("a page cannot be unpacked: %v", err)
	}
	if len(data) != size {
		return nil, damaged("a page unpacks to %d bytes, its header says %d", len(data), size)
	}
	return data, nil
}

func (u *unpacker) ungzip(packed []byte, size int, buf []byte) (data []byte, err error) {
	r := bytes.NewReader(packed)
	if u.gzip == nil {
		u.gzip, err = gzip.NewReader(r)
	} else {
		err = u.gzip.Reset(r)
	}
	if err != nil {
		return nil, err
	}
	if data, err = readBytes(u.gzip, buf, size); err != nil {
		return nil, err
	}
	if n, err := u.gzip.Read(make([]byte, 1)); n > 0 || err != io.EOF {
		return nil, damaged("a gzip page is longer than its header says")
	}
	return data, nil
}
