package parquet

import (
	"bytes"
	"fmt"
	"io"
	"math/rand/v2"
	"testing"

	"nightbook/schema"
)

// What a writer asks for is what Memory says, with numbers that compression leaves
// as they are, and with long texts beside them.
func TestMemory(t *testing.T) {
	table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "note", Type: schema.Text}}}
	for i := range 30 {
		table.Columns = append(table.Columns, schema.Column{Name: fmt.Sprint("x", i), Type: schema.Float})
	}
	const rows = 2 * pageRows
	most := Memory(table.Columns, rows)
	for _, length := range []int{0, 10, 2000} {
		r := rand.New(rand.NewPCG(9, uint64(length)))
		w, err := New(io.Discard, table, Options{Workers: 2, GroupRows: rows, GroupBytes: GroupBytes(table.Columns, rows)})
		if err != nil {
			t.Fatal(err)
		}
		f := &schema.Frame{N: checkRows, Cols: make([]schema.Vector, len(table.Columns))}
		for range 2 * rows / checkRows {
			f.Cols[0].Strings = schema.Strings{}
			note := make([]byte, length)
			for range f.N {
				for i := range note {
					note[i] = ' ' + byte(r.Uint32()%94)
				}
				f.Cols[0].Strings.AppendString(string(note))
			}
			for k := 1; k < len(f.Cols); k++ {
				f.Cols[k].Kind, f.Cols[k].Floats = schema.KindFloats, f.Cols[k].Floats[:0]
				for range f.N {
					f.Cols[k].Floats = append(f.Cols[k].Floats, r.NormFloat64())
				}
			}
			if err := w.Write(f); err != nil {
				t.Fatal(err)
			}
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		taken := int64(len(w.blocks.free))
		for _, c := range w.columns {
			if cap(c.body) == blockBytes {
				taken++
			}
		}
		if taken *= blockBytes; taken+fixedMemory > most || length == 10 && taken < most/4 {
			t.Errorf("texts of %d bytes: blocks of %d bytes, with the rest more than %d", length, taken, most)
		}
		if ends := w.groups[0].NumRows; length <= 10 && ends < rows/2 || length > 10 && ends >= rows/2 {
			t.Errorf("texts of %d bytes: the first row group has %d rows", length, ends)
		}
	}
}

// A row group ends at whole slices of rows, whatever is asked for.
func TestOddGroupRows(t *testing.T) {
	table, f := texts(3*checkRows, func(i int) string { return "x" })
	whole := footer(t, write(t, table, Options{GroupRows: checkRows + 1}, f))
	if len(whole.RowGroups) != 2 || whole.RowGroups[0].NumRows != 2*checkRows {
		t.Errorf("row groups %v", whole.RowGroups)
	}
	if !bytes.Equal(write(t, table, Options{GroupRows: checkRows + 1}, f), write(t, table, Options{GroupRows: 2 * checkRows}, f)) {
		t.Error("the rows asked for are not rounded up")
	}
}
