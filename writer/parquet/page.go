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
	bytes        []byte   // its header, and its data if they are few
	data         [][]byte // else what stands behind the header, in blocks of the chunk
	size         int      // of all of it
	uncompressed int      // size of header and data before compression

	// of data pages
	encoding parquet.Encoding
	rows     int
	bounds   encodedBounds
}

// fewBytes are not worth a block.
const fewBytes = 1 << 10

// seal makes the page of its header and its data, which were size bytes before
// compression: what is packed, which is copied, and behind it a block, which
// the chunk now owns.
func (c *chunk) seal(p *page, h *parquet.PageHeader, size int, packed, block []byte, s *scratch) error {
	sum := int32(crc32.Update(crc32.ChecksumIEEE(packed), crc32.IEEETable, block))
	h.Crc = &sum
	h.UncompressedPageSize, h.CompressedPageSize = int32(size), int32(len(packed)+len(block))
	header, err := s.thrift.serialize(h)
	if err != nil {
		return err
	}
	p.uncompressed = len(header) + size
	p.size = len(header) + len(packed) + len(block)
	p.bytes, p.data = append(p.bytes[:0], header...), p.data[:0]
	if len(packed) <= fewBytes {
		p.bytes = append(p.bytes, packed...)
	} else {
		p.data = c.store(p.data, packed)
	}
	if len(block) > 0 {
		p.data = append(p.data, block)
		c.owned = append(c.owned, block)
	}
	c.held += int64(p.size)
	return nil
}

func (p *page) write(w *counter) error {
	_, err := w.Write(p.bytes)
	for _, piece := range p.data {
		if err == nil {
			_, err = w.Write(piece)
		}
	}
	return err
}

// scratch is the working memory of one worker.
type scratch struct {
	raw     []byte     // a page before compression
	packed  []byte     // and after
	numbers []byte     // of a slice of a column, on their way to its page
	trial   numberDict // of a chunk's first page
	indices []uint32   // into it
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
