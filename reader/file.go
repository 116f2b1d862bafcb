package reader

import (
	"bufio"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"io/fs"
	"os"
	"sync/atomic"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"

	"nightbook/schema"
)

// input is a file of the snapshot folder and the table it holds, or a folder of
// the parts of one.
type input struct {
	path, name string
	table      *schema.Table
	format     format
	parted     bool // path is a folder of files of that format
}

// file is an input being read. What is read of it in order is hashed on the way.
// Reading ends with the context.
type file struct {
	*os.File
	in    *input
	ctx   context.Context
	info  os.FileInfo // as it was opened
	sum   hash.Hash
	taken atomic.Int64 // bytes read and hashed; a decompressor may read ahead on its own goroutine
	close func()
}

func (in *input) open(ctx context.Context) (*file, error) {
	info, err := os.Stat(in.path)
	if err == nil && !info.Mode().IsRegular() { // to open a pipe would wait for its writer
		err = fmt.Errorf("%s: %w", in.path, errNotRegular)
	}
	if link, linkErr := os.Readlink(in.path); linkErr == nil && errors.Is(err, fs.ErrNotExist) {
		err = fmt.Errorf("%s: it is a link to %s, which is not there: mend the link, or put the file itself there", in.path, link)
	}
	if err != nil {
		return nil, err
	}
	f, err := os.Open(in.path)
	if err != nil {
		return nil, err
	}
	if info, err = f.Stat(); err != nil {
		return nil, errors.Join(err, f.Close())
	}
	return &file{File: f, in: in, ctx: ctx, info: info, sum: sha256.New(), close: func() {}}, nil
}

func (f *file) size() int64 { return f.info.Size() }

// Read reads the file as it lies on disk.
func (f *file) Read(p []byte) (int, error) {
	if err := f.ctx.Err(); err != nil {
		return 0, err
	}
	n, err := f.File.Read(p)
	f.sum.Write(p[:n])
	f.taken.Add(int64(n))
	return n, err
}

// ReadAt reads out of order what has been hashed before.
func (f *file) ReadAt(p []byte, at int64) (int, error) {
	if err := f.ctx.Err(); err != nil {
		return 0, err
	}
	return f.File.ReadAt(p, at)
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

// finish reads what is left of the file and returns its entry in the inputs. The
// hash is that of what was read; a file that changed meanwhile is refused.
func (f *file) finish(rows int64) (schema.InputFile, error) {
	if err := f.hashAll(); err != nil {
		return schema.InputFile{}, err
	}
	if err := f.changed(); err != nil {
		return schema.InputFile{}, err
	}
	return schema.InputFile{Name: f.in.name, Table: f.in.table.Name, SHA256: hex.EncodeToString(f.sum.Sum(nil)), Bytes: f.taken.Load(), Rows: rows}, nil
}

var errChanged = errors.New("the file changed while it was being read, and nothing of it is used: run again once it has been written")

// changed returns errChanged unless the file is as it was when it was opened: the
// same file under its name, of the same size and time of modification.
func (f *file) changed() error {
	now, err := os.Stat(f.in.path)
	if err != nil || !os.SameFile(now, f.info) || now.Size() != f.info.Size() || !now.ModTime().Equal(f.info.ModTime()) {
		return errChanged
	}
	return nil
}

// fail puts the file's name on an error from below. One that a change of the
// file explains is told as that.
func (f *file) fail(sheet string, err error) error {
	if f.ctx.Err() == nil && f.changed() != nil {
		err = errChanged
	}
	return f.in.fail(sheet, err)
}

func inputOfBytes(name, table string, text []byte) schema.InputFile {
	sum := sha256.Sum256(text)
	return schema.InputFile{Name: name, Table: table, SHA256: hex.EncodeToString(sum[:]), Bytes: int64(len(text))}
}

var errTrailing = errors.New("something else stands behind the end of the packed text: the file is damaged, or was written over a longer one")

const fetchAgain = "fetch it again, or have it written again"

// unpacked returns the file's text without its compression. A packed file that
// ends too early gives io.ErrUnexpectedEOF.
func (f *file) unpacked(limits *schema.Limits) (io.Reader, error) {
	switch f.in.format.packed {
	case "gzip":
		packed := bufio.NewReaderSize(f, 64<<10)
		at := func() int64 { return f.taken.Load() - int64(packed.Buffered()) }
		z, err := gzip.NewReader(packed)
		if err != nil {
			return nil, f.unpacking(noEOF(err), at())
		}
		z.Multistream(false)
		return &bounded{r: &members{z, packed}, f: f, limits: limits, at: at}, nil
	case "zstd":
		z, err := zstd.NewReader(f, zstd.WithDecoderMaxWindow(uint64(limits.Of(schema.WindowBytes))))
		if err != nil {
			return nil, err
		}
		f.close = z.Close
		return &bounded{r: z, f: f, limits: limits, at: f.taken.Load}, nil
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

// bounded holds unpacking to the limits, and tells where it failed.
type bounded struct {
	r      io.Reader
	f      *file
	limits *schema.Limits
	at     func() int64 // how far the packed file has been read
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
	if err != nil && err != io.EOF {
		err = b.f.unpacking(err, b.at())
	}
	return n, err
}

// unpacking says of an error of what unpacks the file how far it has come.
func (f *file) unpacking(err error, at int64) error {
	switch {
	case f.ctx.Err() != nil, ownError(err):
		return err
	case errors.Is(err, io.ErrUnexpectedEOF):
		return fmt.Errorf("its %d bytes are not all of it: %w", f.size(), err)
	case errors.Is(err, errTrailing), errors.Is(err, zstd.ErrMagicMismatch): // that at the start of the file has been looked at
		return fmt.Errorf("before byte %d of %d, %w: %s", at+1, f.size(), errTrailing, fetchAgain)
	}
	return fmt.Errorf("the packed text is damaged within the first %d of its %d bytes (%w): %s", at, f.size(), err, fetchAgain)
}

// noEOF returns err, an early end as such.
func noEOF(err error) error {
	if err == io.EOF {
		return io.ErrUnexpectedEOF
	}
	return err
}
