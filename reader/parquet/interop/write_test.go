package interop

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"

	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/file"

	names "nightbook/schema"
	ours "nightbook/writer/parquet"
)

// every has a column of each type that is written, needed and not.
func every() names.Table {
	t := names.Table{Name: "every"}
	for _, c := range []names.Type{names.Text, names.Float, names.Int, names.Day, names.Bool} {
		t.Columns = append(t.Columns, names.Column{Name: c.String(), Type: c, Required: c == names.Bool}, names.Column{Name: c.String() + "_needed", Type: c, Required: true})
	}
	return t
}

// frame is rows [from, to) of it.
func frame(from, to int) *names.Frame {
	f := &names.Frame{N: to - from, Cols: make([]names.Vector, 10)}
	for k := range f.Cols {
		v := &f.Cols[k]
		null := func(i int) bool { return k%2 == 0 && isNull(i) }
		for i := from; i < to; i++ {
			switch k / 2 {
			case 0:
				v.Kind = names.KindStrings
				if s := "t" + text(i); null(i) {
					v.Strings.AppendString("")
				} else {
					v.Strings.AppendString(s)
				}
			case 1:
				v.Kind = names.KindFloats
				x := double(i)
				if null(i) {
					x = math.NaN()
				}
				v.Floats = append(v.Floats, x)
			case 2:
				v.Kind = names.KindInts
				x := spread(i)
				if null(i) {
					x = names.NoInt
				}
				v.Ints = append(v.Ints, x)
			case 3:
				v.Kind = names.KindDates
				d := names.Date(spread(i) % 100_000)
				if null(i) {
					d = names.NoDate
				}
				v.Dates = append(v.Dates, d)
			case 4:
				v.Kind = names.KindBools
				v.Bools = append(v.Bools, i%3 == 0)
			}
		}
	}
	return f
}

// What is written reads in the other library as the values it came from, to the
// bit, with every codec and any number of workers.
func TestTheyReadOurs(t *testing.T) {
	const n, batch = 600_000, 4096 // more than a row group
	for _, codec := range []string{"zstd", "snappy", "gzip", "none"} {
		var b bytes.Buffer
		w, err := ours.New(&b, every(), ours.Options{Compression: codec, Workers: 2, Version: "test"})
		if err != nil {
			t.Fatal(err)
		}
		for from := 0; from < n; from += batch {
			if err := w.Write(frame(from, min(n, from+batch))); err != nil {
				t.Fatal(err)
			}
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		r, err := file.NewParquetReader(bytes.NewReader(b.Bytes()))
		if err != nil {
			t.Fatalf("%s: %v", codec, err)
		}
		if r.NumRows() != n || r.NumRowGroups() < 2 {
			t.Fatalf("%s: %d rows in %d row groups", codec, r.NumRows(), r.NumRowGroups())
		}
		want := frame(0, n)
		for k := range want.Cols {
			got, err := columnOf(r, k)
			if err != nil || len(got) != n {
				t.Fatalf("%s, column %d: %d rows, %v", codec, k, len(got), err)
			}
			for i := range n {
				if w := shown(&want.Cols[k], i); got[i] != w {
					t.Fatalf("%s, column %d, row %d: %s, want %s", codec, k, i, got[i], w)
				}
			}
		}
	}
}

// shown is a cell as text, "∅" for null.
func shown(v *names.Vector, i int) string {
	switch v.Kind {
	case names.KindFloats:
		if v.Floats[i] == v.Floats[i] {
			return bits(v.Floats[i])
		}
	case names.KindInts:
		if v.Ints[i] != names.NoInt {
			return fmt.Sprint(v.Ints[i])
		}
	case names.KindDates:
		if v.Dates[i] != names.NoDate {
			return fmt.Sprint(int32(v.Dates[i]))
		}
	case names.KindBools:
		return fmt.Sprint(v.Bools[i])
	default:
		if s := v.Text(i); s != "" {
			return s
		}
	}
	return "∅"
}

// columnOf reads a column of all row groups with the library.
func columnOf(r *file.Reader, k int) (cells []string, err error) {
	for g := range r.NumRowGroups() {
		column, err := r.RowGroup(g).Column(k)
		if err != nil {
			return nil, err
		}
		n := r.RowGroup(g).NumRows()
		var values []string
		levels := make([]int16, n)
		switch c := column.(type) {
		case *file.ByteArrayColumnChunkReader:
			values, err = all(n, levels, c.ReadBatch, func(x parquet.ByteArray) string { return string(x) })
		case *file.Float64ColumnChunkReader:
			values, err = all(n, levels, c.ReadBatch, bits)
		case *file.Int64ColumnChunkReader:
			values, err = all(n, levels, c.ReadBatch, func(x int64) string { return fmt.Sprint(x) })
		case *file.Int32ColumnChunkReader:
			values, err = all(n, levels, c.ReadBatch, func(x int32) string { return fmt.Sprint(x) })
		case *file.BooleanColumnChunkReader:
			values, err = all(n, levels, c.ReadBatch, func(x bool) string { return fmt.Sprint(x) })
		default:
			err = fmt.Errorf("a column reader of type %T", column)
		}
		if err != nil {
			return nil, err
		}
		optional := column.Descriptor().MaxDefinitionLevel() > 0
		for _, l := range levels {
			if optional && l == 0 {
				cells = append(cells, "∅")
				continue
			}
			if len(values) == 0 {
				return nil, fmt.Errorf("row group %d has too few values", g)
			}
			cells, values = append(cells, values[0]), values[1:]
		}
	}
	return cells, nil
}

// all reads n rows of a row group; levels says which of them hold a value.
func all[T any](n int64, levels []int16, read func(int64, []T, []int16, []int16) (int64, int, error), show func(T) string) (values []string, err error) {
	buffer := make([]T, n)
	for at := int64(0); at < n; {
		rows, stored, err := read(n-at, buffer, levels[at:], nil)
		if err != nil {
			return nil, err
		}
		if rows == 0 {
			return nil, fmt.Errorf("only %d of %d rows", at, n)
		}
		for _, x := range buffer[:stored] {
			values = append(values, show(x))
		}
		at += rows
	}
	return values, nil
}

// A byte of our own files that changes is found out by the checksum of its page,
// or changes no value.
func TestDamageIsFoundOut(t *testing.T) {
	var b bytes.Buffer
	table := every()
	table.Columns = table.Columns[2:3] // a column of doubles, with nulls
	w, err := ours.New(&b, table, ours.Options{Compression: "none", Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	f := frame(0, 2000)
	f.Cols = f.Cols[2:3]
	if err := errors.Join(w.Write(f), w.Close()); err != nil {
		t.Fatal(err)
	}
	whole := b.Bytes()
	want, err := read(whole)
	if err != nil {
		t.Fatal(err)
	}
	footer := len(whole) - 8 - int(binary.LittleEndian.Uint32(whole[len(whole)-8:])) // it has no checksum
	found := 0
	for at := 4; at < len(whole)-8; at += 7 {
		damaged := bytes.Clone(whole)
		damaged[at] ^= 1 << (at % 8)
		got, err := read(damaged)
		if err != nil {
			found++
		} else if at < footer && !slices.Equal(got, want) {
			t.Fatalf("byte %d of %d changed, and the values with it", at, len(whole))
		}
	}
	if found < len(whole)/10 {
		t.Errorf("%d of %d changes found", found, len(whole)/7)
	}
}
