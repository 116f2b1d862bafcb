package main

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"nightbook/schema"
	"nightbook/writer"
)

// TestSameBytes runs the desks with other numbers of workers, and with the same
// positions from a Parquet file: the results are the same to the last bit.
func TestSameBytes(t *testing.T) {
	for _, desk := range []string{"alder-index-desk", "linden-share-desk"} {
		desk := filepath.Join("../../samples", desk)
		whole := sampleRun(t, desk, "--workers", "1")
		for _, workers := range []string{"2", "5"} {
			sameFiles(t, whole, sampleRun(t, desk, "--workers", workers))
		}

		// a Parquet column of numbers cannot hold the cells that are no numbers
		header, rows := goodPositions(t, desk, whole)
		fromCSV, fromParquet := t.TempDir(), t.TempDir()
		for _, dir := range []string{fromCSV, fromParquet} {
			if err := os.CopyFS(dir, os.DirFS(desk)); err != nil {
				t.Fatal(err)
			}
			if err := os.Remove(filepath.Join(dir, "positions.csv")); err != nil {
				t.Fatal(err)
			}
		}
		writeCSV(t, filepath.Join(fromCSV, "positions.csv"), header, rows)
		writeParquet(t, filepath.Join(fromParquet, "positions.parquet"), header, rows)
		a, b := sampleRun(t, fromCSV), sampleRun(t, fromParquet)
		for _, name := range []string{"lines", "books", "underlyings", "currencies", "exercise"} {
			sameFile(t, a, b, name+".csv")
			sameFile(t, a, b, name+".parquet")
		}
		if _, lines := readCSV(t, filepath.Join(b, "lines.csv")); len(lines) != len(rows) {
			t.Errorf("%s: %d lines of %d rows", desk, len(lines), len(rows))
		}
	}
}

func sameFiles(t *testing.T, a, b string) {
	t.Helper()
	entries, err := os.ReadDir(a)
	if err != nil || len(entries) < 14 {
		t.Fatalf("%d files, %v", len(entries), err)
	}
	for _, e := range entries {
		sameFile(t, a, b, e.Name())
	}
}

func sameFile(t *testing.T, a, b, name string) {
	t.Helper()
	x, err := os.ReadFile(filepath.Join(a, name))
	if err != nil {
		t.Fatal(err)
	}
	y, err := os.ReadFile(filepath.Join(b, name))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(x, y) {
		t.Errorf("%s of %s and of %s differ", name, a, b)
	}
}

// goodPositions returns the rows of a position file that its run has priced.
func goodPositions(t *testing.T, desk, results string) (header []string, rows [][]string) {
	t.Helper()
	f, err := os.Open(filepath.Join(desk, "positions.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	_, lines := readCSV(t, filepath.Join(results, "lines.csv"))
	priced := map[string]bool{}
	for _, l := range lines {
		priced[l["line_id"]] = true
	}
	for _, row := range all[1:] {
		if priced[row[0]] {
			rows = append(rows, row)
			delete(priced, row[0]) // of a line_id that stands twice the first counts
		}
	}
	return all[0], rows
}

func writeCSV(t *testing.T, path string, header []string, rows [][]string) {
	t.Helper()
	var b bytes.Buffer
	if err := csv.NewWriter(&b).WriteAll(append([][]string{header}, rows...)); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
}

// writeParquet writes numbers as numbers and all else, days too, as text.
func writeParquet(t *testing.T, path string, header []string, rows [][]string) {
	t.Helper()
	table := schema.Table{Name: "positions"}
	frame := &schema.Frame{N: len(rows), Cols: make([]schema.Vector, len(header))}
	for k, name := range header {
		c := schema.Column{Name: name, Type: schema.Text}
		v := &frame.Cols[k]
		if known := schema.PositionsTable.Column(name); known != nil && known.Type == schema.Float {
			c.Type, v.Kind = schema.Float, schema.KindFloats
		}
		for _, row := range rows {
			if v.Kind != schema.KindFloats {
				v.Strings.AppendString(row[k])
				continue
			}
			x := math.NaN()
			if row[k] != "" {
				var err error
				if x, err = strconv.ParseFloat(row[k], 64); err != nil {
					t.Fatal(err)
				}
			}
			v.Floats = append(v.Floats, x)
		}
		table.Columns = append(table.Columns, c)
	}
	var b bytes.Buffer
	w, err := writer.NewTable("parquet", &b, table, writer.Options{Workers: 1})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Write(frame); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, b.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
}
