package samples

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/BurntSushi/toml"

	"nightbook/schema"
)

// The files that stand here are those that the generator makes: whoever edits
// one by hand, or changes the generator without running it, hears of it.
func TestCommittedFilesAreGenerated(t *testing.T) {
	for _, s := range committed() {
		known := map[string]bool{"README.md": true}
		for _, f := range s.files {
			known[f.name] = true
			got, err := content(filepath.Join(s.name, f.name))
			if err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(got, f.data) {
				t.Errorf("%s/%s is not what the generator makes: go generate ./samples", s.name, f.name)
			}
		}
		entries, err := os.ReadDir(s.name)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range entries {
			if !known[e.Name()] {
				t.Errorf("%s/%s comes from nowhere", s.name, e.Name())
			}
		}
	}
}

func TestRegenerate(t *testing.T) {
	dir := t.TempDir()
	for range 2 { // the second time over the first
		if err := Regenerate(dir); err != nil {
			t.Fatal(err)
		}
		for _, s := range committed() {
			for _, f := range s.files {
				got, err := content(filepath.Join(dir, s.name, f.name))
				if err != nil || !bytes.Equal(got, f.data) {
					t.Errorf("%s/%s: %v", s.name, f.name, err)
				}
			}
		}
	}
	// a compressed file whose content is right is left alone, byte for byte
	path := filepath.Join(dir, "harbour-fx-desk", "vols.csv.gz")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	data[9] ^= 1 // the operating system byte of the header: another writer's mark
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
	if err := Regenerate(dir); err != nil {
		t.Fatal(err)
	}
	if after, _ := os.ReadFile(path); !bytes.Equal(after, data) {
		t.Error("a compressed file with the right content was written anew")
	}
}

// rowsOf reads a generated text table under our own column names.
func rowsOf(t *testing.T, s snapshot, table string) []map[string]string {
	t.Helper()
	for _, f := range s.files {
		if strings.TrimSuffix(strings.TrimSuffix(f.name, ".gz"), ".csv") != table {
			continue
		}
		text := string(f.data)
		ours := map[string]string{}
		r := csv.NewReader(strings.NewReader(text))
		if s.name == "harbour-fx-desk" {
			var b strings.Builder
			for _, c := range f.data { // Windows-1252 below U+0100
				b.WriteRune(rune(c))
			}
			r = csv.NewReader(strings.NewReader(b.String()))
			r.Comma = ';'
			for our, house := range harbourHeaders[table] {
				ours[house] = our
			}
		}
		r.FieldsPerRecord = -1
		all, err := r.ReadAll()
		if err != nil {
			t.Fatalf("%s/%s: %v", s.name, f.name, err)
		}
		var rows []map[string]string
		for _, rec := range all[1:] {
			row := map[string]string{"cells": fmt.Sprint(len(rec) - len(all[0]))}
			for i, h := range all[0] {
				if our, ok := ours[h]; ok {
					h = our
				}
				row[h] = rec[i]
			}
			rows = append(rows, row)
		}
		return rows
	}
	t.Fatalf("%s has no %s", s.name, table)
	return nil
}

// The README of a snapshot names every broken row with its code, and the file
// holds as many lines as the README says.
func TestReadmeListsBrokenRows(t *testing.T) {
	for _, s := range committed() {
		readme, err := os.ReadFile(filepath.Join(s.name, "README.md"))
		if err != nil {
			t.Fatal(err)
		}
		listed := 0
		for _, line := range strings.Split(string(readme), "\n") {
			if strings.HasPrefix(line, "| positions |") {
				listed++
			}
		}
		if listed != len(s.broken) {
			t.Errorf("%s: README.md lists %d broken positions, the generator makes %d", s.name, listed, len(s.broken))
		}
		for _, b := range s.broken {
			if !bytes.Contains(readme, fmt.Appendf(nil, "| positions | %s | `%s` |", b.id, b.code)) {
				t.Errorf("%s: README.md does not list %s as %s", s.name, b.id, b.code)
			}
		}
		rows := rowsOf(t, s, "positions")
		if want := fmt.Sprintf("%d position lines", len(rows)); !bytes.Contains(readme, []byte(want)) {
			t.Errorf("%s: README.md does not say %q", s.name, want)
		}
		if len(rows) < 60 || len(rows) > 260 {
			t.Errorf("%s: %d lines", s.name, len(rows))
		}
		count := map[string]int{}
		for _, row := range rows {
			count[row["line_id"]]++
		}
		for _, b := range s.broken {
			if want := 1; count[b.id] != want && !(b.code == schema.DuplicateLineID && count[b.id] == 2) {
				t.Errorf("%s: line_id %s stands %d times", s.name, b.id, count[b.id])
			}
		}
	}
}

