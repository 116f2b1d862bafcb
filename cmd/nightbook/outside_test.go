package main

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"nightbook/schema"
)

// The checks of this file ask programs from outside the project: a database
// engine, a database server, an office suite. On a bare machine they are
// skipped; with NIGHTBOOK_OUTSIDE=required a missing program is a failure.

func outside(t *testing.T, have bool, what string) {
	t.Helper()
	switch {
	case have:
	case os.Getenv("NIGHTBOOK_OUTSIDE") == "required":
		t.Fatalf("%s is missing, and NIGHTBOOK_OUTSIDE=required", what)
	default:
		t.Skipf("%s is not on this machine", what)
	}
}

func onPath(program string) bool {
	_, err := exec.LookPath(program)
	return err == nil
}

func command(t *testing.T, name string, args ...string) string {
	t.Helper()
	var out, errs bytes.Buffer
	cmd := exec.Command(name, args...)
	cmd.Stdout, cmd.Stderr = &out, &errs
	if err := cmd.Run(); err != nil {
		t.Fatalf("%s %s: %v\n%s%s", name, strings.Join(args, " "), err, &out, &errs)
	}
	return out.String()
}

// sampleRun runs a snapshot into a new folder, all formats, and returns it.
func sampleRun(t *testing.T, snapshot string, args ...string) string {
	t.Helper()
	out := t.TempDir()
	var errs bytes.Buffer
	status := run(context.Background(), append([]string{"nightbook", "run", snapshot, "--out", out, "--formats", "xlsx,parquet,csv"}, args...), &errs, &errs)
	if status != exitDone && status != exitRejected {
		t.Fatalf("run %s: status %d\n%s", snapshot, status, &errs)
	}
	days, err := filepath.Glob(filepath.Join(out, "*"))
	if err != nil || len(days) != 1 {
		t.Fatalf("results: %v, %v", days, err)
	}
	return days[0]
}

// sampleFolders are the committed snapshots.
func sampleFolders(t *testing.T) []string {
	t.Helper()
	found, err := filepath.Glob("../../samples/*/positions.*")
	if err != nil || len(found) < 2 {
		t.Fatalf("samples: %v, %v", found, err)
	}
	for i, f := range found {
		found[i] = filepath.Dir(f)
	}
	return found
}

func readCSV(t *testing.T, path string) (header []string, rows []map[string]string) {
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
	for _, r := range all[1:] {
		row := map[string]string{}
		for i, name := range all[0] {
			row[name] = r[i]
		}
		rows = append(rows, row)
	}
	return all[0], rows
}

func demoSnapshot(t *testing.T, lines int) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "demo")
	var errs bytes.Buffer
	if status := run(context.Background(), []string{"nightbook", "demo", dir, "--lines", strconv.Itoa(lines), "--seed", "7"}, &errs, &errs); status != 0 {
		t.Fatalf("demo: status %d\n%s", status, &errs)
	}
	return dir
}

// TestDuckDB loads every table with an independent engine: Parquet and CSV must
// be equal to the bit, and the sums those of the manifest.
func TestDuckDB(t *testing.T) {
	outside(t, onPath("node"), "node")
	outside(t, exec.Command("node", "-e", "require('@duckdb/node-api')").Run() == nil, "DuckDB for node (npm package @duckdb/node-api on NODE_PATH)")
	snapshots := append(sampleFolders(t), demoSnapshot(t, 300_000))
	for _, snapshot := range snapshots {
		dir := sampleRun(t, snapshot)
		type table struct {
			Rows, Differing int
			Columns         []string
		}
		var got struct {
			Lines, Books, Underlyings, Currencies table
			Sums                                  struct{ V, Q string }
			Pruned                                struct{ A, B, C, D, E, F int }
			Metadata                              map[string]string
		}
		if err := json.Unmarshal([]byte(command(t, "node", "testdata/outside/duckdb.cjs", dir)), &got); err != nil {
			t.Fatal(err)
		}
		m := readManifest(t, dir)
		for name, tab := range map[string]table{"lines": got.Lines, "books": got.Books, "underlyings": got.Underlyings, "currencies": got.Currencies} {
			if tab.Rows == 0 || tab.Differing != 0 {
				t.Errorf("%s: %s has %d rows, %d differ between Parquet and CSV", snapshot, name, tab.Rows, tab.Differing)
			}
			if rows := m.rows(name + ".parquet"); rows != int64(tab.Rows) {
				t.Errorf("%s: %s has %d rows, the manifest says %d", snapshot, name, tab.Rows, rows)
			}
		}
		if p := got.Pruned; p.A != p.B || p.C != p.D || p.E != p.F {
			t.Errorf("%s: filters with statistics and without disagree: %+v", snapshot, p)
		}
		near(t, snapshot+": Σ value_base", got.Sums.V, m.ControlTotals.ValueBase)
		near(t, snapshot+": Σ quantity", got.Sums.Q, m.ControlTotals.Quantity)
		if got.Metadata["nightbook.version"] != version {
			t.Errorf("metadata %v", got.Metadata)
		}
	}
}

