package model

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
)

var greekNames = [11]string{"price", "delta", "gamma", "vega", "theta", "rho", "carry_rho", "vanna", "volga", "charm", "residual"}

// referenceTables are the files in internal/ref/closed_forms, and which model
// a line of each is about.
var referenceTables = []struct {
	file  string
	model func(text map[string]string) string
	lines int // at least
	limit float64
}{
	{"bachelier", func(map[string]string) string { return "bachelier" }, 120, 2e-13},
	{"digital", func(text map[string]string) string { return text["kind"] + " digital" + onFuture[text["on"]] }, 160, 1e-13},
	{"barrier", func(text map[string]string) string { return "barrier" + onFuture[text["on"]] }, 320, 5e-12},
	{"asian", func(text map[string]string) string { return text["kind"] + " asian" + onFuture[text["on"]] }, 192, 2e-11},
}

var onFuture = map[string]string{"spot": "", "future": " on a future"}

// The tables are computed at 50 digits from integrals over densities, and
// differences of them. The error of a result is measured by the result itself,
// or by a ten-thousandth of its unit where the result is smaller than that.
func TestClosedReference(t *testing.T) {
	for _, table := range referenceTables {
		rows := readTable(t, table.file, greekNames[:10])
		if len(rows) < table.lines {
			t.Errorf("%s: %d lines, not %d", table.file, len(rows), table.lines)
		}
		var worst [10]float64
		g := newGreeks(1)
		for _, row := range rows {
			d := deal{}
			for name, x := range row.in {
				if !d.set(name, x) {
					t.Fatalf("%s: unknown column %s", table.file, name)
				}
			}
			f := closedFormNamed(t, table.model(row.text))
			f.greeks(g, d)
			for i, unit := range f.units(d) {
				got, want := (*g.Slices()[i])[0], row.results[i]
				if got == want {
					continue
				}
				e := math.Abs(got-want) / max(math.Abs(want), 1e-4*unit)
				if !(e <= table.limit) {
					t.Errorf("%s line %d: %s = %v, not %v (error %.2g)", table.file, row.line, greekNames[i], got, want, e)
				}
				worst[i] = max(worst[i], e)
			}
		}
		t.Logf("%s: %d lines, largest errors %.1e", table.file, len(rows), worst)
	}
}

// units are what each result of a deal is measured by: the unit of its price,
// over the range of the spot for each derivative by it, and so on.
func (f *closedForm) units(d deal) [10]float64 {
	u, spread, byRate := f.unit(d), d.v*math.Sqrt(d.t), d.t
	if f.name != "bachelier" {
		byRate += d.t / spread // a rate moves the forward by so many standard deviations
		spread *= d.s
	}
	return [10]float64{u, u / spread, u / spread / spread, u / d.v, u / d.t, u * byRate, u * byRate, u / spread / d.v, u / d.v / d.v, u / spread / d.t}
}

// referenceRow is a line of a table: inputs by name, those that are no numbers
// apart, and results in order.
type referenceRow struct {
	line    int
	in      map[string]float64
	text    map[string]string
	results []float64
}

func readTable(t *testing.T, name string, results []string) (rows []referenceRow) {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "internal", "ref", "closed_forms", name+".csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	head := all[0]
	first := len(head) - len(results)
	if !slices.Equal(head[first:], results) {
		t.Fatalf("%s: columns %v, want %v", name, head[first:], results)
	}
	for n, cells := range all[1:] {
		row := referenceRow{line: n + 2, in: map[string]float64{}, text: map[string]string{}}
		for j, cell := range cells {
			x, err := strconv.ParseFloat(cell, 64)
			switch {
			case err == nil && j < first:
				row.in[head[j]] = x
			case err == nil:
				row.results = append(row.results, x)
			case j < first:
				row.text[head[j]] = cell
			default:
				t.Fatal(err)
			}
		}
		rows = append(rows, row)
	}
	return rows
}
