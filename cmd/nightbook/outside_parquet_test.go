package main

import (
	"bytes"
	"context"
	"encoding/csv"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// enrich gives the positions of a demo snapshot times of day, volatilities and
// marks with all their digits, and a column of the house's own.
func enrich(t *testing.T, path string) {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	column := func(name string) int { return slices.Index(all[0], name) }
	all[0] = append(all[0], "vol", "mark", "note")
	for i, row := range all[1:] {
		vol, mark := "", ""
		if row[column("instrument")] == "option" {
			if i%3 == 0 {
				row[column("expiry")] += "T16:30"
			}
			if i%2 == 0 {
				vol = strconv.FormatFloat(0.1+float64(i)/70001, 'g', -1, 64)
			}
			if i%7 == 0 {
				mark = strconv.FormatFloat(float64(i)/1024, 'g', -1, 64)
			}
		}
		all[i+1] = append(row, vol, mark, []string{"", "so, \"it\" goes", "ä€𝄞", "line\nend"}[i%4])
	}
	var b bytes.Buffer
	if err := csv.NewWriter(&b).WriteAll(all); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
}

// TestDuckDBWrites has an independent engine write the positions as Parquet, in
// every way it can: each gives the lines that the CSV gives.
func TestDuckDBWrites(t *testing.T) {
	outside(t, onPath("node"), "node")
	outside(t, exec.Command("node", "-e", "require('@duckdb/node-api')").Run() == nil, "DuckDB for node (npm package @duckdb/node-api on NODE_PATH)")
	snapshot := demoSnapshot(t, 6000)
	positions := filepath.Join(snapshot, "positions.csv")
	enrich(t, positions)
	read := func(path string) string {
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		return string(data)
	}
	want := read(filepath.Join(sampleRun(t, snapshot), "lines.csv"))
	written := t.TempDir()
	command(t, "node", "testdata/outside/duckdb_write.cjs", positions, written)
	if err := os.Remove(positions); err != nil {
		t.Fatal(err)
	}
	entries, err := os.ReadDir(written)
	if err != nil || len(entries) < 18 {
		t.Fatalf("%d files, %v", len(entries), err)
	}
	for _, e := range entries {
		place := filepath.Join(snapshot, "positions.parquet")
		if err := os.Rename(filepath.Join(written, e.Name()), place); err != nil {
			t.Fatal(err)
		}
		name := strings.TrimSuffix(e.Name(), ".parquet")
		if refused := map[string]string{"brotli_v1": "packed with BROTLI are not read", "brotli_v2": "packed with BROTLI are not read"}[name]; refused != "" {
			var said bytes.Buffer
			if status := run(context.Background(), []string{"nightbook", "check", snapshot}, &said, &said); status != exitFailed || !strings.Contains(said.String(), refused) {
				t.Errorf("%s: status %d, %s", name, status, &said)
			}
		} else {
			dir := sampleRun(t, snapshot)
			got := read(filepath.Join(dir, "lines.csv"))
			switch name {
			case "zoned": // every dated line is refused, and says why
				rejects := read(filepath.Join(dir, "rejects.csv"))
				if !strings.Contains(rejects, "the time is of UTC") || strings.Contains(got, ",option,") {
					t.Errorf("%s: %.300s", name, rejects)
				}
			case "parts": // in the order of the books, which are the last column there
				if g, w := byLine(t, got), byLine(t, want); !slices.Equal(g, w) {
					t.Errorf("%s: the lines differ", name)
				}
			default:
				if got != want {
					t.Errorf("%s: the lines differ from those of the CSV", name)
				}
			}
		}
		if err := os.RemoveAll(place); err != nil {
			t.Fatal(err)
		}
	}
}

// byLine returns the rows of a table in the order of their texts.
func byLine(t *testing.T, text string) []string {
	t.Helper()
	all, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []string
	for _, r := range all {
		rows = append(rows, strings.Join(r, "\x00"))
	}
	slices.Sort(rows)
	return rows
}
