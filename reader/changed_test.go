package reader

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"nightbook/schema"
)

// A file that changes under the reader's eyes is refused, whatever changes it.
func TestFileThatChanges(t *testing.T) {
	text := desk(3*schema.BatchRows, 3)
	for name, file := range map[string]string{
		"positions.csv": text, "positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text), "positions.parquet": parquetOf(t, text), "positions.xlsx": sheetOf(t, desk(500, 3)),
	} {
		for how, change := range map[string]func(path string) error{
			"grows": func(path string) error {
				f, err := os.OpenFile(path, os.O_APPEND|os.O_WRONLY, 0)
				if err != nil {
					return err
				}
				_, err = f.WriteString("\n")
				return errors.Join(err, f.Close())
			},
			"is cut": func(path string) error { return os.Truncate(path, int64(len(file)/2)) },
			"is written over in place": func(path string) error {
				f, err := os.OpenFile(path, os.O_WRONLY, 0)
				if err != nil {
					return err
				}
				_, err = f.WriteAt([]byte(file[:10]), 0)
				// The clock of a file system may stand still for some milliseconds.
				return errors.Join(err, f.Close(), os.Chtimes(path, time.Now(), time.Now().Add(time.Second)))
			},
			"is replaced": func(path string) error {
				return errors.Join(os.WriteFile(path+".new", []byte(file), 0o644), os.Rename(path+".new", path))
			},
			"is removed": os.Remove,
		} {
			dir := folderOf(t, map[string]string{"positions.csv": "", name: file})
			path := filepath.Join(dir, name)
			f, err := OpenFolder(context.Background(), dir)
			if err != nil {
				t.Fatal(err)
			}
			cfg, err := f.Config("")
			if err != nil {
				t.Fatal(err)
			}
			p, err := f.Positions(cfg, schema.NewDicts())
			if err != nil {
				t.Fatal(err)
			}
			var pc Piece
			if err := p.Next(&pc); err != nil {
				t.Fatal(err)
			}
			if err := change(path); err != nil {
				t.Fatal(err)
			}
			for err = p.Next(&pc); err == nil; err = p.Next(&pc) {
			}
			if !errors.Is(err, errChanged) || !strings.HasPrefix(err.Error(), path+": ") {
				t.Errorf("%s %s: %v", name, how, err)
			}
			p.Close()
			for _, in := range f.Inputs() {
				if in.Name == name {
					t.Errorf("%s %s, and is among the inputs", name, how)
				}
			}
		}
	}
}

// patience is a context that ends when it has been asked often enough.
type patience struct {
	context.Context
	left atomic.Int64 // a decompressor asks from a goroutine of its own
}

func (p *patience) Err() error {
	if p.left.Add(-1) < 0 {
		return context.Canceled
	}
	return nil
}

// Reading ends with the run, in the middle of any file.
func TestReadingStops(t *testing.T) {
	text := desk(2*schema.BatchRows, 3)
	quotes := "underlying,expiry,strike,option_type,price\n" + strings.Repeat("ALBA,2026-06-19,100,call,5\n", 25_000)
	for name, file := range map[string]string{
		"positions.csv": text, "positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text), "positions.parquet": parquetOf(t, text), "positions.xlsx": sheetOf(t, desk(1500, 3)),
		"quotes.csv": quotes,
	} {
		over := map[string]string{"positions.csv": "", name: file, "run.toml": smallest["run.toml"] + "[vols]\nfrom = \"quotes\"\n"}
		if name == "quotes.csv" {
			delete(over, "positions.csv")
		}
		dir := folderOf(t, over)
		asked := 0
		for left := 0; ; left++ { // stopped at its first step, its second, …, until it comes to its end
			ctx := &patience{Context: context.Background()}
			ctx.left.Store(int64(left))
			err := readWith(ctx, dir)
			if err == nil {
				break
			}
			if !errors.Is(err, context.Canceled) {
				t.Fatalf("%s, stopped at step %d: %v", name, left, err)
			}
			asked = left
			if left > 10 {
				left += left / 2
			}
		}
		if asked < 4 {
			t.Errorf("%s is read in %d steps that can be stopped at", name, asked)
		}
	}
}

// readWith reads a snapshot to the end.
func readWith(ctx context.Context, dir string) error {
	f, err := OpenFolder(ctx, dir)
	if err != nil {
		return err
	}
	cfg, err := f.Config("")
	if err != nil {
		return err
	}
	if _, err := f.Market(cfg); err != nil {
		return err
	}
	p, err := f.Positions(cfg, schema.NewDicts())
	if err != nil {
		return err
	}
	defer p.Close()
	var pc Piece
	for err = p.Next(&pc); err == nil; err = p.Next(&pc) {
	}
	if err == io.EOF {
		return nil
	}
	return err
}
