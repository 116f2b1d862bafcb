package reader

import (
	"bytes"
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/klauspost/compress/zstd"

	"nightbook/schema"
)

// A packed file that is cut at any byte is refused, with its name: its rows are
// never taken for all there are. Packages parquet and xlsx cut theirs.
func TestTruncatedAnywhere(t *testing.T) {
	text := desk(3, 5)
	for name, whole := range map[string]string{
		"positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text),
	} {
		dir := folderOf(t, map[string]string{"positions.csv": "", name: whole})
		path := filepath.Join(dir, name)
		if _, err := readAll(dir); err != nil {
			t.Fatalf("%s, whole: %v", name, err)
		}
		for n := len(whole) - 1; n >= 0; n-- {
			if err := os.Truncate(path, int64(n)); err != nil {
				t.Fatal(err)
			}
			if s, err := readAll(dir); err == nil {
				t.Errorf("%s cut to %d of %d bytes reads well, %d batches", name, n, len(whole), len(s.batches))
			} else if !strings.HasPrefix(err.Error(), path+": ") {
				t.Errorf("%s cut to %d bytes: %v", name, n, err)
			} else if !errors.Is(err, io.ErrUnexpectedEOF) {
				t.Errorf("%s cut to %d bytes: %v", name, n, err)
			}
		}
	}
}

// Plain text that is cut inside quotation marks is refused. Cut elsewhere, it
// has a row with too few fields, which is refused, or a shorter last field, which
// nothing but the size and the hash in the manifest can tell.
func TestTruncatedText(t *testing.T) {
	head := "line_id,book,underlying,instrument,quantity,note\n1,North,ALBA,stock,10,\"a \"\"note\"\",\nof two lines\"\n"
	last := "2,North,ALBA,stock,20,\"another,\nlonger \"\"note\"\"\"\n"
	whole := head + last
	open, row := strings.Index(last, `"`), len("2,North,ALBA,stock,20,")
	for n := len(head); n < len(whole); n++ {
		s, err := readAll(folderOf(t, map[string]string{"positions.csv": whole[:n]}))
		switch at := n - len(head); {
		case at > open && at < len(last)-1 && !strings.HasSuffix(whole[:n], `""`):
			// Two marks are one inside a field, and the second may be what closes it.
			closed := strings.Count(whole[len(head):n], `"`)%2 == 0
			if err == nil && !closed {
				t.Errorf("cut to %q: reads well", whole[len(head):n])
			}
			var cell *schema.CellError
			if !closed && (!errors.As(err, &cell) || cell.Line != 4) {
				t.Errorf("cut to %q: %v", whole[len(head):n], err)
			}
		case 0 < at && at < row:
			if err != nil || len(s.rejects()) != 1 {
				t.Errorf("cut to %q: %v", whole[len(head):n], err)
			}
		}
	}
}

// A packed file that ends early, or is none, is an error with the file's name;
// its rows are not taken for all there are.
func TestTruncated(t *testing.T) {
	text := desk(3000, 5)
	for name, whole := range map[string]string{
		"positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text), "positions.parquet": parquetOf(t, text), "positions.xlsx": sheetOf(t, desk(20, 5)),
	} {
		for _, n := range []int{0, 1, 2, 5, len(whole) / 3, len(whole) / 2, len(whole) - 20, len(whole) - 1} {
			if n == 0 && name != "positions.csv.zst" && name != "positions.csv.gz" {
				continue // folderOf leaves empty files out
			}
			dir := folderOf(t, map[string]string{"positions.csv": "", name: "x"})
			path := filepath.Join(dir, name)
			if err := os.WriteFile(path, []byte(whole[:n]), 0o644); err != nil {
				t.Fatal(err)
			}
			s, err := readAll(dir)
			if err == nil {
				t.Errorf("%s cut to %d of %d bytes reads well, %d batches", name, n, len(whole), len(s.batches))
			} else if !strings.Contains(err.Error(), path) {
				t.Errorf("%s cut to %d bytes: %v does not name the file", name, n, err)
			}
			if strings.HasPrefix(name, "positions.csv") && !errors.Is(err, io.ErrUnexpectedEOF) {
				t.Errorf("%s cut to %d bytes: %v", name, n, err)
			}
		}
	}
	// One that is cut is in no list of inputs.
	dir := folderOf(t, map[string]string{"positions.csv": "", "positions.csv.gz": gzipped(t, text)[:20000]})
	f, err := OpenFolder(context.Background(), dir)
	if err != nil {
		t.Fatal(err)
	}
	cfg, err := f.Config("")
	if err != nil {
		t.Fatal(err)
	}
	if p, err := f.Positions(cfg, schema.NewDicts()); err == nil {
		defer p.Close()
		var pc Piece
		for err == nil {
			err = p.Next(&pc)
		}
	}
	for _, in := range f.Inputs() {
		if in.Table == "positions" {
			t.Errorf("%+v", in)
		}
	}
}

// A file that unpacks without measure is refused before it fills the machine.
func TestBomb(t *testing.T) {
	line := strings.Repeat("0", 1<<16-1) + "\n"
	var b bytes.Buffer
	w, err := zstd.NewWriter(&b) // gzip packs to a thousandth at best
	if err != nil {
		t.Fatal(err)
	}
	io.WriteString(w, "line_id,book,underlying,instrument,quantity\n")
	for range (110 << 20) / len(line) {
		io.WriteString(w, line)
	}
	w.Close()
	dir := folderOf(t, map[string]string{"positions.csv": "", "positions.csv.zst": b.String()})
	p := positionsOf(t, dir)
	var pc Piece
	for err = p.Next(&pc); err == nil; err = p.Next(&pc) {
	}
	var limit *schema.LimitError
	if !errors.As(err, &limit) || limit.Limit != schema.UnpackedRatio {
		t.Error(err)
	}
}

// A gzip file may be of several members; what stands behind them and is none is
// not taken for a cut.
func TestGzipMembers(t *testing.T) {
	text := desk(300, 5)
	half := len(text) / 2
	whole := gzipped(t, text[:half]) + gzipped(t, text[half:])
	if got, want := content(mustRead(t, map[string]string{"positions.csv": "", "positions.csv.gz": whole})), content(mustRead(t, map[string]string{"positions.csv": text})); got != want {
		t.Error("two members read otherwise than the text")
	}
	for _, behind := range []string{"x", "junk", strings.Repeat("longer than a header", 9)} {
		_, err := readAll(folderOf(t, map[string]string{"positions.csv": "", "positions.csv.gz": whole + behind}))
		if !errors.Is(err, errTrailing) || strings.Contains(err.Error(), "cut short") {
			t.Errorf("%q behind the end: %v", behind, err)
		}
	}
	_, err := readAll(folderOf(t, map[string]string{"positions.csv": "", "positions.csv.gz": whole[:len(whole)-9]}))
	if !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("the second member cut: %v", err)
	}
}
