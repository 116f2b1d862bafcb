package csv

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"

	"nightbook/schema"
)

// Options say how a file is written and how it is to be cut. The zero value is
// a comma-separated UTF-8 file in blocks of the usual size.
type Options struct {
	Delimiter byte     // 0: comma
	Encoding  Encoding // of files that do not begin with a byte order mark
	Limits    schema.Limits

	BlockRows int // records in a block; 0: schema.BatchRows
	ReadSize  int // bytes read at a time; 0: 128 KiB
}

// blockBytes ends a block of long records before it has all its rows.
const blockBytes = 4 << 20

// Scanner cuts a file into blocks of whole records.
type Scanner struct {
	r        io.Reader
	o        Options
	maxRow   int    // bytes of a record; a longer one is most often a quotation mark that is never closed
	rest     []byte // read and not yet handed out
	line     int64  // of rest[0]
	rows     int64
	ended    bool
	detected string
	header   []string
	within   Within
}

// Within counts the lines inside quoted fields that look like records of their
// own, with as many delimiters as the header has: what a quotation mark out of
// place makes of the records up to the next one.
type Within struct {
	Lines int64
	First int64 // line of the first record that has some
}

// NewScanner reads the header of r, its first record that is not blank. A
// file without one, or with one that cannot be taken apart, is a
// *schema.CellError without the file's name.
func NewScanner(r io.Reader, o Options) (*Scanner, error) {
	if o.Delimiter == 0 {
		o.Delimiter = ','
	}
	if o.BlockRows == 0 {
		o.BlockRows = schema.BatchRows
	}
	if o.ReadSize == 0 {
		o.ReadSize = 128 << 10
	}
	s := &Scanner{o: o, line: 1, maxRow: int(o.Limits.Of(schema.RowBytes))}
	var err error
	if s.r, s.detected, err = decoded(r, o.Encoding); err != nil {
		return nil, err
	}
	return s, s.readHeader()
}

func (s *Scanner) readHeader() error {
	var b Block
	err := s.next(&b, 1)
	if err == io.EOF {
		return fault(0, "the file is empty: its first row must name the columns")
	}
	if err != nil {
		return err
	}
	rec := b.Records[0]
	if rec.Fault != NoFault {
		return fault(rec.Line, "the header cannot be read: "+rec.Fault.String())
	}
	text := b.Data[rec.Start:rec.End]
	if bytes.IndexByte(text, 0) >= 0 {
		return fault(rec.Line, zeroBytes(text))
	}
	if bytes.IndexByte(text, '\r') >= 0 && !rec.Quoted {
		return fault(rec.Line, "lines end in a carriage return alone: save the file with LF or CRLF line ends")
	}
	for _, f := range splitQuoted(nil, &b, rec, s.o.Delimiter) {
		s.header = append(s.header, strings.Trim(string(b.Data[f.start:f.end]), " \t"))
	}
	s.rows, s.within = 0, Within{}
	if int64(len(s.header)) > s.o.Limits.Of(schema.Columns) {
		return s.o.Limits.Exceeded(schema.Columns)
	}
	return nil
}

// zeroBytes says what a header is that holds bytes of zero: most often text in
// two or four bytes a character, without a byte order mark.
func zeroBytes(text []byte) string {
	const utf8 = "save the file as UTF-8"
	switch zeros := bytes.Count(text, []byte{0}); {
	case zeros == len(text):
		return "the file begins with zero bytes: it was not written to its end; fetch it again, or have it written again"
	case zeros >= len(text)/2+len(text)/5:
		return "the header holds zero bytes, as UTF-32 does, which is not read: " + utf8
	}
	return `the header holds zero bytes, which are no text: ` + utf8 + `, or, if it is UTF-16, set [csv] encoding = "utf-16" in run.toml`
}

// NewDecoder returns a decoder for the blocks of the file.
func (s *Scanner) NewDecoder() *Decoder {
	return &Decoder{delimiter: s.o.Delimiter, columns: make([]column, len(s.header)), limits: s.o.Limits, maxField: uint32(s.o.Limits.Of(schema.FieldBytes))}
}

// Header returns the names of the columns, in the order of the file.
func (s *Scanner) Header() []string { return s.header }

