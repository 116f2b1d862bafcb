package xlsx

import (
	"archive/zip"
	"bytes"
	"hash/crc32"
	"io"
	"io/fs"
	"slices"
	"strings"

	"github.com/klauspost/compress/flate"
)

// dosEpoch is 1980-01-01 in the form of a zip entry: the time of every part.
const dosEpoch = 1<<5 | 1

// capture takes the parts that excelize makes.
type capture struct{ parts map[string]*bytes.Buffer }

// Create starts a part.
func (c *capture) Create(name string) (io.Writer, error) {
	if c.parts == nil {
		c.parts = map[string]*bytes.Buffer{}
	}
	c.parts[name] = new(bytes.Buffer)
	return c.parts[name], nil
}

// AddFS is not called by excelize for workbooks made here.
func (c *capture) AddFS(fs.FS) error { panic("xlsx: unexpected call") }

// Close does nothing.
func (c *capture) Close() error { return nil }

// chunks is a buffer that grows without moving what it holds.
type chunks struct {
	list [][]byte
	size int64
}

func (c *chunks) Write(b []byte) (int, error) {
	n := len(b)
	c.size += int64(n)
	for len(b) > 0 {
		last := len(c.list) - 1
		if last < 0 || len(c.list[last]) == cap(c.list[last]) {
			c.list = append(c.list, make([]byte, 0, 1<<10<<min(len(c.list), 6)))
			last++
		}
		fits := min(len(b), cap(c.list[last])-len(c.list[last]))
		c.list[last] = append(c.list[last], b[:fits]...)
		b = b[fits:]
	}
	return n, nil
}

// piece is a stretch of a part, compressed on its own.
type piece struct {
	packed chunks
	flate  *flate.Writer
	sum    uint32 // CRC of the stretch
	size   int64  // before compression
}

func newPiece() *piece {
	p := new(piece)
	var err error
	if p.flate, err = flate.NewWriter(&p.packed, flate.BestSpeed); err != nil {
		panic("xlsx: flate does not know its own level")
	}
	return p
}

func (p *piece) Write(b []byte) (int, error) {
	p.sum = crc32.Update(p.sum, crc32.IEEETable, b)
	p.size += int64(len(b))
	return p.flate.Write(b)
}

// end completes the stretch so that another can follow it in the same stream.
func (p *piece) end() error { return p.flate.Flush() }

func wholePiece(b []byte) *piece {
	p := newPiece()
	p.Write(b) // into memory
	p.end()
	return p
}

// part is an entry of the zip file: the stretches one after the other.
type part struct {
	name   string
	pieces []*piece
}

// finalBlock is an empty last block, which ends a stream of deflate blocks.
var finalBlock = []byte{0x03, 0x00}

// writeZip writes the parts in the order of their names, but for the list of
// contents, which readers expect first.
func writeZip(w io.Writer, parts []part) error {
	slices.SortFunc(parts, func(a, b part) int { return strings.Compare(a.name, b.name) })
	const contents = "[Content_Types].xml"
	if i := slices.IndexFunc(parts, func(p part) bool { return p.name == contents }); i > 0 {
		p := parts[i]
		parts = slices.Insert(slices.Delete(parts, i, i+1), 0, p)
	}
	zw := zip.NewWriter(w)
	for _, p := range parts {
		//lint:ignore SA1019 CreateRaw writes this field and does not look at Modified
		h := &zip.FileHeader{Name: p.name, Method: zip.Deflate, ModifiedDate: dosEpoch}
		for _, s := range p.pieces {
			h.CRC32 = combineCRC(h.CRC32, s.sum, s.size)
			h.UncompressedSize64 += uint64(s.size)
			h.CompressedSize64 += uint64(s.packed.size)
		}
		h.CompressedSize64 += uint64(len(finalBlock))
		entry, err := zw.CreateRaw(h)
		if err != nil {
			return err
		}
		for _, s := range p.pieces {
			for _, b := range s.packed.list {
				if _, err := entry.Write(b); err != nil {
					return err
				}
			}
		}
		if _, err := entry.Write(finalBlock); err != nil {
			return err
		}
	}
	return zw.Close()
}

// combineCRC returns the CRC of two stretches from the CRC of each and the size
// of the second. A CRC is a remainder modulo a polynomial over GF(2); to append
// size bytes is to multiply by x to the power of 8·size.
func combineCRC(first, second uint32, size int64) uint32 {
	power := uint32(1) << 31 // x^0, the highest bit being the lowest power
	square := uint32(1) << 30
	for n := uint64(size) * 8; n > 0; n >>= 1 {
		if n&1 == 1 {
			power = multiply(power, square)
		}
		square = multiply(square, square)
	}
	return multiply(first, power) ^ second
}

// multiply multiplies two polynomials modulo that of CRC-32, bits reversed.
func multiply(a, b uint32) uint32 {
	var p uint32
	for bit := uint32(1) << 31; bit > 0; bit >>= 1 {
		if a&bit != 0 {
			p ^= b
		}
		carry := b & 1
		b >>= 1
		if carry == 1 {
			b ^= crc32.IEEE
		}
	}
	return p
}
