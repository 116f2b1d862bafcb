package reader

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"strings"

	"nightbook/reader/parquet"
	"nightbook/reader/xlsx"
	"nightbook/schema"
)

// signature is what the first bytes of a file show it to be.
type signature struct {
	magic  string
	is     string
	suffix string // of the name under which it is read; "" where it is not
	remedy string // of what is not read
}

// signatures lists what files turn out to be that bear another's name.
//
// Source: RFC 1952 section 2.3.1 (gzip), RFC 8878 section 3.1.1 (zstd), the Parquet
// format's own description, APPNOTE.TXT section 4.3 (ZIP); the others are as the
// programs that write them have it.
var signatures = []signature{
	{"\x1f\x8b", "a gzip file", ".csv.gz", ""},
	{"\x28\xb5\x2f\xfd", "a zstd file", ".csv.zst", ""},
	{"PAR1", "a Parquet file", ".parquet", ""},
	{"PARE", "an encrypted Parquet file", "", "write it without encryption"},
	{"PK\x03\x04", "a ZIP archive, as workbooks are", ".xlsx", "if it is no workbook, unpack it and give the file within"},
	{"PK\x05\x06", "an empty ZIP archive", "", "give the file that it should hold"},
	{"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "an .xls workbook or one with a password", "", "save it as .xlsx without a password"},
	{"BZh91AY&SY", "a bzip2 file", "", "unpack it, or pack it with gzip or zstd"},
	{"\xfd7zXZ\x00", "an xz file", "", "unpack it, or pack it with gzip or zstd"},
	{"7z\xbc\xaf\x27\x1c", "a 7z archive", "", "unpack it"},
	{"\x04\x22\x4d\x18", "an LZ4 file", "", "unpack it, or pack it with gzip or zstd"},
	{"ORC", "an ORC file", "", "write it as Parquet"},
	{"Obj\x01", "an Avro file", "", "write it as Parquet"},
	{"ARROW1\x00", "an Arrow file", "", "write it as Parquet"},
	{"%PDF-", "a PDF document", "", "give the table itself"},
	{"SQLite format 3\x00", "an SQLite database", "", "write the table as CSV or Parquet"},
	{"<!doctype html", "a web page", "", "what was fetched is most often a message of the server: read it, and fetch the file again"},
	{"<html", "a web page", "", "what was fetched is most often a message of the server: read it, and fetch the file again"},
	{"<?xml", "an XML document", "", "write the table as CSV or Parquet"},
}

// magicBytes is how many first bytes are looked at.
const magicBytes = 16

// signatureOf returns what the first bytes of a file show it to be, or nil.
func signatureOf(head []byte) *signature {
	for i := range signatures {
		c := &signatures[i]
		m := len(c.magic)
		switch {
		case len(head) < m:
		case c.magic[0] == '<' && strings.EqualFold(string(head[:m]), c.magic),
			string(head[:m]) == c.magic && (!letters(c.magic) || bytes.ContainsFunc(head, control)):
			return c
		}
	}
	return nil
}

// letters reports whether a text could begin with that as well.
func letters(magic string) bool {
	return !strings.ContainsFunc(magic, func(r rune) bool { return r < '0' || r > 'z' })
}

func control(r rune) bool { return r < ' ' && r != '\t' && r != '\r' && r != '\n' }

// begins reports whether a file begins as those of the format do.
func (f *format) begins(head []byte) bool {
	// A zstd file may begin with a frame that is to be skipped: RFC 8878 section 3.1.2.
	skipped := f.packed == "zstd" && len(head) >= 4 && head[0]>>4 == 5 && string(head[1:4]) == "\x2a\x4d\x18"
	return skipped || f.magic != "" && bytes.HasPrefix(head, []byte(f.magic))
}

// checkContent refuses a file whose first bytes are not those of its format.
// What begins like nothing that is known is text, where it is to be text.
func (f *file) checkContent() error {
	head := make([]byte, magicBytes)
	n, err := f.ReadAt(head, 0)
	if err != nil && err != io.EOF {
		return err
	}
	head = head[:n]
	want := &f.in.format
	if want.begins(head) {
		return nil
	}
	if want.magic != "" && strings.HasPrefix(want.magic, string(head)) {
		return fmt.Errorf("%d bytes are not %s: %w", n, want.what, io.ErrUnexpectedEOF)
	}
	is := signatureOf(head)
	stem, _ := stemOf(f.in.name)
	switch {
	case is == nil && want.magic == "":
		return nil
	case is == nil && len(bytes.Trim(head, "\x00")) == 0:
		return fmt.Errorf("it begins with zero bytes and is not %s: it was not written to its end; %s", want.what, fetchAgain)
	case is == nil:
		return fmt.Errorf("it begins with %q and is not %s, as its name says: if it is plain text, name it %s.csv; if not, %s", head, want.what, stem, fetchAgain)
	case is.suffix == "":
		return fmt.Errorf("it is %s and not %s, as its name says: %s", is.is, want.what, is.remedy)
	case is.remedy != "":
		return fmt.Errorf("it is %s, and not %s, as its name says: name it %s%s; %s", is.is, want.what, stem, is.suffix, is.remedy)
	}
	return fmt.Errorf("it is %s and not %s, as its name says: name it %s%s", is.is, want.what, stem, is.suffix)
}

// remedied adds what to do to an error on a file that is cut short or damaged.
func remedied(err error) error {
	switch {
	case errors.Is(err, io.ErrUnexpectedEOF):
		return fmt.Errorf("the file is cut short: %w; %s", err, fetchAgain)
	case parquet.Damaged(err), xlsx.Damaged(err):
		return fmt.Errorf("%w; %s", err, fetchAgain)
	}
	return err
}

// ownError reports whether an error comes from the disk or a limit, and not from
// what unpacks the file.
func ownError(err error) bool {
	var disk *fs.PathError
	var limit *schema.LimitError
	return errors.As(err, &disk) || errors.As(err, &limit)
}