func near(t *testing.T, what, got string, want float64) {
	t.Helper()
	x, err := strconv.ParseFloat(strings.TrimSpace(got), 64)
	if err != nil || math.Abs(x-want) > 1e-9*max(1, math.Abs(want)) {
		t.Errorf("%s = %q, want %v (%v)", what, got, want, err)
	}
}

// manifestFacts is what these tests read of a manifest.
type manifestFacts struct {
	Outputs []struct {
		Name string
		Rows int64
	}
	ControlTotals struct {
		Quantity  float64 `json:"quantity"`
		ValueBase float64 `json:"value_base"`
	} `json:"control_totals"`
}

func (m *manifestFacts) rows(name string) int64 {
	for _, o := range m.Outputs {
		if o.Name == name {
			return o.Rows
		}
	}
	return -1
}

func readManifest(t *testing.T, dir string) *manifestFacts {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(dir, "manifest.json"))
	if err != nil {
		t.Fatal(err)
	}
	m := new(manifestFacts)
	if err := json.Unmarshal(data, m); err != nil {
		t.Fatal(err)
	}
	return m
}

// TestPostgreSQL creates the tables from the printed DDL and loads them from
// CSV. The server is whatever the PG* variables name.
func TestPostgreSQL(t *testing.T) {
	outside(t, onPath("psql") && exec.Command("psql", "-c", "select 1").Run() == nil, "a PostgreSQL server that psql reaches")
	for _, snapshot := range sampleFolders(t) {
		dir := sampleRun(t, snapshot)
		var ddl, errs bytes.Buffer
		if status := run(context.Background(), []string{"nightbook", "columns", "--format", "sql"}, &ddl, &errs); status != 0 {
			t.Fatalf("columns: status %d\n%s", status, &errs)
		}
		schemaName := "nightbook_check"
		script := filepath.Join(t.TempDir(), "load.sql")
		var s strings.Builder
		s.WriteString("\\set ON_ERROR_STOP on\n\\set QUIET on\nset client_min_messages to warning;\ndrop schema if exists " + schemaName + " cascade; create schema " + schemaName + "; set search_path to " + schemaName + ";\n")
		s.WriteString(ddl.String() + "\n")
		counts := map[string]int{}
		for _, table := range []string{"lines", "books", "underlyings", "currencies", "rejects", "warnings"} {
			header, rows := readCSV(t, filepath.Join(dir, table+".csv"))
			counts[table] = len(rows)
			if table == "lines" { // the house's own columns, behind ours, are not in the DDL
				for _, h := range header[len(schema.Lines.Columns):] {
					s.WriteString("alter table lines add column \"" + h + "\" text;\n")
				}
			}
			var quoted []string
			for _, h := range header {
				quoted = append(quoted, `"`+h+`"`)
			}
			s.WriteString("\\copy " + table + " (" + strings.Join(quoted, ", ") + ") from '" + filepath.Join(dir, table+".csv") + "' with (format csv, header true)\n")
		}
		s.WriteString("\\pset format unaligned\n\\pset tuples_only on\n")
		for _, table := range []string{"lines", "books", "underlyings", "currencies", "rejects", "warnings"} {
			s.WriteString("select '" + table + "', count(*) from " + table + ";\n")
		}
		s.WriteString("select 'value', sum(value_base) from lines;\ndrop schema " + schemaName + " cascade;\n")
		if err := os.WriteFile(script, []byte(s.String()), 0o644); err != nil {
			t.Fatal(err)
		}
		got := command(t, "psql", "-X", "-f", script)
		for _, l := range strings.Split(strings.TrimSpace(got), "\n") {
			name, value, _ := strings.Cut(l, "|")
			if name == "value" {
				near(t, snapshot+": sum(value_base)", value, readManifest(t, dir).ControlTotals.ValueBase)
			} else if value != strconv.Itoa(counts[name]) {
				t.Errorf("%s: %s has %s rows in the server, %d in the file", snapshot, name, value, counts[name])
			}
		}
		if !strings.Contains(got, "value|") {
			t.Errorf("psql printed %q", got)
		}
	}
}

