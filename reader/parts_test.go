package reader

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nightbook/schema"
)

// partsOf writes a snapshot whose positions are a folder of files.
func partsOf(t testing.TB, config string, files map[string]string) string {
	t.Helper()
	dir := folderOf(t, map[string]string{"positions.csv": "", "run.toml": smallest["run.toml"] + config})
	for name, text := range files {
		path := filepath.Join(dir, "positions.parquet", name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// short is a position line without a book: the name of its folder gives that.
type short struct {
	LineID     string `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
	Underlying string `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
	Instrument string `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
	Quantity   string `parquet:"name=quantity, type=BYTE_ARRAY, convertedtype=UTF8"`
}

// A folder of files reads as one file, in the order of the names; a refused row
// stands at its place in its own file.
func TestParts(t *testing.T) {
	s, err := readAll(partsOf(t, "", map[string]string{
		"part-1.parquet":      parquetFile(t, noted{"2", "North", "ALBA", "stock", 20, ""}, noted{"", "North", "ALBA", "stock", 5, "lost"}),
		"part-0.parquet":      parquetFile(t, noted{"1", "South", "ALBA", "stock", 10, ""}),
		"more/part-2.parquet": parquetFile(t, noted{"3", "North", "ALBA", "stock", 30, ""}),
		"_SUCCESS":            " ", ".part-0.parquet.crc": "x", "_temporary/x.csv": "x",
	}))
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, b := range s.batches {
		for i := range b.N {
			got = append(got, fmt.Sprint(b.File, " ", b.Line[i], " ", b.LineID.At(i), " ", s.dicts.Books.Name(b.Book[i]), " ", b.Quantity[i]))
		}
	}
	want := `positions.parquet/more/part-2.parquet 1 3 North 30
positions.parquet/part-0.parquet 1 1 South 10
positions.parquet/part-1.parquet 1 2 North 20
positions.parquet/part-1.parquet 2  North 5`
	if g := strings.Join(got, "\n"); g != want {
		t.Errorf("%s\nwant\n%s", g, want)
	}
	if r := s.rejects(); len(r) != 1 || r[0].File != "positions.parquet/part-1.parquet" || r[0].Line != 2 || r[0].Column != "line_id" {
		t.Errorf("%+v", r)
	}
	var rows int64
	for _, in := range s.Inputs() {
		if in.Table == "positions" {
			rows += in.Rows
			if !strings.HasPrefix(in.Name, "positions.parquet/") || len(in.SHA256) != 64 || in.Bytes == 0 {
				t.Errorf("%+v", in)
			}
		}
	}
	if rows != 4 || s.positions.Rows() != 4 || s.positions.Name() != "positions.parquet" {
		t.Errorf("%d rows in the inputs, %d read", rows, s.positions.Rows())
	}
}

// Names of folders of the form key=value are columns, written by engines in
// their own style: an escaped text, a number with a point, a date.
func TestPartsKeys(t *testing.T) {
	row := func(id string) string { return parquetFile(t, short{id, "ALBA", "forward", "1"}) }
	s, err := readAll(partsOf(t, "[csv]\ndecimal_comma = true\ndate_format = \"DD.MM.YYYY\"\n", map[string]string{
		"book=North/strike=1.5/expiry=2026-06-19/a.parquet":           row("1"),
		"book=So%2Futh%20=/strike=2000/expiry=2027-06-19/b.parquet":   row("2"),
		"book=__HIVE_DEFAULT_PARTITION__/strike=3/expiry=x/c.parquet": row("3"),
	}))
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, b := range s.batches {
		for i := range b.N {
			got = append(got, fmt.Sprint(b.LineID.At(i), "|", s.dicts.Books.Name(b.Book[i]), "|", b.Strike[i], "|", b.Expiry[i], "|", b.Status[i]))
		}
	}
	if g := strings.Join(got, "\n"); g != "1|North|1.5|2026-06-19|0\n2|So/uth =|2000|2027-06-19|0\n3||3||"+fmt.Sprint(schema.Rejected) {
		t.Errorf("%s", strings.Join(got, "\n"))
	}
	if r := s.rejects(); len(r) != 1 || r[0].Column != "book" || !strings.Contains(r[0].Reason, "also: expiry") || r[0].Row != "3,ALBA,forward,1,,3,x" {
		t.Errorf("%+v", r)
	}
	// A column of the file wins over the name of its folder.
	s, err = readAll(partsOf(t, "", map[string]string{"Book=South/a.parquet": parquetFile(t, noted{"1", "North", "ALBA", "stock", 1, ""})}))
	if err != nil || s.dicts.Books.Name(s.batches[0].Book[0]) != "North" {
		t.Errorf("%v", err)
	}
}

func TestPartsRefused(t *testing.T) {
	one := parquetFile(t, noted{"1", "North", "ALBA", "stock", 1, ""})
	for name, c := range map[string]struct {
		files map[string]string
		want  string
	}{
		"other columns":     {map[string]string{"a.parquet": one, "b.parquet": parquetFile(t, short{"1", "ALBA", "stock", "1"})}, "b.parquet: its column 2 is underlying BYTE_ARRAY text and not book BYTE_ARRAY text, as those of positions.parquet/a.parquet"},
		"fewer folders":     {map[string]string{"x=1/a.parquet": one, "z.parquet": one}, "z.parquet: it stands in folders for no column, positions.parquet/x=1/a.parquet in folders for x"},
		"a key twice":       {map[string]string{"x=1/X=2/a.parquet": one}, "x=1/X=2/a.parquet: it stands in two folders that give X a value"},
		"another form":      {map[string]string{"a.parquet": one, "b.csv": "x"}, "b.csv: not a .parquet file"},
		"nothing":           {map[string]string{"_SUCCESS": " "}, "the folder holds no .parquet file"},
		"one cut short":     {map[string]string{"a.parquet": one, "b.parquet": one[:len(one)-1]}, "b.parquet: the file is cut short"},
		"one damaged in it": {map[string]string{"a.parquet": one, "b.parquet": one[:20] + "\xff\xff\xff\xff\xff\xff\xff" + one[27:]}, "b.parquet"},
		"too many":          {map[string]string{"a.parquet": one, "b.parquet": one, "c.parquet": one}, "more files than parts = 2 allows"},
	} {
		_, err := readAll(partsOf(t, "[limits]\nparts = 2\n", c.files))
		if err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), "positions.parquet") || strings.Count(err.Error(), "positions.parquet") > 2 {
			t.Errorf("%s: %v, want %q", name, err, c.want)
		}
	}
	dir := folderOf(t, nil)
	if err := os.Mkdir(filepath.Join(dir, "fx.parquet"), 0o755); err != nil {
		t.Fatal(err)
	}
	if _, err := OpenFolder(context.Background(), dir); err == nil || !strings.Contains(err.Error(), "only the positions may be a folder of Parquet files") {
		t.Error(err)
	}
	if err := os.Rename(filepath.Join(dir, "fx.parquet"), filepath.Join(dir, "positions.parquet")); err != nil {
		t.Fatal(err)
	}
	if _, err := OpenFolder(context.Background(), dir); err == nil || !strings.Contains(err.Error(), "both positions.csv and positions.parquet hold positions") {
		t.Error(err)
	}
}

// The folder may be a link to where the files lie.
func TestPartsLink(t *testing.T) {
	dir := partsOf(t, "", map[string]string{"x=1/a.parquet": parquetFile(t, noted{"1", "North", "ALBA", "stock", 1, ""})})
	path, elsewhere := filepath.Join(dir, "positions.parquet"), filepath.Join(t.TempDir(), "parts")
	if err := os.Rename(path, elsewhere); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(elsewhere, path); err != nil {
		t.Skip(err)
	}
	s, err := readAll(dir)
	if err != nil || s.positions.Rows() != 1 || s.batches[0].File != "positions.parquet/x=1/a.parquet" {
		t.Errorf("%v, %+v", err, s)
	}
}

// A file that takes the place of another after the columns were settled is not
// read into them, though it has as many.
func TestPartsChanged(t *testing.T) {
	one := parquetFile(t, short{"1", "ALBA", "stock", "1"})
	dir := partsOf(t, "", map[string]string{"book=North/a.parquet": one, "book=North/b.parquet": one})
	p := positionsOf(t, dir)
	var pc Piece
	if err := p.Next(&pc); err != nil {
		t.Fatal(err)
	}
	type other struct {
		Underlying string `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
		LineID     string `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
		Instrument string `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
		Quantity   string `parquet:"name=quantity, type=BYTE_ARRAY, convertedtype=UTF8"`
	}
	if err := os.WriteFile(filepath.Join(dir, "positions.parquet", "book=North", "b.parquet"), []byte(parquetFile(t, other{"1", "ALBA", "stock", "1"})), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := p.Next(&pc); !errors.Is(err, errChanged) || !strings.Contains(err.Error(), "b.parquet") {
		t.Errorf("%v", err)
	}
}
