package samples

import (
	"bytes"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"nightbook/schema"
)

// folderHash hashes names and bytes of all files of a folder.
func folderHash(t *testing.T, dir string) string {
	t.Helper()
	h := sha256.New()
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		fmt.Fprintf(h, "%s %d\n", filepath.Base(path), len(data))
		h.Write(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return hex.EncodeToString(h.Sum(nil))
}

func demoFolder(t *testing.T, o Options) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "demo")
	if err := Write(dir, o); err != nil {
		t.Fatal(err)
	}
	return dir
}

func records(t *testing.T, dir, name string) []map[string]string {
	t.Helper()
	f, err := os.Open(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	var out []map[string]string
	for _, row := range rows[1:] {
		m := map[string]string{}
		for i, h := range rows[0] {
			m[h] = row[i]
		}
		out = append(out, m)
	}
	return out
}

// The hash stands for every byte of the folder. It may change only when the
// demo desk is changed on purpose: measured figures and other people's copies
// are tied to it.
func TestDemoBytesAreFixed(t *testing.T) {
	const want = "f2514aa319dc9ae0b164e4547c9a5cd358ffd90cae9753580ceef52f89689bb2"
	if got := folderHash(t, demoFolder(t, Options{Lines: 1000, Seed: 1})); got != want {
		t.Errorf("folder hash %s, want %s", got, want)
	}
}

func TestDemoDependsOnSeedOnly(t *testing.T) {
	a := folderHash(t, demoFolder(t, Options{Lines: 500, Seed: 7}))
	b := folderHash(t, demoFolder(t, Options{Lines: 500, Seed: 7}))
	c := folderHash(t, demoFolder(t, Options{Lines: 500, Seed: 8}))
	if a != b {
		t.Error("the same seed gave other bytes")
	}
	if a == c {
		t.Error("another seed gave the same bytes")
	}
}

func TestDemoFirstLine(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(demoFolder(t, Options{Lines: 10, Seed: 1}), "positions.csv"))
	if err != nil {
		t.Fatal(err)
	}
	const want = demoHeader + "\nN00000001,SH-1-01,DUNSEDGE,option,-1235,100,call,17600,2026-12-18,put_spread\n"
	if !strings.HasPrefix(string(data), want) {
		t.Errorf("positions.csv starts\n%s\nwant\n%s", data[:min(len(data), 2*len(want))], want)
	}
}

