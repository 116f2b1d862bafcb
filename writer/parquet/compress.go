package parquet

import (
	"bytes"
	"errors"
	"fmt"

	"github.com/golang/snappy"
	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"
	"github.com/xitongsys/parquet-go/parquet"
)

// zstdWindow is how far back matches are looked for: the encoder's memory grows
// with it, and no page profits from more.
const zstdWindow = 256 << 10

// compressor is a codec of the file. It may be used by several goroutines.
type compressor struct {
	codec parquet.CompressionCodec
	zstd  *zstd.Encoder
}

func newCompressor(name string, workers int) (*compressor, error) {
	switch name {
	case "zstd", "":
		e, err := zstd.NewWriter(nil,
			zstd.WithEncoderLevel(zstd.SpeedFastest),
			zstd.WithEncoderConcurrency(workers),
			zstd.WithWindowSize(zstdWindow),
			zstd.WithEncoderCRC(false), // pages have a checksum of their own
			zstd.WithZeroFrames(true))
		return &compressor{parquet.CompressionCodec_ZSTD, e}, err
	case "snappy":
		return &compressor{codec: parquet.CompressionCodec_SNAPPY}, nil
	case "gzip":
		return &compressor{codec: parquet.CompressionCodec_GZIP}, nil
	case "none":
		return &compressor{codec: parquet.CompressionCodec_UNCOMPRESSED}, nil
	}
	return nil, fmt.Errorf("parquet compression %q: must be zstd, snappy, gzip or none", name)
}

// pack returns raw compressed. The result is valid until the next use of s.
func (c *compressor) pack(s *scratch, raw []byte, codec parquet.CompressionCodec) ([]byte, error) {
	switch codec {
	case parquet.CompressionCodec_ZSTD:
		s.packed = c.zstd.EncodeAll(raw, s.packed[:0])
	case parquet.CompressionCodec_SNAPPY:
		s.packed = snappy.Encode(s.packed[:cap(s.packed)], raw)
	case parquet.CompressionCodec_GZIP:
		buf := bytes.NewBuffer(s.packed[:0])
		s.gzip.Reset(buf)
		_, err := s.gzip.Write(raw)
		err = errors.Join(err, s.gzip.Close())
		s.packed = buf.Bytes()
		return s.packed, err
	default:
		return raw, nil
	}
	return s.packed, nil
}

func newGzip() *gzip.Writer {
	w, err := gzip.NewWriterLevel(nil, gzip.BestSpeed)
	if err != nil {
		panic("parquet: gzip does not know its own level")
	}
	return w
}