// TestLibreOffice opens the workbook with another office suite and compares
// what it shows on the Lines sheet with lines.csv.
func TestLibreOffice(t *testing.T) {
	outside(t, onPath("soffice"), "LibreOffice (soffice)")
	for _, snapshot := range sampleFolders(t) {
		dir, work := sampleRun(t, snapshot), t.TempDir()
		// separator ',', quote '"', UTF-8, from line 1, cells as stored rather than as shown, every sheet
		command(t, "soffice", "-env:UserInstallation=file://"+filepath.Join(work, "profile"), "--headless", "--convert-to",
			"csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,false,false,false,false,-1", "--outdir", work, filepath.Join(dir, "report.xlsx"))
		for _, sheet := range []string{"Summary", "Books", "Underlyings", "Exercise", "Lines", "Rejects", "Warnings", "Controls", "Columns"} {
			data, err := os.ReadFile(filepath.Join(work, "report-"+sheet+".csv"))
			if err != nil || len(data) < 20 {
				t.Errorf("%s: sheet %s: %d bytes, %v", snapshot, sheet, len(data), err)
			}
			for _, bad := range []string{"#NAME?", "#REF!", "#VALUE!", "#DIV/0!", "Err:5"} {
				if bytes.Contains(data, []byte(bad)) {
					t.Errorf("%s: sheet %s shows %s", snapshot, sheet, bad)
				}
			}
		}
		compareLinesSheet(t, filepath.Join(work, "report-Lines.csv"), filepath.Join(dir, "lines.csv"))
	}
}

// compareLinesSheet compares numbers by value and texts by letter.
func compareLinesSheet(t *testing.T, sheet, table string) {
	t.Helper()
	header, want := readCSV(t, table)
	data, err := os.ReadFile(sheet)
	if err != nil {
		t.Fatal(err)
	}
	r := csv.NewReader(bytes.NewReader(data))
	r.FieldsPerRecord = -1
	all, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	at := -1 // the header row: its first cell is the first column's name
	for i, row := range all {
		if len(row) >= len(header) && row[0] == header[0] && row[1] == header[1] {
			at = i
			break
		}
	}
	if at < 0 || len(all) < at+1+len(want) {
		t.Fatalf("%s: no header, or %d rows for %d lines", sheet, len(all), len(want))
	}
	for i, w := range want {
		for k, name := range header {
			got, text := all[at+1+i][k], w[name]
			x, errX := strconv.ParseFloat(got, 64)
			y, errY := strconv.ParseFloat(text, 64)
			if errX == nil && errY == nil {
				if math.Abs(x-y) > 1e-13*math.Abs(y)+1e-17 { // it prints small numbers with a fixed count of decimals
					t.Fatalf("%s: line %d, %s: the workbook shows %q, the table %q", sheet, i, name, got, text)
				}
			} else if schema.Lines.Column(name) != nil && schema.Lines.Column(name).Type == schema.Bool {
				if !strings.EqualFold(got, text) { // it shows TRUE and FALSE
					t.Fatalf("%s: line %d, %s: the workbook shows %q, the table %q", sheet, i, name, got, text)
				}
			} else if got != text && strings.TrimPrefix(text, "'") != got {
				t.Fatalf("%s: line %d, %s: the workbook shows %q, the table %q", sheet, i, name, got, text)
			}
		}
	}
}
