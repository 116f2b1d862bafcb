package reader

import (
	"archive/zip"
	"bytes"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf16"

	"nightbook/schema"
)

// archived returns a ZIP archive of one file.
func archived(t testing.TB, name, text string) string {
	t.Helper()
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	w, err := z.Create(name)
	if err == nil {
		_, err = io.WriteString(w, text)
	}
	if err = errors.Join(err, z.Close()); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// wideText returns an ASCII text in characters of so many bytes, the low one first or last.
func wideText(text string, size int, first bool) string {
	var b strings.Builder
	for _, c := range []byte(text) {
		zeros := strings.Repeat("\x00", size-1)
		if first {
			b.WriteString(string(rune(c)) + zeros)
		} else {
			b.WriteString(zeros + string(rune(c)))
		}
	}
	return b.String()
}

// A file of another form than its name says is told for what it is, with what to
// name it or how to save it.
func TestFilesUnderOtherNames(t *testing.T) {
	text := smallest["positions.csv"]
	parquet := parquetFile(t, noted{"1", "North", "ALBA", "stock", 1, ""})
	for _, c := range []struct{ name, file, want string }{
		{"positions.csv", gzipped(t, text), "it is a gzip file and not a text file, as its name says: name it positions.csv.gz"},
		{"positions.csv", zstandard(t, text), "it is a zstd file and not a text file, as its name says: name it positions.csv.zst"},
		{"positions.csv", parquet, "it is a Parquet file and not a text file, as its name says: name it positions.parquet"},
		{"positions.csv", sheetOf(t, text), "it is a ZIP archive, as workbooks are, and not a text file, as its name says: name it positions.xlsx; if it is no workbook, unpack it"},
		{"positions.csv", "<!DOCTYPE html>\n<title>502 Bad Gateway</title>", "it is a web page and not a text file"},
		{"positions.csv", "SQLite format 3\x00....", "it is an SQLite database and not a text file, as its name says: write the table as CSV or Parquet"},
		{"positions.csv.gz", text, `it begins with "line_id,book,und" and is not a gzip file, as its name says: if it is plain text, name it positions.csv`},
		{"positions.csv.gz", zstandard(t, text), "it is a zstd file and not a gzip file, as its name says: name it positions.csv.zst"},
		{"positions.csv.zst", text, "and is not a zstd file, as its name says: if it is plain text, name it positions.csv"},
		{"positions.csv.zst", gzipped(t, text), "name it positions.csv.gz"},
		{"positions.parquet", text, "and is not a Parquet file, as its name says: if it is plain text, name it positions.csv"},
		{"positions.parquet", "PARE" + strings.Repeat("\x15", 40), "it is an encrypted Parquet file and not a Parquet file, as its name says: write it without encryption"},
		{"positions.xlsx", text, "and is not a workbook, as its name says: if it is plain text, name it positions.csv"},
		{"positions.xlsx", "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + strings.Repeat("\x00", 600), "save it as .xlsx without a password"},
		{"positions.xlsx", archived(t, "positions.csv", text), "if it is an archive of files and no workbook, unpack it"},
		{"positions.xlsx", strings.Repeat("\x00", 600), "it begins with zero bytes and is not a workbook: it was not written to its end; fetch it again"},
		{"positions.csv", strings.Repeat("\x00", 600), "it was not written to its end; fetch it again"},
		{"positions.csv", "\xFF\xFE\x00\x00" + wideText(text, 4, true), "UTF-32, which is not read: save it as UTF-8"},
		{"positions.csv", "\x00\x00\xFE\xFF" + wideText(text, 4, false), "UTF-32, which is not read: save it as UTF-8"},
		{"positions.csv", wideText(text, 4, true), "as UTF-32 does, which is not read: save the file as UTF-8"},
		{"positions.csv", wideText(text, 4, false), "as UTF-32 does, which is not read: save the file as UTF-8"},
		{"positions.csv", wideText(text, 2, true), `if it is UTF-16, set [csv] encoding = "utf-16" in run.toml`},
		{"positions.csv", wideText(text, 2, false), `if it is UTF-16, set [csv] encoding = "utf-16" in run.toml`},
		{"positions.csv.gz", gzipped(t, wideText(text, 4, true)), "as UTF-32 does, which is not read: save the file as UTF-8"},
		{"rates.csv", gzipped(t, smallest["rates.csv"]), "name it rates.csv.gz"},
	} {
		over := map[string]string{c.name: c.file}
		if strings.HasPrefix(c.name, "positions") {
			over["positions.csv"] = ""
			over[c.name] = c.file
		}
		dir := folderOf(t, over)
		_, err := readAll(dir)
		path := filepath.Join(dir, c.name)
		if err == nil || !strings.HasPrefix(err.Error(), path) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.name, err, c.want)
		}
	}
}

