package interop

import (
	"bytes"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/parquet/file"

	names "nightbook/schema"
	ours "nightbook/writer/parquet"
)

const pageRows = 16 << 10 // of our pages, at most

// randomColumn makes up a column: its type, which rows have no value, and which
// values come, how often.
func randomColumn(r *rand.Rand, name string, n int) (names.Column, names.Vector) {
	number := randomNumber(r)
	null := randomNulls(r, n)
	c := names.Column{Name: name, Required: true}
	var v names.Vector
	v.Kind = []names.Kind{names.KindStrings, names.KindCodes, names.KindChoices, names.KindFloats, names.KindInts, names.KindDates, names.KindBools}[r.IntN(7)]
	width := []int{0, 3, 20, 300, 2000}[r.IntN(5)]
	if n > 4*pageRows {
		width = min(width, 20)
	}
	word := func(x uint64) string {
		s := fmt.Sprintf("%x ä€", x)
		return strings.Repeat("-", max(0, width-len(s))) + s
	}
	v.Dict = names.NewDict()
	v.Names = []string{""}
	for i := range 100 {
		v.Names = append(v.Names, word(uint64(i*i*i)%67)) // some twice
	}
	special := []float64{0, math.Copysign(0, -1), math.MaxFloat64, -math.SmallestNonzeroFloat64, 1, -1}
	for i := range n {
		x, gone := number(i), null(i)
		if v.Kind != names.KindBools && gone {
			c.Required = false
		}
		switch v.Kind {
		case names.KindStrings:
			if gone {
				v.Strings.AppendString("")
			} else {
				v.Strings.AppendString(word(x))
			}
		case names.KindCodes:
			code := names.Code(0)
			if !gone {
				code = v.Dict.Code(word(x))
			}
			v.Codes = append(v.Codes, code)
		case names.KindChoices:
			choice := names.Choice(0)
			if !gone {
				choice = names.Choice(1 + x%100)
			}
			v.Choices = append(v.Choices, choice)
		case names.KindFloats:
			f := math.Float64frombits(x)
			switch {
			case gone:
				f = math.NaN()
			case x < uint64(len(special)):
				f = special[x]
			case math.IsInf(f, 0) || math.IsNaN(f) || x%4 == 0:
				f = float64(int64(x))
			}
			v.Floats = append(v.Floats, f)
		case names.KindInts:
			if gone || int64(x) == names.NoInt {
				c.Required = false
				v.Ints = append(v.Ints, names.NoInt)
			} else {
				v.Ints = append(v.Ints, int64(x))
			}
		case names.KindDates:
			d := names.Date(int64(x) % 1_000_000)
			if gone {
				d = names.NoDate
			}
			v.Dates = append(v.Dates, d)
		case names.KindBools:
			v.Bools = append(v.Bools, x%3 == 0)
		}
	}
	c.Type = v.Type()
	c.Required = c.Required && r.IntN(2) == 0
	return c, v
}

// randomNumber is a sequence: one number, a few, many or all different, which in
// a later page turns into one of many.
func randomNumber(r *rand.Rand) func(i int) uint64 {
	noise := func(x uint64) uint64 { return (x + 1) * 0x9e3779b97f4a7c15 >> 3 * 0xbf58476d1ce4e5b9 }
	start, length := r.Uint64N(5), r.IntN(40)+1
	sequences := []func(i int) uint64{
		func(int) uint64 { return start },
		func(i int) uint64 { return noise(uint64(i)) % 6 },
		func(i int) uint64 { return noise(uint64(i / length % 90)) },
		func(i int) uint64 { return noise(noise(uint64(i)) % 3000) },
		func(i int) uint64 { return noise(noise(uint64(i)) % 30_000) },
		func(i int) uint64 { return noise(uint64(i)) },
		func(i int) uint64 { return start + uint64(i) },
		func(i int) uint64 { return -uint64(i) },
	}
	one, other, turn := sequences[r.IntN(8)], sequences[4+r.IntN(4)], r.IntN(3*pageRows)
	return func(i int) uint64 {
		if i < turn {
			return one(i)
		}
		return other(i)
	}
}

// randomNulls says which rows have no value.
func randomNulls(r *rand.Rand, n int) func(i int) bool {
	some, run, from := r.Float64(), r.IntN(500)+1, r.IntN(n+1)
	return []func(i int) bool{
		func(int) bool { return false },
		func(int) bool { return true },
		func(int) bool { return r.Float64() < some },
		func(i int) bool { return i/run%3 == 0 },
		func(i int) bool { return i < from },
		func(i int) bool { return i >= from },
		func(i int) bool { return i == from },
		func(i int) bool { return i/pageRows%2 == 0 },
	}[r.IntN(8)]
}