// Every row of the demo must be one that the program prices: names known,
// numbers in range, cells that the instrument needs present, books leaves of
// the tree.
func TestDemoRowsAreValid(t *testing.T) {
	const n = 30_000
	dir := demoFolder(t, Options{Lines: n, Seed: 3})
	under := map[string]map[string]string{}
	for _, u := range records(t, dir, "underlyings.csv") {
		under[u["underlying"]] = u
	}
	parents := map[string]bool{}
	books := map[string]bool{}
	for _, b := range records(t, dir, "books.csv") {
		books[b["book"]] = true
		parents[b["parent"]] = true
		if b["parent"] != "" && !books[b["parent"]] {
			t.Errorf("book %s stands before its parent %q", b["book"], b["parent"])
		}
	}
	currencies := map[string]bool{}
	for _, c := range records(t, dir, "fx.csv") {
		currencies[c["currency"]] = true
	}
	rows := records(t, dir, "positions.csv")
	if len(rows) != n {
		t.Fatalf("%d rows, want %d", len(rows), n)
	}
	seen := map[string]bool{}
	count := map[string]int{}
	for _, p := range rows {
		id := p["line_id"]
		if seen[id] {
			t.Fatalf("%s: line_id twice", id)
		}
		seen[id] = true
		count[p["instrument"]]++
		if q, err := strconv.Atoi(p["quantity"]); err != nil || q == 0 {
			t.Fatalf("%s: quantity %q", id, p["quantity"])
		}
		if b := p["book"]; !books[b] || parents[b] {
			t.Fatalf("%s: book %q is not a leaf of the tree", id, b)
		}
		if p["instrument"] == "cash" {
			if !currencies[p["underlying"]] {
				t.Fatalf("%s: cash in %q", id, p["underlying"])
			}
			continue
		}
		u := under[p["underlying"]]
		if u == nil || !currencies[u["currency"]] {
			t.Fatalf("%s: underlying %q", id, p["underlying"])
		}
		kind := u["kind"]
		if p["instrument"] == "stock" && kind != "equity" || p["instrument"] == "future" && kind != "future" {
			t.Fatalf("%s: a %s on kind %s", id, p["instrument"], kind)
		}
		if p["instrument"] != "option" && p["instrument"] != "forward" {
			continue
		}
		strike, err1 := strconv.ParseFloat(p["strike"], 64)
		price, err2 := strconv.ParseFloat(u["price"], 64)
		if err1 != nil || err2 != nil || strike/price < .69 || strike/price > 1.31 {
			t.Fatalf("%s: strike %q of price %q", id, p["strike"], u["price"])
		}
		if len(p["expiry"]) != len("2006-01-02") || p["expiry"] <= demoAsOf && p["expiry"] != "2026-09-18" {
			t.Fatalf("%s: expiry %q", id, p["expiry"])
		}
		if p["instrument"] == "option" && p["option_type"] != "call" && p["option_type"] != "put" {
			t.Fatalf("%s: option_type %q", id, p["option_type"])
		}
	}
	if count["option"] < n*9/10 {
		t.Errorf("%d of %d lines are options, want at least nine in ten", count["option"], n)
	}
	for _, kind := range schema.Instruments[1:] {
		if count[kind] == 0 {
			t.Errorf("no line is a %s", kind)
		}
	}
}

