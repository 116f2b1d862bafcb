package main

import (
	"math"
	"path/filepath"
	"strconv"
	"testing"

	"nightbook/schema"
)

// TestSamplesAgainstReference compares the lines of the sample runs with those
// of a second program, written from the conventions alone, that prices them at
// 50 digits and differentiates numerically: risk/internal/ref/snapshot.
func TestSamplesAgainstReference(t *testing.T) {
	for _, snapshot := range sampleFolders(t) {
		name := filepath.Base(snapshot)
		dir := sampleRun(t, snapshot)
		_, lines := readCSV(t, filepath.Join(dir, "lines.csv"))
		got := map[string]map[string]string{}
		for _, l := range lines {
			got[l["line_id"]] = l
		}
		_, rejects := readCSV(t, filepath.Join(dir, "rejects.csv"))
		positions := 0
		for _, r := range rejects {
			if r["file"] == "positions.csv" {
				positions++
			}
		}
		header, want := readCSV(t, filepath.Join("../../risk/internal/ref/snapshot", name+".csv"))
		refused, compared := 0, 0
		for _, w := range want {
			if w["status"] == "rejected" {
				refused++
				continue
			}
			g := got[w["line_id"]]
			if g == nil {
				t.Errorf("%s: line %s is missing", name, w["line_id"])
				continue
			}
			for _, column := range header {
				if column == "code" {
					continue
				}
				if c := schema.Lines.Column(column); c == nil || c.Type != schema.Float && c.Type != schema.Int {
					if g[column] != w[column] {
						t.Errorf("%s: line %s, %s = %q, reference %q", name, w["line_id"], column, g[column], w[column])
					}
					continue
				}
				if w[column] == "" {
					if g[column] != "" && w["status"] != "expired" { // the reference leaves forward and time of an expired line empty
						t.Errorf("%s: line %s, %s = %s, reference has none", name, w["line_id"], column, g[column])
					}
					continue
				}
				if column == "pde_residual" { // the reference's is that of 50 digits
					if x := number(t, g[column]); x > 1e-10 {
						t.Errorf("%s: line %s, pde_residual %v", name, w["line_id"], x)
					}
					continue
				}
				compared++
				x, y := number(t, g[column]), number(t, w[column])
				if math.Abs(x-y) > 1e-12*math.Abs(y)+2e-14*scale(t, column, w) {
					t.Errorf("%s: line %s, %s = %v, reference %v", name, w["line_id"], column, x, y)
				}
			}
		}
		if refused != positions || len(want) != len(lines)+refused || compared < 1000 {
			t.Errorf("%s: %d lines and %d refused rows, reference %d and %d; %d numbers compared", name, len(lines), positions, len(want)-refused, refused, compared)
		}
	}
}

// scale is the size of the terms whose difference a column is: what rounding
// errors of a near cancellation are measured by.
func scale(t *testing.T, column string, w map[string]string) float64 {
	value := func(name string) float64 {
		if w[name] == "" {
			return 0
		}
		return math.Abs(number(t, w[name]))
	}
	level := max(value("spot"), value("strike"))
	size := value("quantity") * value("multiplier")
	switch column {
	case "price", "forward":
		return level
	case "theta":
		return level * max(value("rate"), value("carry"), 1)
	case "rho", "carry_rho":
		return level * value("time")
	case "value", "theta_cash_1d", "theta_cash_1bd":
		return level * size
	case "value_base", "theta_cash_1d_base", "theta_cash_1bd_base":
		return level * size * value("fx_rate")
	case "rate":
		return 1
	}
	return 0
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}
