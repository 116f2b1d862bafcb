package parquet

import (
	"context"
	"hash/crc32"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/klauspost/compress/gzip"
	"github.com/xitongsys/parquet-go/parquet"
)

// page is a finished page: what goes into the file.
type page struct {
	bytes        []byte // header and data
	block        []byte // data behind them: the numbers of a page that is not packed
	uncompressed int    // size of header and data before compression

	// of data pages
	encoding parquet.Encoding
	rows     int
	bounds   encodedBounds
}

// size is how many bytes the page takes in the file.
func (p *page) size() int { return len(p.bytes) + len(p.block) }

// seal makes the page of its header and its data, which were size bytes before
// compression. The page keeps the block, and copies the rest.
func (p *page) seal(h *parquet.PageHeader, size int, packed, block []byte, s *scratch) error {
	sum := int32(crc32.Update(crc32.ChecksumIEEE(packed), crc32.IEEETable, block))
	h.Crc = &sum
	h.UncompressedPageSize, h.CompressedPageSize = int32(size), int32(len(packed)+len(block))
	header, err := s.thrift.serialize(h)
	if err != nil {
		return err
	}
	p.uncompressed = len(header) + size
	p.bytes = append(append(p.bytes[:0], header...), packed...)
	p.block = block
	return nil
}

// write writes the page, and gives its block back.
func (p *page) write(w *counter, b *blocks) error {
	_, err := w.Write(p.bytes)
	if err == nil && len(p.block) > 0 {
		_, err = w.Write(p.block)
	}
	b.give(p.block)
	p.block = nil
	return err
}

// scratch is the working memory of one worker.
type scratch struct {
	raw     []byte   // a page before compression
	packed  []byte   // and after
	indices []uint32 // of a page's numbers
	gzip    *gzip.Writer
	thrift  *serializer
}

func newScratch() *scratch { return &scratch{gzip: newGzip(), thrift: newSerializer()} }

// serializer turns structures of the format into the compact encoding.
type serializer struct{ t *thrift.TSerializer }

func newSerializer() *serializer {
	t := thrift.NewTSerializer()
	t.Protocol = thrift.NewTCompactProtocolFactoryConf(nil).GetProtocol(t.Transport)
	return &serializer{t}
}

// serialize returns the bytes of m.
func (s *serializer) serialize(m thrift.TStruct) ([]byte, error) {
	return s.t.Write(context.Background(), m)
}
