package main

import (
	"errors"
	"fmt"
	"runtime/debug"
	"strings"
	"testing"

	"nightbook/schema"
)

// What a run is said to take is enough for it, though more memory may mean larger
// row groups.
func TestEnoughMemory(t *testing.T) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1))
	for _, formats := range [][]string{{"parquet"}, {"csv"}, {"xlsx", "parquet"}, {"xlsx", "parquet", "csv"}} {
		for _, extra := range [][]string{nil, make([]string, 400)} {
			columns := schema.LinesTable(extra).Columns
			for _, memory := range []int64{1, 20 * mib, 60 * mib, 80 * mib} {
				o := &options{formats: formats, workers: 2, memory: memory}
				_, err := o.divide(columns)
				if err == nil {
					continue
				}
				var says *hinted
				var enough int64
				_, after, _ := strings.Cut(err.Error(), "which takes ")
				if _, scan := fmt.Sscan(after, &enough); !errors.As(err, &says) || scan != nil {
					t.Fatalf("%v: %v", err, scan)
				}
				o.memory = enough * mib
				if s, err := o.divide(columns); err != nil || s.workers < 1 || s.live <= 0 {
					t.Errorf("%v, %d columns, %s and then %d MiB: %+v %v", formats, len(columns), sizeText(memory), enough, s, err)
				}
			}
		}
	}
}