func TestDemoHeadersAreColumns(t *testing.T) {
	dir := demoFolder(t, Options{Lines: 1, Seed: 1})
	for _, table := range schema.Inputs {
		data, err := os.ReadFile(filepath.Join(dir, table.Name+".csv"))
		if os.IsNotExist(err) && (table.Name == "dividends" || table.Name == "quotes") {
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		header, _, _ := strings.Cut(string(data), "\n")
		for _, h := range strings.Split(header, ",") {
			if table.Column(h) == nil {
				t.Errorf("%s has no column %q", table.Name, h)
			}
		}
		for _, c := range table.Columns {
			if c.Required && !strings.Contains(","+header+",", ","+c.Name+",") {
				t.Errorf("%s.csv lacks %q", table.Name, c.Name)
			}
		}
	}
}

func TestDemoBrokenLines(t *testing.T) {
	const n = 20_000
	whole := records(t, demoFolder(t, Options{Lines: n, Seed: 5}), "positions.csv")
	dir := demoFolder(t, Options{Lines: n, Seed: 5, Broken: 50_000})
	data, err := os.ReadFile(filepath.Join(dir, "positions.csv"))
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")[1:]
	if len(lines) != n {
		t.Fatalf("%d lines, want %d", len(lines), n)
	}
	changed := map[string]int{}
	for i, line := range lines {
		f := strings.Split(line, ",")
		w := whole[i]
		same := strings.Join([]string{w["line_id"], w["book"], w["underlying"], w["instrument"], w["quantity"],
			w["multiplier"], w["option_type"], w["strike"], w["expiry"], w["strategy"]}, ",")
		switch {
		case line == same:
		case len(f) != 10:
			changed["bad_row"]++
		case f[0] != w["line_id"]:
			changed["duplicate_line_id"]++
			if f[0] != "N00000001" {
				t.Errorf("line %d: %s does not repeat the first line", i, line)
			}
		case f[7] == "1.2.3":
			changed["bad_number"]++
		case f[8] == "2027-02-30":
			changed["bad_date"]++
		case f[2] == "NOSUCHNAME":
			changed["unknown_underlying"]++
		case f[6] == "straddle":
			changed["bad_choice"]++
		case f[7] == "-10":
			changed["out_of_range"]++
		case f[3] == "option" && f[7] == "":
			changed["missing_value"]++
		case f[3] == "future" && f[2] == "ALDER40":
			changed["kind_mismatch"]++
		default:
			t.Errorf("line %d changed for no reason: %s", i, line)
		}
	}
	readme, err := os.ReadFile(filepath.Join(dir, "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	total := 0
	for _, f := range faults {
		total += changed[string(f.code)]
		if row := fmt.Sprintf("| %s | %d |\n", f.code, changed[string(f.code)]); !bytes.Contains(readme, []byte(row)) {
			t.Errorf("README.md does not say %q", row)
		}
		if changed[string(f.code)] == 0 {
			t.Errorf("no line with %s", f.code)
		}
	}
	if total < n*4/100 || total > n*6/100 {
		t.Errorf("%d of %d lines are broken, want about 5 %%", total, n)
	}
}

func TestDemoRefuses(t *testing.T) {
	dir := t.TempDir()
	kept := filepath.Join(dir, "mine.txt")
	if err := os.WriteFile(kept, []byte("mine"), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := Demo(dir, 10, 1); err == nil || !strings.Contains(err.Error(), "mine.txt") {
		t.Errorf("a folder that holds a file: %v", err)
	}
	if e, _ := os.ReadDir(dir); len(e) != 1 {
		t.Errorf("something was written into a folder that was refused: %v", e)
	}
	if err := Demo(filepath.Join(kept, "below"), 10, 1); err == nil {
		t.Error("a folder below a file was accepted")
	}
	for _, o := range []Options{{Lines: 0}, {Lines: -1}, {Lines: 1, Broken: -1}, {Lines: 1, Broken: perMillion + 1}} {
		if err := Write(t.TempDir(), o); err == nil {
			t.Errorf("%+v was accepted", o)
		}
	}
}

// A snapshot that is stopped while it is written is not there.
func TestDemoStops(t *testing.T) {
	stopped := errors.New("stopped")
	for calls := range 4 {
		dir, left := t.TempDir(), calls
		err := Write(dir, Options{Lines: 20_000, Seed: 1, Stop: func() error {
			if left--; left < 0 {
				return stopped
			}
			return nil
		}})
		if !errors.Is(err, stopped) {
			t.Fatalf("after %d steps: %v", calls, err)
		}
		if e, err := os.ReadDir(dir); err != nil || len(e) > 0 {
			t.Errorf("after %d steps: %v is left, %v", calls, e, err)
		}
	}
}

type fullDisk struct{}

func (fullDisk) Write([]byte) (int, error) { return 0, io.ErrShortWrite }

func TestDemoReportsWriteErrors(t *testing.T) {
	if _, err := newDesk(1).writePositions(fullDisk{}, Options{Lines: 10, Seed: 1}); err != io.ErrShortWrite {
		t.Errorf("error %v, want %v", err, io.ErrShortWrite)
	}
}

// Ten million lines must need no more memory than ten thousand.
func TestDemoMemoryIsFlat(t *testing.T) {
	d := newDesk(1)
	allocs := func(lines int64) float64 {
		return testing.AllocsPerRun(3, func() {
			if _, err := d.writePositions(io.Discard, Options{Lines: lines, Seed: 1}); err != nil {
				t.Fatal(err)
			}
		})
	}
	if a, b := allocs(10), allocs(100_000); a != b {
		t.Errorf("%v allocations for 10 lines, %v for 100,000", a, b)
	}
}

func BenchmarkDemo(b *testing.B) {
	d := newDesk(1)
	b.ReportAllocs()
	var n counter
	t, err := d.writePositions(&n, Options{Lines: int64(b.N), Seed: 1})
	if err != nil || t.instruments[0] > 0 {
		b.Fatal(err, t)
	}
	b.SetBytes(int64(n) / int64(b.N))
}

type counter int64

func (c *counter) Write(b []byte) (int, error) { *c += counter(len(b)); return len(b), nil }
