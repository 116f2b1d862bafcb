package parquet

import (
	"context"
	"hash/crc32"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/klauspost/compress/gzip"
	"github.com/xitongsys/parquet-go/parquet"
)

// page is a finished page: its header and its data, as they go into the file.
type page struct {
	bytes        []byte
	headerSize   int
	uncompressed int // size of header and data before compression

	// of data pages
	encoding parquet.Encoding
	rows     int
	bounds   encodedBounds
}

// seal makes the page's bytes from its header and its data, of size bytes
// before compression.
func (p *page) seal(h *parquet.PageHeader, size int, packed []byte, s *scratch) error {
	sum := int32(crc32.ChecksumIEEE(packed))
	h.Crc = &sum
	h.UncompressedPageSize, h.CompressedPageSize = int32(size), int32(len(packed))
	header, err := s.thrift.serialize(h)
	if err != nil {
		return err
	}
	p.headerSize = len(header)
	p.uncompressed = len(header) + size
	p.bytes = append(append(p.bytes[:0], header...), packed...)
	return nil
}

// scratch is the working memory of one worker.
type scratch struct {
	raw    []byte // a page before compression
	packed []byte // and after
	gzip   *gzip.Writer
	thrift *serializer
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
