package parquet

import (
	"bytes"
	"fmt"
	"testing"

	"github.com/xitongsys/parquet-go/writer"

	"nightbook/schema"
)

type remembered struct {
	Text   string `parquet:"name=text, type=BYTE_ARRAY, convertedtype=UTF8"`
	Word   string `parquet:"name=word, type=BYTE_ARRAY, convertedtype=UTF8, encoding=PLAIN_DICTIONARY"`
	Number int64  `parquet:"name=number, type=INT64"`
}

// What a file is said to take is its largest page of each column, packed and
// unpacked, and its dictionary: it grows with the pages and not with the rows.
func TestMemory(t *testing.T) {
	memory := func(rows, page, words int) int64 {
		n, _ := memoryOf(t, rows, page, words, 1<<30)
		return n
	}
	small, long := memory(10_000, 8<<10, 5), memory(40_000, 8<<10, 5)
	if long > small+small/10 {
		t.Errorf("%d bytes with 10,000 rows, %d with 40,000", small, long)
	}
	// A page of 40,000 texts of 104 bytes is 4,160,000 bytes unpacked.
	if big := memory(40_000, 100<<20, 5); big < long+4_160_000 || big > long+3*4_160_000 {
		t.Errorf("%d bytes with one page, %d with small ones", big, long)
	}
	// 20,000 words of 104 bytes, and what is kept for each, twice.
	if words := memory(40_000, 8<<10, 20_000); words < long+2*20_000*104 || words > long+3*20_000*(104+wordEntry) {
		t.Errorf("%d bytes with 20,000 words, %d with five", words, long)
	}
}

// What a run of rows keeps of the words of its row group is all where the group is
// no longer than the run, and a part where others share it.
func TestMemoryOfRuns(t *testing.T) {
	const words = 2000 * (104 + wordEntry)
	if _, kept := memoryOf(t, 40_000, 8<<10, 2000, 100_000); kept < words*9/10 || kept > words*11/10 {
		t.Errorf("%d bytes in small row groups, want about %d", kept, words)
	}
	if _, kept := memoryOf(t, 40_000, 8<<10, 2000, 1<<30); kept < words/11 || kept > words/9 { // ten runs
		t.Errorf("%d bytes in one row group, want about %d", kept, words/10)
	}
}

// memoryOf writes a file of that many rows, with pages of so many bytes, and row
// groups of so many, and returns what reading it takes.
func memoryOf(t *testing.T, rows, page, words, group int) (reading, kept int64) {
	t.Helper()
	var b bytes.Buffer
	w, err := writer.NewParquetWriterFromWriter(&b, new(remembered), 1)
	if err != nil {
		t.Fatal(err)
	}
	w.PageSize, w.RowGroupSize = int64(page), int64(group)
	for i := range rows {
		if err := w.Write(remembered{fmt.Sprintf("%0100d", i), fmt.Sprintf("%0100d", i%words), int64(i)}); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	f, err := Open(bytes.NewReader(b.Bytes()), int64(b.Len()), schema.Limits{})
	if err != nil {
		t.Fatal(err)
	}
	if reading, kept, err = f.Memory(); err != nil {
		t.Fatal(err)
	}
	return reading, kept
}
