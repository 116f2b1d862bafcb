package reader

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"os"
	"sync/atomic"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"

	"nightbook/schema"
)

// input is a file of the snapshot folder and the table it holds.
type input struct {
	path, name string
	table      *schema.Table
	format     format
}

// file is an input being read. What is read of it in order is hashed on the way.
type file struct {
	*os.File
	in    *input
	size  int64
	sum   hash.Hash
	taken atomic.Int64 // bytes read and hashed; a decompressor may read ahead on its own goroutine
	close func()
}

func (in *input) open() (*file, error) {
	info, err := os.Stat(in.path)
	if err == nil && !info.Mode().IsRegular() { // to open a pipe would wait for its writer
		err = fmt.Errorf("%s: %w", in.path, errNotRegular)
	}
	if err != nil {
		return nil, err
	}
	f, err := os.Open(in.path)
	if err != nil {
		return nil, err
	}
	return &file{File: f, in: in, size: info.Size(), sum: sha256.New(), close: func() {}}, nil
}

// Read reads the file as it lies on disk.
func (f *file) Read(p []byte) (int, error) {
	n, err := f.File.Read(p)
	f.sum.Write(p[:n])
	f.taken.Add(int64(n))
	return n, err
}

// Close closes the file and what unpacks it.
func (f *file) Close() error {
	f.close()
	return f.File.Close()
}

// hashAll hashes the whole of a file that is then read out of order.
func (f *file) hashAll() error {
	_, err := io.Copy(io.Discard, struct{ io.Reader }{f})
	return err
}

// finish reads what is left of the file and returns its entry in the inputs.
func (f *file) finish(rows int64) (schema.InputFile, error) {
	if err := f.hashAll(); err != nil {
		return schema.InputFile{}, err
	}
	return schema.InputFile{Name: f.in.name, Table: f.in.table.Name, SHA256: hex.EncodeToString(f.sum.Sum(nil)), Bytes: f.taken.Load(), Rows: rows}, nil
}

func inputOfBytes(name, table string, text []byte) schema.InputFile {
	sum := sha256.Sum256(text)
	return schema.InputFile{Name: name, Table: table, SHA256: hex.EncodeToString(sum[:]), Bytes: int64(len(text))}
}

var errTrailing = errors.New("something that is not gzip stands behind the end of the packed text: the file is damaged, or was written over a longer one")

// unpacked returns the file's text without its compression. A packed file that
// ends too early gives io.ErrUnexpectedEOF.
func (f *file) unpacked(limits *schema.Limits) (io.Reader, error) {
	switch f.in.format.packed {
	case "gzip":
		packed := bufio.NewReaderSize(f, 64<<10)
		z, err := gzip.NewReader(packed)
		if err == io.EOF {
			return nil, fmt.Errorf("not a gzip file: %w", io.ErrUnexpectedEOF)
		}
		if err != nil {
			return nil, err
		}
		z.Multistream(false)
		return &bounded{r: &members{z, packed}, f: f, limits: limits}, nil
	case "zstd":
		if f.size == 0 { // the decoder takes nothing at all for an empty text
			return nil, fmt.Errorf("not a zstd file: %w", io.ErrUnexpectedEOF)
		}
		z, err := zstd.NewReader(f, zstd.WithDecoderMaxWindow(uint64(limits.Of(schema.WindowBytes))))
		if err != nil {
			return nil, err
		}
		f.close = z.Close
		return &bounded{r: z, f: f, limits: limits}, nil
	}
	return struct{ io.Reader }{f}, nil
}

// members unpacks the members of a gzip file one after the other, and tells
// what is none from a member that is cut short.
type members struct {
	*gzip.Reader
	packed *bufio.Reader
}

func (m *members) Read(p []byte) (int, error) {
	n, err := m.Reader.Read(p)
	if err != io.EOF {
		return n, err
	}
	head, err := m.packed.Peek(2)
	switch {
	case len(head) == 0:
		return n, err // io.EOF, unless the disk failed
	case string(head) != "\x1f\x8b":
		return n, errTrailing
	}
	if err := m.Reset(m.packed); err != nil {
		return n, err
	}
	m.Multistream(false)
	return n, nil
}

// bounded holds unpacking to the limits.
type bounded struct {
	r      io.Reader
	f      *file
	limits *schema.Limits
	n      int64
}

func (b *bounded) Read(p []byte) (int, error) {
	n, err := b.r.Read(p)
	if errors.Is(err, zstd.ErrWindowSizeExceeded) {
		return n, b.limits.Exceeded(schema.WindowBytes)
	}
	b.n += int64(n)
	if err := b.limits.Unpacked(b.n, b.f.taken.Load()); err != nil {
		return 0, err
	}
	return n, err
}
