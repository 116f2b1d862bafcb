package samples

import (
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"sort"
	"strconv"
	"strings"
	"testing"

	"nightbook/schema"
)

// references holds the expected lines of the committed snapshots, computed by
// a second implementation. Reading them here ties the figures in the READMEs
// to them.
const references = "../risk/internal/ref/snapshot"

func TestReadmeFigures(t *testing.T) {
	for _, s := range committed() {
		readme, err := os.ReadFile(filepath.Join(s.name, "README.md"))
		if err != nil {
			t.Fatal(err)
		}
		var got []string
		for _, line := range strings.Split(string(readme), "\n") {
			if strings.Count(line, "|") == 8 && !strings.HasPrefix(line, "|---") && !strings.HasPrefix(line, "| book") {
				got = append(got, line)
			}
		}
		want := bookTable(t, s)
		if len(want) < 5 {
			t.Fatalf("%s: %d books", s.name, len(want))
		}
		if a, b := strings.Join(got, "\n"), strings.Join(want, "\n"); a != b {
			t.Errorf("%s/README.md: the table of books is\n%s\nwant\n%s", s.name, a, b)
		}
	}
}

var readmeMeasures = []string{"value_base", "delta_cash_base", "gamma_cash_1pct_base", "vega_cash_1pt_base", "theta_cash_1d_base", "theta_cash_1bd_base"}

// bookTable adds the reference lines up over the book tree.
func bookTable(t *testing.T, s snapshot) []string {
	f, err := os.Open(filepath.Join(references, s.name+".csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	column := map[string]int{}
	for i, h := range lines[0] {
		column[h] = i
	}
	parent, below := map[string]string{}, map[string][]string{}
	for _, b := range rowsOf(t, s, "books") {
		parent[b["book"]] = b["parent"]
		below[b["parent"]] = append(below[b["parent"]], b["book"])
	}
	positions := rowsOf(t, s, "positions")
	if len(lines)-1 != len(positions) {
		t.Fatalf("%s: %d reference lines for %d positions", s.name, len(lines)-1, len(positions))
	}
	sums := map[string][]float64{}
	var refused []brokenLine
	for i, p := range positions {
		x := lines[i+1]
		if x[column["line_id"]] != p["line_id"] {
			t.Fatalf("%s: reference line %s beside position %s", s.name, x[0], p["line_id"])
		}
		if x[column["status"]] == "rejected" {
			refused = append(refused, brokenLine{x[column["line_id"]], schema.RejectCode(x[column["code"]])})
			continue
		}
		if _, ok := parent[p["book"]]; !ok {
			parent[p["book"]] = ""
			below[""] = append(below[""], p["book"])
		}
		for b := p["book"]; b != ""; b = parent[b] {
			if sums[b] == nil {
				sums[b] = make([]float64, len(readmeMeasures))
			}
			for j, m := range readmeMeasures {
				v, err := strconv.ParseFloat(x[column[m]], 64)
				if err != nil {
					t.Fatal(err)
				}
				sums[b][j] += v
			}
		}
	}
	// the second implementation refuses what was broken, for the same reason
	for _, b := range s.broken {
		if !slices.Contains(refused, b) {
			t.Errorf("%s: the reference does not refuse %s as %s", s.name, b.id, b.code)
		}
	}
	if len(refused) != len(s.broken) {
		t.Errorf("%s: the reference refuses %d lines, %d are broken", s.name, len(refused), len(s.broken))
	}
	var rows []string
	var walk func(b string, level int)
	walk = func(b string, level int) {
		row := "| " + strings.Repeat("· ", level) + b
		for _, v := range sums[b] {
			if s.thousands {
				row += fmt.Sprintf(" | %.1f", v/1000+0) // no −0
				continue
			}
			row += " | " + grouped(v)
		}
		rows = append(rows, row+" |")
		sort.Strings(below[b])
		for _, c := range below[b] {
			walk(c, level+1)
		}
	}
	sort.Strings(below[""])
	for _, b := range below[""] {
		walk(b, 0)
	}
	return rows
}

// grouped writes v to the unit, with a comma between thousands.
func grouped(v float64) string {
	s := fmt.Sprintf("%.0f", v)
	sign := ""
	if strings.HasPrefix(s, "-") {
		sign, s = "-", s[1:]
	}
	if s == "0" {
		return s
	}
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return sign + s
}