// Text that begins like the name of a format is text, and a zstd file may begin
// with a frame to be skipped.
func TestNotTakenForAnother(t *testing.T) {
	for _, first := range []string{"PAR1", "ORC", "ORCHARD", "BZh", "Obj", "ARROW1", "PARE"} {
		s := mustRead(t, map[string]string{"positions.csv": first + "," + "line_id,book,underlying,instrument,quantity\nx,L1,North,ALBA,stock,10\n"})
		if got := s.positions.Extra(); len(got) != 1 || got[0] != first || s.batches[0].N != 1 {
			t.Errorf("%s: %q", first, got)
		}
	}
	s := mustRead(t, map[string]string{"positions.csv": "", "positions.csv.zst": "\x50\x2a\x4d\x18\x03\x00\x00\x00abc" + zstandard(t, smallest["positions.csv"])})
	if s.batches[0].N != 1 {
		t.Errorf("%d rows", s.batches[0].N)
	}
	utf16le := "\xFF\xFE" // and a character whose low byte is 0, which is no UTF-32
	for _, u := range utf16.Encode([]rune("Ā,line_id,book,underlying,instrument,quantity\nx,L1,North,ALBA,stock,10\n")) {
		utf16le += string([]byte{byte(u), byte(u >> 8)})
	}
	if s = mustRead(t, map[string]string{"positions.csv": utf16le}); s.positions.Extra()[0] != "Ā" {
		t.Errorf("%q", s.positions.Extra())
	}
}

// A damaged packed file is told with its name, how far it was read, and what to do.
func TestDamagedPacked(t *testing.T) {
	text := desk(20_000, 3)
	for name, whole := range map[string]string{"positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text)} {
		for _, c := range []struct{ file, want string }{
			{whole[:len(whole)/2] + "\xAA\x55\xAA\x55" + whole[len(whole)/2+4:], "the packed text is damaged within the first "},
			{whole[:len(whole)-6] + "\xAA\x55" + whole[len(whole)-4:], ": fetch it again, or have it written again"},
			{whole[:len(whole)-2] + "\xAA\x55", ": fetch it again, or have it written again"}, // gzip: the length; zstd: the checksum
			{whole + "more", "something else stands behind the end of the packed text: the file is damaged, or was written over a longer one: fetch it again"},
			{whole[:len(whole)/2], "the file is cut short: its "},
			{whole[:3], "the file is cut short: "},
		} {
			dir := folderOf(t, map[string]string{"positions.csv": "", name: c.file})
			_, err := readAll(dir)
			if err == nil || !strings.HasPrefix(err.Error(), filepath.Join(dir, name)+": ") || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), "fetch it again") {
				t.Errorf("%s: %v, want %q", name, err, c.want)
			}
		}
	}
}

// The names of columns are held to the limit on fields in every form of file, and
// a message does not repeat a header without end.
func TestHeaderLimits(t *testing.T) {
	long := strings.Repeat("n", 300)
	header := "line_id,book,underlying,instrument,quantity," + long
	type longName struct {
		LineID string `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
		Note   string `parquet:"name=nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn, type=BYTE_ARRAY, convertedtype=UTF8"`
	}
	limited := smallest["run.toml"] + "[limits]\nfield_bytes = 256\n"
	for name, file := range map[string]string{
		"positions.csv": header + "\n1,North,ALBA,stock,1,x\n", "positions.xlsx": sheetOf(t, header+"\n1,North,ALBA,stock,1,x\n"), "positions.parquet": parquetFile(t, longName{"1", "x"}),
	} {
		dir := folderOf(t, map[string]string{"positions.csv": "", name: file, "run.toml": limited})
		_, err := readAll(dir)
		var limit *schema.LimitError
		if !errors.As(err, &limit) || limit.Limit != schema.FieldBytes || !strings.HasPrefix(err.Error(), filepath.Join(dir, name)+": the name of column ") {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := readAll(folderOf(t, map[string]string{"positions.csv": header + "\n"})); err != nil {
		t.Error(err)
	}
	_, err := readAll(folderOf(t, map[string]string{"positions.csv": strings.Repeat(long+",", 500) + "x\n"}))
	if err == nil || len(err.Error()) > 20_000 || !strings.Contains(err.Error(), "and 441 more") {
		t.Errorf("%.300v", err)
	}
}

// What bears the name of a table and is no file is told.
func TestNoFiles(t *testing.T) {
	for _, c := range []struct {
		want string
		make func(path string) error
	}{
		{"positions.csv: it is a folder: only positions.parquet may be one; write positions as one file", func(path string) error { return os.Mkdir(path, 0o777) }},
		{"positions.csv: it is a link to nowhere, which is not there: mend the link", func(path string) error { return os.Symlink("nowhere", path) }},
		{"positions.csv: not a regular file, but a pipe, a device or a folder", func(path string) error { return os.Symlink("/dev/zero", path) }},
	} {
		dir := folderOf(t, map[string]string{"positions.csv": ""})
		if err := c.make(filepath.Join(dir, "positions.csv")); err != nil {
			t.Fatal(err)
		}
		if _, err := readAll(dir); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v, want %q", err, c.want)
		}
	}
}
