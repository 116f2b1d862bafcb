package reader

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

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