// part is rows [from, to) of a frame.
func part(f *names.Frame, from, to int) *names.Frame {
	p := &names.Frame{N: to - from, Cols: append([]names.Vector(nil), f.Cols...)}
	for k := range p.Cols {
		switch v := &p.Cols[k]; v.Kind {
		case names.KindCodes:
			v.Codes = v.Codes[from:to]
		case names.KindChoices:
			v.Choices = v.Choices[from:to]
		case names.KindFloats:
			v.Floats = v.Floats[from:to]
		case names.KindInts:
			v.Ints = v.Ints[from:to]
		case names.KindDates:
			v.Dates = v.Dates[from:to]
		case names.KindBools:
			v.Bools = v.Bools[from:to]
		default:
			v.Strings.Start, v.Strings.End = v.Strings.Start[from:to], v.Strings.End[from:to]
		}
	}
	return p
}

// Tables made up at random, cut into frames at random: Arrow and DuckDB read every
// value to the bit, the bounds of row groups and pages are those of their rows,
// and other frames and another number of workers give the same bytes.
func TestRandomTables(t *testing.T) {
	dir := t.TempDir()
	var frames []*names.Frame
	sizes := []int{0, 1, 2, 8, 1000, 4096, pageRows - 1, pageRows, pageRows + 1, 2 * pageRows, 40_000, 5*pageRows + 3}
	for seed := range uint64(36) {
		r := rand.New(rand.NewPCG(seed, 11))
		n := sizes[seed%uint64(len(sizes))]
		table, f := names.Table{Name: "t"}, &names.Frame{N: n}
		for k := range 1 + r.IntN(9) {
			c, v := randomColumn(r, fmt.Sprint("c", k), n)
			table.Columns, f.Cols = append(table.Columns, c), append(f.Cols, v)
		}
		opt := ours.Options{Version: "test", Compression: []string{"zstd", "snappy", "gzip", "none"}[r.IntN(4)],
			GroupRows: []int{0, pageRows, 2 * pageRows}[r.IntN(3)], GroupBytes: []int64{0, 0, 1 << 20}[r.IntN(3)]}
		var files [2]bytes.Buffer
		for i := range files {
			opt.Workers = 1 + i*(1+r.IntN(2))
			w, err := ours.New(&files[i], table, opt)
			if err != nil {
				t.Fatal(err)
			}
			for from := 0; from < n; {
				to := min(n, from+1+r.IntN(1+r.IntN(9000)))
				if err := w.Write(part(f, from, to)); err != nil {
					t.Fatalf("seed %d: %v", seed, err)
				}
				from = to
			}
			if err := w.Close(); err != nil {
				t.Fatalf("seed %d: %v", seed, err)
			}
		}
		if !bytes.Equal(files[0].Bytes(), files[1].Bytes()) {
			t.Fatalf("seed %d: other frames give other bytes", seed)
		}
		if err := arrowReads(files[0].Bytes(), f); err != nil {
			t.Fatalf("seed %d, %+v: %v", seed, opt, err)
		}
		if err := os.WriteFile(filepath.Join(dir, fmt.Sprintf("%02d.parquet", seed)), files[0].Bytes(), 0o666); err != nil {
			t.Fatal(err)
		}
		frames = append(frames, f)
	}
	if exec.Command("node", "-e", "require('@duckdb/node-api')").Run() != nil {
		if os.Getenv("NIGHTBOOK_OUTSIDE") == "required" {
			t.Fatal("node with the npm package @duckdb/node-api on NODE_PATH is missing, and NIGHTBOOK_OUTSIDE=required")
		}
		t.Skip("DuckDB for node is not on this machine; Arrow has read the files")
	}
	if said, err := exec.Command("node", "testdata/duckdb_read.cjs", dir).CombinedOutput(); err != nil {
		t.Fatalf("DuckDB: %v\n%s", err, said)
	}
	for seed, f := range frames {
		data, err := os.ReadFile(filepath.Join(dir, fmt.Sprintf("%02d.txt", seed)))
		if err != nil {
			t.Fatal(err)
		}
		lines := strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")
		if want := f.N * len(f.Cols); len(lines) != max(want, 1) {
			t.Fatalf("seed %d: DuckDB reads %d cells, not %d", seed, len(lines), want)
		}
		for k := range f.Cols {
			for i := range f.N {
				var got string
				if err := json.Unmarshal([]byte(lines[k*f.N+i]), &got); err != nil {
					t.Fatal(err)
				}
				if want := shown(&f.Cols[k], i); got != want {
					t.Fatalf("seed %d, column %d, row %d: DuckDB reads %s, not %s", seed, k, i, got, want)
				}
			}
		}
	}
}

