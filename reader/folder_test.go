package reader

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nightbook/schema"
)

// smallest is a snapshot with nothing in it that a run could do without.
var smallest = map[string]string{
	"run.toml":        "as_of = 2026-03-20\nreporting_currency = \"USD\"\n",
	"underlyings.csv": "underlying,kind,currency,price\nALBA,equity,USD,100\n",
	"rates.csv":       "curve,tenor,zero_rate\nUSD,1Y,0.04\n",
	"positions.csv":   "line_id,book,underlying,instrument,quantity\nL1,North,ALBA,stock,10\n",
}

// folderOf writes a snapshot: the smallest one with files put over it; a file
// with an empty text is left out.
func folderOf(t testing.TB, over map[string]string) string {
	t.Helper()
	dir := t.TempDir()
	write := func(name, text string) {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	for name, text := range smallest {
		if _, replaced := over[name]; !replaced {
			write(name, text)
		}
	}
	for name, text := range over {
		if text != "" {
			write(name, text)
		}
	}
	return dir
}

// positionsOf opens the positions of a snapshot folder, until the test ends.
func positionsOf(t testing.TB, dir string) *Positions {
	t.Helper()
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
	t.Cleanup(func() { p.Close() })
	return p
}

// snapshot is a folder read to the end.
type snapshot struct {
	*Folder
	cfg       *schema.Config
	market    *schema.Market
	positions *Positions
	dicts     *schema.Dicts
	batches   []*schema.Batch
}

func (s *snapshot) rejects() (all []schema.Reject) {
	for _, b := range s.batches {
		all = append(all, b.Rejects...)
	}
	return all
}

// readAll reads a snapshot, positions last.
func readAll(dir string) (*snapshot, error) { return readUnder(dir, 0) }

// readUnder reads a folder under a ceiling on memory, as a run does; 0 is none.
func readUnder(dir string, ceiling int64) (*snapshot, error) {
	s := &snapshot{dicts: schema.NewDicts()}
	var err error
	if s.Folder, err = OpenFolder(context.Background(), dir); err != nil {
		return nil, err
	}
	if s.cfg, err = s.Config(""); err != nil {
		return nil, err
	}
	if ceiling > 0 {
		s.cfg.Limits.Under(ceiling, schema.PageBytes, ceiling/4)
	}
	if s.market, err = s.Market(s.cfg); err != nil {
		return nil, err
	}
	if s.positions, err = s.Positions(s.cfg, s.dicts); err != nil {
		return nil, err
	}
	defer s.positions.Close()
	if ceiling > 0 {
		if _, _, err := s.positions.Memory(); err != nil {
			return nil, err
		}
		s.positions.LimitTexts(ceiling, ceiling/8)
	}
	binder := s.positions.NewBinder()
	var pc Piece
	for {
		if err := s.positions.Next(&pc); err == io.EOF {
			return s, nil
		} else if err != nil {
			return nil, err
		}
		b := &schema.Batch{}
		if err := binder.Bind(&pc, b); err != nil {
			return nil, err
		}
		s.batches = append(s.batches, b)
	}
}

func mustRead(t testing.TB, over map[string]string) *snapshot {
	t.Helper()
	s, err := readAll(folderOf(t, over))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestSmallestSnapshot(t *testing.T) {
	s := mustRead(t, nil)
	if len(s.market.Underlyings) != 1 || len(s.market.Rates) != 1 || len(s.market.Faults) != 0 {
		t.Fatalf("market: %+v", s.market)
	}
	if got, want := s.market.Rates[0].Day.String(), "2027-03-20"; got != want {
		t.Errorf("1Y after 2026-03-20 is %s, want %s", got, want)
	}
	if len(s.batches) != 1 || s.batches[0].N != 1 {
		t.Fatalf("%d batches", len(s.batches))
	}
	b := s.batches[0]
	if got := b.LineID.At(0); got != "L1" {
		t.Errorf("line_id %q", got)
	}
	if got := s.dicts.Books.Name(b.Book[0]); got != "North" {
		t.Errorf("book %q", got)
	}
	if b.Instrument[0] != schema.Stock || b.Quantity[0] != 10 || b.Multiplier[0] != 1 || b.Line[0] != 2 || b.Status[0] != 0 {
		t.Errorf("row: %v %v %v %v %v", b.Instrument[0], b.Quantity[0], b.Multiplier[0], b.Line[0], b.Status[0])
	}
	if got := b.Row(0); got != "L1,North,ALBA,stock,10" {
		t.Errorf("raw %q", got)
	}
	var names []string
	for _, in := range s.Inputs() {
		names = append(names, in.Name)
	}
	if got := strings.Join(names, " "); got != "positions.csv rates.csv run.toml underlyings.csv" {
		t.Errorf("inputs %s", got)
	}
}

// A folder that cannot be a snapshot says why, by name.
func TestOpenFolderErrors(t *testing.T) {
	for _, c := range []struct {
		name string
		over map[string]string
		want []string
	}{
		{"no positions", map[string]string{"positions.csv": ""}, []string{"no positions file", "rates.csv, run.toml, underlyings.csv"}},
		{"no rates", map[string]string{"rates.csv": ""}, []string{"no rates file"}},
		{"two of a kind", map[string]string{"rates.csv.gz": "x"}, []string{"rates.csv and rates.csv.gz hold rates"}},
		{"two by case", map[string]string{"Rates.CSV": "x"}, []string{"hold rates"}},
		{"unread form", map[string]string{"vols.xls": "x"}, []string{"vols.xls", "form .xls is not read", ".csv.zst"}},
		{"run.toml by case", map[string]string{"Run.toml": "x"}, []string{"must be named run.toml"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := OpenFolder(context.Background(), folderOf(t, c.over))
			if err == nil {
				t.Fatal("no error")
			}
			for _, want := range c.want {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("%q lacks %q", err, want)
				}
			}
		})
	}
	if _, err := OpenFolder(context.Background(), filepath.Join(t.TempDir(), "none")); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("a folder that is not there: %v", err)
	}
}

func TestFilesNotUsed(t *testing.T) {
	s := mustRead(t, map[string]string{
		"quotes.csv": "x", "limits.csv.gz": "x", "README.md": "x", "positions.csv.bak": "x", ".hidden.csv": "x", "~$vols.xlsx": "x",
	})
	var got []string
	for _, n := range s.Notes() {
		if n.Code != schema.FileNotUsed {
			t.Errorf("note %+v", n)
		}
		got = append(got, n.Subject)
	}
	if got := strings.Join(got, " "); got != "limits.csv.gz positions.csv.bak quotes.csv" {
		t.Errorf("not used: %s", got)
	}
}
