package model

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
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
	{"bachelier", func(map[string]string) string { return "bachelier" }, 120, 1e-13},
	{"digital", func(text map[string]string) string { return text["kind"] + " digital" + onFuture[text["on"]] }, 160, 1e-13},
}

var onFuture = map[string]string{"spot": "", "future": " on a future"}

// The tables are computed at 50 digits from integrals over densities, and
// differences of them. The error of a result is measured by the result itself,
// or by a millionth of its unit where the result is smaller than that.
func TestClosedReference(t *testing.T) {
	for _, table := range referenceTables {
		head, rows := readTable(t, table.file)
		if len(rows) < table.lines {
			t.Errorf("%s: %d lines, not %d", table.file, len(rows), table.lines)
		}
		first := len(head) - 10
		var worst [10]float64
		g := newGreeks(1)
		for n, row := range rows {
			d, text := deal{}, map[string]string{}
			for j, cell := range row[:first] {
				x, err := strconv.ParseFloat(cell, 64)
				if err != nil {
					text[head[j]] = cell
				} else if !d.set(head[j], x) {
					t.Fatalf("%s: unknown column %s", table.file, head[j])
				}
			}
			f := closedFormNamed(t, table.model(text))
			f.greeks(g, d)
			for i, unit := range f.units(d) {
				want, err := strconv.ParseFloat(row[first+i], 64)
				if err != nil {
					t.Fatal(err)
				}
				got := (*g.Slices()[i])[0]
				if got == want {
					continue
				}
				e := math.Abs(got-want) / max(math.Abs(want), 1e-6*unit)
				if !(e <= table.limit) {
					t.Errorf("%s line %d: %s = %v, not %v (error %.2g)", table.file, n+2, greekNames[i], got, want, e)
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

func readTable(t *testing.T, name string) (head []string, rows [][]string) {
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
	head = all[0]
	for i, n := range greekNames[:10] {
		if h := head[len(head)-10+i]; h != n {
			t.Fatalf("%s: column %q where %q belongs", name, h, n)
		}
	}
	return head, all[1:]
}