// Each fault is the only one in its line: with the fault mended, or without
// it, every line is one that the program prices.
func TestOnlyListedRowsAreBroken(t *testing.T) {
	for _, s := range committed() {
		broken := map[string]bool{}
		for _, b := range s.broken {
			broken[b.id] = true
		}
		under := map[string]map[string]string{}
		for _, u := range rowsOf(t, s, "underlyings") {
			under[u["underlying"]] = u
		}
		surface := map[string]bool{}
		for _, v := range rowsOf(t, s, "vols") {
			surface[v["underlying"]] = true
		}
		currencies := map[string]bool{}
		for _, c := range rowsOf(t, s, "fx") {
			currencies[c["currency"]] = true
		}
		seen := map[string]bool{}
		for _, p := range rowsOf(t, s, "positions") {
			id := p["line_id"]
			if broken[id] && id != "A0007" { // A0007 stands twice: the first is good
				continue
			}
			if seen[id] {
				if id != "A0007" {
					t.Errorf("%s: line_id %s twice", s.name, id)
				}
				continue
			}
			seen[id] = true
			fail := func(why string) { t.Errorf("%s %s: %s: %v", s.name, id, why, p) }
			number := func(column string) float64 {
				x, err := strconv.ParseFloat(strings.Replace(p[column], ",", ".", 1), 64)
				if err != nil {
					fail(column)
				}
				return x
			}
			if p["cells"] != "0" {
				fail("number of cells")
			}
			number("quantity")
			if p["instrument"] == "cash" {
				if !currencies[p["underlying"]] {
					fail("currency")
				}
				continue
			}
			u := under[p["underlying"]]
			if u == nil || !currencies[u["currency"]] {
				fail("underlying")
				continue
			}
			if c := p["currency"]; c != "" && c != u["currency"] {
				fail("currency")
			}
			if p["instrument"] == "stock" && u["kind"] != "equity" || p["instrument"] == "future" && u["kind"] != "future" {
				fail("instrument")
			}
			if p["instrument"] == "option" || p["instrument"] == "forward" {
				number("strike")
				day, _, _ := strings.Cut(strings.Replace(p["expiry"], " ", "T", 1), "T")
				_, err1 := time.Parse("2006-01-02", day)
				_, err2 := time.Parse("02/01/2006", day)
				if err1 != nil && err2 != nil {
					fail("expiry")
				}
			}
			if p["instrument"] == "option" && p["vol"] == "" && u["vol"] == "" && !surface[p["underlying"]] {
				fail("volatility")
			}
		}
	}
}

func TestCommittedSurfacesHoldNoArbitrage(t *testing.T) {
	for _, s := range committed() {
		asOf, layout, unit := day(2026, 6, 19), "2006-01-02", 1.0
		switch s.name {
		case "linden-share-desk":
			asOf = day(2026, 8, 13)
		case "harbour-fx-desk":
			asOf, layout, unit = day(2026, 10, 14), "02/01/2006 15:04", .01
		}
		type key struct{ underlying, expiry string }
		points := map[key][][2]float64{}
		var order []key
		number := func(c string) (float64, error) { return strconv.ParseFloat(strings.Replace(c, ",", ".", 1), 64) }
		for _, v := range rowsOf(t, s, "vols") {
			k := key{v["underlying"], v["expiry"]}
			strike, err1 := number(v["strike"])
			vol, err2 := number(v["vol"])
			if err1 != nil || err2 != nil {
				if v["vol"] != "n/a" {
					t.Errorf("%s: %v", s.name, v)
				}
				continue
			}
			if points[k] == nil {
				order = append(order, k)
			}
			points[k] = append(points[k], [2]float64{strike, vol * unit})
		}
		for i := 0; i < len(order); {
			var forward, times []float64
			var slices [][][2]float64
			name := order[i].underlying
			for ; i < len(order) && order[i].underlying == name; i++ {
				x, err := time.Parse(layout, order[i].expiry)
				if err != nil {
					t.Fatal(err)
				}
				p := points[order[i]]
				if len(p) != len(smileNodes) {
					t.Errorf("%s %v: %d points", s.name, order[i], len(p))
				}
				forward = append(forward, p[len(smileNodes)/2][0]) // the middle node is the forward
				times = append(times, x.Sub(asOf.Time()).Hours()/24/365)
				slices = append(slices, p)
			}
			checkSurface(t, s.name+" "+name, forward, times, slices)
		}
	}
}

func TestRunFilesParse(t *testing.T) {
	for _, s := range committed() {
		var run struct {
			AsOf              string `toml:"as_of"`
			ReportingCurrency string `toml:"reporting_currency"`
			Calendar          string
			CSV               struct {
				Delimiter, Encoding string
				DecimalComma        bool   `toml:"decimal_comma"`
				DateFormat          string `toml:"date_format"`
			}
			Vols     struct{ Unit string }
			Workbook struct {
				MaxLines int `toml:"max_lines"`
			}
			Parquet struct{ Compression string }
			Models  struct {
				American, Dividends string
				Tolerance           float64
			}
			Columns map[string]map[string]string
		}
		meta, err := toml.DecodeFile(filepath.Join(s.name, "run.toml"), &run)
		if err != nil {
			t.Fatal(err)
		}
		if u := meta.Undecoded(); len(u) > 0 {
			t.Errorf("%s: keys of run.toml that mean nothing: %v", s.name, u)
		}
		closed := false
		for _, h := range rowsOf(t, s, "holidays") {
			closed = closed || h["calendar"] == run.Calendar
		}
		if !closed {
			t.Errorf("%s: calendar %q has no holidays", s.name, run.Calendar)
		}
		for table, columns := range run.Columns {
			for ours := range columns {
				found := false
				for _, in := range schema.Inputs {
					found = found || in.Name == table && in.Column(ours) != nil
				}
				if !found {
					t.Errorf("%s: columns.%s.%s is no column", s.name, table, ours)
				}
			}
		}
	}
}