// Detected names the encoding that a byte order mark showed the file to have
// where that is not the one declared, or is "".
func (s *Scanner) Detected() string { return s.detected }

// Delimiter returns the delimiter in use.
func (s *Scanner) Delimiter() byte { return s.o.Delimiter }

// Within tells of the records read so far.
func (s *Scanner) Within() Within { return s.within }

// lookWithin looks into a record that runs over several lines.
func (s *Scanner) lookWithin(record []byte) {
	lines := bytes.Split(record, []byte{'\n'})
	for _, line := range lines[1:] {
		if bytes.Count(line, []byte{s.o.Delimiter}) < max(1, len(s.header)-1) {
			continue
		}
		if s.within.Lines == 0 {
			s.within.First = s.line
		}
		s.within.Lines++
	}
}

// Rows returns how many records have been handed out, the header not counted.
func (s *Scanner) Rows() int64 { return s.rows }

// Next cuts the next block into b. It returns io.EOF when there is none, the
// reader's error as it came, and a *schema.CellError without the file's name
// for a quotation mark that is not closed or a record that is too long to be one.
func (s *Scanner) Next(b *Block) error { return s.next(b, s.o.BlockRows) }

func (s *Scanner) next(b *Block, rows int) error {
	b.Data = append(b.Data[:0], s.rest...)
	b.Records = b.Records[:0]
	at := 0
	for {
		for len(b.Records) < rows && at < len(b.Data) {
			c, ok := cut(b.Data[at:], s.o.Delimiter, s.ended)
			if !ok && len(b.Data)-at <= s.maxRow {
				break
			}
			if c.open && s.ended {
				return openQuote(s.line, s.line+int64(c.opens))
			}
			if !ok || c.end > s.maxRow {
				return s.tooLong(&c)
			}
			if c.end > 0 { // a blank line is no record
				if c.lines > 1 && c.fault == NoFault {
					s.lookWithin(b.Data[at : at+c.end])
				}
				b.Records = append(b.Records, Record{uint32(at), uint32(at + c.end), s.line, c.quoted, c.fault, uint32(c.lines)})
			}
			s.line += int64(c.lines)
			at += c.next
		}
		if len(b.Records) >= rows || s.ended || len(b.Records) > 0 && at >= blockBytes {
			break
		}
		if err := s.read(b); err != nil {
			return err
		}
	}
	s.rest = append(s.rest[:0], b.Data[at:]...)
	b.Data = b.Data[:at]
	s.rows += int64(len(b.Records))
	if len(b.Records) == 0 {
		return io.EOF
	}
	return nil
}

// read appends some more of the file to the block.
func (s *Scanner) read(b *Block) error {
	have := len(b.Data)
	if cap(b.Data) < have+s.o.ReadSize {
		more := s.o.ReadSize
		if have > 0 { // most files are short, and the others fill blocks
			more = max(have, 4*s.o.ReadSize)
		}
		b.Data = append(make([]byte, 0, have+more), b.Data...)
	}
	n, err := s.r.Read(b.Data[have : have+s.o.ReadSize])
	b.Data = b.Data[:have+n]
	if errors.Is(err, io.EOF) {
		s.ended = true
		return nil
	}
	return err
}

// tooLong is the error on a record that is too long to be one.
func (s *Scanner) tooLong(c *section) error {
	hint := ""
	if c.open {
		hint = fmt.Sprintf("; or close the quotation mark that opens on line %d", s.line+int64(c.opens))
	}
	return &schema.CellError{Line: s.line, Code: schema.BadRow, Err: fmt.Errorf("%w%s", s.o.Limits.Exceeded(schema.RowBytes), hint)}
}

// openQuote is the error on a record that would take all that follows for one
// of its fields.
func openQuote(line, opens int64) error {
	return fault(line, fmt.Sprintf("the record that starts here does not end: close the quotation mark that opens on line %d", opens))
}

func fault(line int64, reason string) error {
	return &schema.CellError{Line: line, Code: schema.BadRow, Err: errors.New(reason)}
}

// FieldCount is the reason given for a row with the wrong number of fields.
func FieldCount(got, want int) string {
	return fmt.Sprintf("the row has %d fields, the header has %d: put fields that hold the delimiter in quotation marks", got, want)
}
