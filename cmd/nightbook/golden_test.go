package main

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the golden files with what the program writes now")

// TestGolden compares the sample runs with committed ones, byte for byte: the
// CSV form of every table shows every bit of every number. A change of these
// files is a change of what users get, and stands in a commit of its own.
func TestGolden(t *testing.T) {
	for _, snapshot := range sampleFolders(t) {
		dir, golden := sampleRun(t, snapshot), filepath.Join("testdata/golden", filepath.Base(snapshot))
		for _, name := range []string{"lines.csv", "books.csv", "underlyings.csv", "currencies.csv", "exercise.csv", "rejects.csv", "warnings.csv"} {
			got, err := os.ReadFile(filepath.Join(dir, name))
			if err != nil {
				t.Fatal(err)
			}
			path := filepath.Join(golden, name)
			if *update {
				if err := os.MkdirAll(golden, 0o777); err != nil {
					t.Fatal(err)
				}
				if err := os.WriteFile(path, got, 0o666); err != nil {
					t.Fatal(err)
				}
				continue
			}
			want, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if bytes.Equal(got, want) {
				continue
			}
			g, w := bytes.Split(got, []byte("\n")), bytes.Split(want, []byte("\n"))
			for i := range min(len(g), len(w)) {
				if !bytes.Equal(g[i], w[i]) {
					t.Errorf("%s differs at line %d:\n got %s\nwant %s", path, i+1, g[i], w[i])
					break
				}
			}
			if len(g) != len(w) {
				t.Errorf("%s has %d lines, want %d", path, len(g), len(w))
			}
		}
	}
}
