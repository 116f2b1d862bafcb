package main

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/writer"
)

// wideLine is a position line with a text that is carried through.
type wideLine struct {
	LineID     string `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
	Book       string `parquet:"name=book, type=BYTE_ARRAY, convertedtype=UTF8"`
	Underlying string `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
	Instrument string `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
	Quantity   int64  `parquet:"name=quantity, type=INT64"`
	Note       string `parquet:"name=note, type=BYTE_ARRAY, convertedtype=UTF8"`
}

// wideDesk writes a snapshot whose positions are one row group in pages of that
// many bytes, with a note of so many on each line.
func wideDesk(t *testing.T, lines, page, note int) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range map[string]string{
		"run.toml": "as_of = 2026-01-05\nreporting_currency = \"EUR\"\n", "rates.csv": "curve,tenor,zero_rate\nEUR,1Y,0.02\n",
		"underlyings.csv": "underlying,kind,currency,price\nU,equity,EUR,100\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	f, err := os.Create(filepath.Join(dir, "positions.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w, err := writer.NewParquetWriterFromWriter(f, new(wideLine), 1)
	if err != nil {
		t.Fatal(err)
	}
	w.PageSize, w.RowGroupSize = int64(page), 4<<30
	for i := range lines {
		if err := w.Write(wideLine{fmt.Sprint(i), "A", "U", "stock", 1, strings.Repeat("n", note)}); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	return dir
}

// A Parquet file whose pages or texts are too large for the ceiling is refused
// under the ceiling, with what to do; the same rows in small pages are priced
// under it. Before its pages were counted, the first of these runs took 102 MiB
// under 96, and that of the texts 193.
func TestCeilingOnParquet(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("the peak is told in other units")
	}
	if testing.Short() {
		t.Skip("the race detector takes memory of its own")
	}
	peak := filepath.Join(t.TempDir(), "peak")
	if err := os.Symlink(program(t), peak); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name              string
		lines, page, note int
		status            int
		want              string
	}{
		{"small pages", 100_000, 64 << 10, 200, exitDone, "100,000 priced"},
		{"one page", 300_000, 1 << 30, 200, exitFailed, "MiB of it are for the pages and dictionaries of the positions"},
		{"long texts", 8192, 1 << 20, 8000, exitFailed, "column note, row group 1: the texts of 4,096 rows have more bytes than --memory leaves room for"},
	} {
		out := filepath.Join(t.TempDir(), "out")
		cmd := exec.Command(peak, "run", wideDesk(t, c.lines, c.page, c.note), "--out", out, "--formats", "parquet", "--memory", "96MiB", "--workers", "2")
		cmd.Env = append(os.Environ(), "MOST=96") // MiB; beyond it peak ends with status 9
		said, _ := cmd.CombinedOutput()
		if code := cmd.ProcessState.ExitCode(); code != c.status || !strings.Contains(string(said), c.want) {
			t.Errorf("%s: status %d, %s", c.name, code, said)
		}
	}
}