// arrowReads compares a file with the frame it came from.
func arrowReads(data []byte, f *names.Frame) error {
	r, err := file.NewParquetReader(bytes.NewReader(data))
	if err != nil {
		return err
	}
	if r.NumRows() != int64(f.N) {
		return fmt.Errorf("%d rows, not %d", r.NumRows(), f.N)
	}
	for k := range f.Cols {
		v := &f.Cols[k]
		got, err := columnOf(r, k)
		if err != nil || len(got) != f.N {
			return fmt.Errorf("column %d: %d rows, %v", k, len(got), err)
		}
		for i := range f.N {
			if want := shown(v, i); got[i] != want {
				return fmt.Errorf("column %d, row %d: %s, want %s", k, i, got[i], want)
			}
		}
		start := 0
		for g := range r.NumRowGroups() {
			rows := int(r.RowGroup(g).NumRows())
			if err := boundsHold(r, g, k, v, start, rows); err != nil {
				return fmt.Errorf("row group %d, column %d: %v", g, k, err)
			}
			start += rows
		}
	}
	return nil
}

// boundsHold compares the statistics of a column chunk and its page index with
// its rows, of which start is the first.
func boundsHold(r *file.Reader, g, k int, v *names.Vector, start, rows int) error {
	chunk, err := r.MetaData().RowGroup(g).ColumnChunk(k)
	if err != nil {
		return err
	}
	s, err := chunk.Statistics()
	if err != nil {
		return err
	}
	b := boundsOf(v, start, start+rows)
	if s.NullCount() != b.nulls || s.HasMinMax() != (b.low != nil && !b.long) {
		return fmt.Errorf("statistics %v, want %+v", s, b)
	}
	if s.HasMinMax() && (!bytes.Equal(s.EncodeMin(), b.low) || !bytes.Equal(s.EncodeMax(), b.high)) {
		return fmt.Errorf("statistics from %x to %x, want %+v", s.EncodeMin(), s.EncodeMax(), b)
	}
	group, err := r.GetPageIndexReader().RowGroup(g)
	if err != nil {
		return err
	}
	offsets, err := group.GetOffsetIndex(k)
	if err != nil {
		return err
	}
	index, err := group.GetColumnIndex(k)
	if err != nil {
		return err
	}
	list := offsets.GetPageLocations()
	known := true
	for p, at := range list {
		to := rows
		if p+1 < len(list) {
			to = int(list[p+1].FirstRowIndex)
		}
		b := boundsOf(v, start+int(at.FirstRowIndex), start+to)
		known = known && !b.long
		if index == nil {
			continue
		}
		if index.GetNullPages()[p] != (b.low == nil) || index.GetNullCounts()[p] != b.nulls ||
			!bytes.Equal(index.GetMinValues()[p], b.low) || !bytes.Equal(index.GetMaxValues()[p], b.high) {
			return fmt.Errorf("page %d: from %x to %x, want %+v", p, index.GetMinValues()[p], index.GetMaxValues()[p], b)
		}
	}
	if known != (index != nil) {
		return fmt.Errorf("an index of bounds: %v", index != nil)
	}
	return nil
}

// bounds are the smallest and the largest value of some rows as a file has them,
// and how many have none; long texts are no bounds.
type bounds struct {
	low, high []byte
	nulls     int64
	long      bool
}

func boundsOf(v *names.Vector, from, to int) (b bounds) {
	var low, high int // rows
	var less func(i, j int) bool
	encode := func(i int) []byte { return []byte(v.Text(i)) }
	switch v.Kind {
	case names.KindFloats:
		less = func(i, j int) bool { return v.Floats[i] < v.Floats[j] }
		encode = func(i int) []byte { return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v.Floats[i])) }
	case names.KindInts:
		less = func(i, j int) bool { return v.Ints[i] < v.Ints[j] }
		encode = func(i int) []byte { return binary.LittleEndian.AppendUint64(nil, uint64(v.Ints[i])) }
	case names.KindDates:
		less = func(i, j int) bool { return v.Dates[i] < v.Dates[j] }
		encode = func(i int) []byte { return binary.LittleEndian.AppendUint32(nil, uint32(v.Dates[i])) }
	case names.KindBools:
		less = func(i, j int) bool { return !v.Bools[i] && v.Bools[j] }
		encode = func(i int) []byte { return []byte{map[bool]byte{true: 1}[v.Bools[i]]} }
	default:
		less = func(i, j int) bool { return v.Text(i) < v.Text(j) }
	}
	low, high = -1, -1
	for i := from; i < to; i++ {
		if shown(v, i) == "∅" {
			b.nulls++
			continue
		}
		if low < 0 || less(i, low) {
			low = i
		}
		if high < 0 || less(high, i) {
			high = i
		}
	}
	if low < 0 {
		return b
	}
	b.low, b.high = encode(low), encode(high)
	if v.Kind == names.KindFloats { // the format: a smallest zero is -0, a largest one +0
		if v.Floats[low] == 0 {
			b.low = []byte{0, 0, 0, 0, 0, 0, 0, 0x80}
		}
		if v.Floats[high] == 0 {
			b.high = make([]byte, 8)
		}
	}
	b.long = v.Type() == names.Text && max(len(b.low), len(b.high)) > 256
	return b
}
