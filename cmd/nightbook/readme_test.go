package main

import (
	"bytes"
	"context"
	"os"
	"strings"
	"testing"
)

// TestReadmeExcerpts checks that what the README shows of a run is what the
// program says and writes.
func TestReadmeExcerpts(t *testing.T) {
	readme, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	var said bytes.Buffer
	out := t.TempDir()
	if status := run(context.Background(), []string{"nightbook", "run", "../../samples/alder-index-desk", "--out", out}, &said, &said); status != exitRejected {
		t.Fatalf("status %d\n%s", status, &said)
	}
	rejects, err := os.ReadFile(out + "/2026-06-19/rejects.csv")
	if err != nil {
		t.Fatal(err)
	}
	shown := 0
	for l := range strings.SplitSeq(string(readme), "\n") {
		l, indented := strings.CutPrefix(l, "    ")
		switch {
		case !indented:
		case strings.HasPrefix(l, "priced ") || strings.HasPrefix(l, "  "):
			if !strings.Contains(said.String(), l) {
				t.Errorf("the README shows %q, the program said\n%s", l, &said)
			}
			shown++
		case strings.HasPrefix(l, "positions.csv,") || strings.HasPrefix(l, "file,sheet,"):
			if !strings.Contains(string(rejects), l+"\n") {
				t.Errorf("the README shows %q, rejects.csv is\n%s", l, rejects)
			}
			shown++
		}
	}
	if shown < 12 {
		t.Errorf("the README shows only %d lines of a run", shown)
	}
}
