package report

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
	"nightbook/writer/xlsx"
)

// run is an invented run: its lines, in one batch, and what they add up to.
type run struct {
	early   []schema.ExerciseRow
	dicts   *schema.Dicts
	batch   *schema.Batch
	summary *schema.Summary
}

func newRun(n int) *run {
	r := &run{dicts: schema.NewDicts()}
	r.batch = invent.Lines(0, n, r.dicts)
	r.summary = invent.Summary(r.batch, r.dicts)
	return r
}

// workbook writes the report of a run, its lines in frames of a size.
func (r *run) workbook(t testing.TB, size int) []byte {
	t.Helper()
	var buf bytes.Buffer
	report, err := New(&buf, r.summary.Config, schema.LinesTable(invent.Extra))
	if err != nil {
		t.Fatal(err)
	}
	defer report.Abort()
	for from := 0; from < r.batch.N; from += size {
		var f schema.Frame
		invent.Lines(from, min(size, r.batch.N-from), r.dicts).Frame(r.dicts, &f)
		if err := report.Lines(&f); err != nil {
			t.Fatal(err)
		}
	}
	if err := report.Exercise(schema.ExerciseFrame(r.batch, r.dicts, r.early)); err != nil {
		t.Fatal(err)
	}
	if err := report.Rejects(schema.RejectsFrame(invent.Rejects(4))); err != nil {
		t.Fatal(err)
	}
	if err := report.Finish(r.summary); err != nil {
		t.Fatal(err)
	}
	return buf.Bytes()
}

// sheet returns the cells of a sheet as they are stored.
func sheet(t testing.TB, f *excelize.File, name string) [][]string {
	t.Helper()
	rows, err := f.GetRows(name, excelize.Options{RawCellValue: true})
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

func reopen(t testing.TB, data []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f
}

// find returns the first row whose first cell is label, from a row on.
func find(t testing.TB, rows [][]string, from int, label string) int {
	t.Helper()
	for i := from; i < len(rows); i++ {
		if len(rows[i]) > 0 && rows[i][0] == label {
			return i
		}
	}
	t.Fatalf("no row %q", label)
	return 0
}

func wantNumber(t testing.TB, what, cell string, want float64) {
	t.Helper()
	if got, err := strconv.ParseFloat(cell, 64); err != nil || got != want {
		t.Errorf("%s is %q, want %v", what, cell, want)
	}
}

func TestSheets(t *testing.T) {
	f := reopen(t, newRun(200).workbook(t, 64))
	want := []string{"Summary", "Books", "Underlyings", "Lines", "Exercise", "Rejects", "Warnings", "Controls", "Columns"}
	if got := f.GetSheetList(); !slices.Equal(got, want) {
		t.Errorf("sheets %q, want %q", got, want)
	}
	for _, name := range want {
		rows := sheet(t, f, name)
		if len(rows) < 5 {
			t.Errorf("sheet %s has %d rows", name, len(rows))
		}
		for i, row := range rows {
			for k := range row {
				cell := xlsx.Ref(k+1, i+1)
				if formula, err := f.GetCellFormula(name, cell); formula != "" || err != nil {
					t.Errorf("%s!%s is the formula %q (%v)", name, cell, formula, err)
				}
			}
		}
	}
}

func TestLinesSheet(t *testing.T) {
	const n = 500
	r := newRun(n)
	var want schema.Frame
	r.batch.Frame(r.dicts, &want)
	table := schema.LinesTable(invent.Extra)
	for _, c := range []struct {
		limit, shown int
		note         string
	}{
		{n, n, "all 500 lines"},
		{n - 1, n - 1, "first 499 of 500 lines; all are in lines.parquet and lines.csv"},
		{65, 65, "first 65 of 500 lines; all are in lines.parquet and lines.csv"},
		{0, 0, "first 0 of 500 lines; all are in lines.parquet and lines.csv"},
		{-1, 0, "first 0 of 500 lines; the others are in no file: run with --formats parquet or csv"},
	} {
		r.summary.Config.Workbook.MaxLines = c.limit
		r.summary.LinesFiles = []string{"lines.parquet", "lines.csv"}
		if c.limit < 0 {
			r.summary.LinesFiles = nil
		}
		f := reopen(t, r.workbook(t, 64))
		rows := sheet(t, f, "Lines")
		if rows[1][0] != c.note {
			t.Errorf("limit %d: the note is %q", c.limit, rows[1][0])
		}
		if len(rows) != tableHead+c.shown {
			t.Fatalf("limit %d: %d rows", c.limit, len(rows))
		}
		summary := sheet(t, f, "Summary")
		if at := find(t, summary, 0, "Lines sheet"); summary[at][1] != c.note {
			t.Errorf("limit %d: the summary says %q of the lines", c.limit, summary[at][1])
		}
		for k, col := range table.Columns {
			if rows[tableHead-1][k] != col.Name {
				t.Errorf("header %d is %q", k, rows[tableHead-1][k])
			}
			for i := range c.shown {
				got := ""
				if row := rows[tableHead+i]; k < len(row) {
					got = row[k]
				}
				v := &want.Cols[k]
				switch v.Kind {
				case schema.KindFloats:
					if x := v.Floats[i]; x == x {
						wantNumber(t, col.Name, got, x)
					} else if got != "" {
						t.Errorf("%s of line %d: null is %q", col.Name, i, got)
					}
				case schema.KindStrings, schema.KindCodes, schema.KindChoices:
					if got != v.Text(i) {
						t.Errorf("%s of line %d is %q, want %q", col.Name, i, got, v.Text(i))
					}
				}
			}
		}
	}
}

func TestSummarySheet(t *testing.T) {
	r := newRun(300)
	s := r.summary
	rows := sheet(t, reopen(t, r.workbook(t, 300)), "Summary")
	if rows[0][0] != "Risk of 2026-01-30" || rows[1][0] != "reporting currency USD · nightbook 1.2.3" || rows[2][0] != schema.Caution {
		t.Errorf("the top is %q", rows[:3])
	}
	for label, n := range map[string]int64{"Rows in": 303, "Priced": 300, "Expired": 0, "Rejected": 3, "Market rows rejected": 1} {
		wantNumber(t, label, rows[find(t, rows, 0, label)][1], float64(n))
	}
	if row := rows[find(t, rows, 0, "Rows in = priced + expired + rejected")]; row[1] != "pass" {
		t.Errorf("row control: %q", row)
	}
	if row := rows[find(t, rows, 0, "Controls")]; row[1] != "all 40 controls pass" {
		t.Errorf("controls: %q", row)
	}
	books := find(t, rows, 0, "Book")
	if rows[books+1][0] != "House" || rows[books+1][1] != "=2+5" || rows[books+2][0] != "Total" {
		t.Errorf("books: %q", rows[books+1:books+3])
	}
	for m, x := range s.Total.Measures {
		wantNumber(t, "total "+schema.MeasureNames[m], rows[books+2][3+m], x)
	}
	under := find(t, rows, 0, "Underlying")
	last := math.Inf(1)
	for _, row := range rows[under+1 : under+1+topUnderlyings] {
		u := s.Underlyings[slices.IndexFunc(s.Underlyings, func(u schema.UnderlyingTotal) bool { return u.Underlying == row[0] })]
		delta := math.Abs(u.Measures[schema.DeltaCash])
		if delta > last {
			t.Errorf("%s stands below one with less delta cash", u.Underlying)
		}
		last = delta
		wantNumber(t, u.Underlying, row[3+schema.DeltaCash], u.Measures[schema.DeltaCash])
	}
	for _, u := range s.Underlyings {
		if x := math.Abs(u.Measures[schema.DeltaCash]); x > last && !slices.ContainsFunc(rows[under+1:under+1+topUnderlyings], func(r []string) bool { return r[0] == u.Underlying }) {
			t.Errorf("%s is missing among the largest", u.Underlying)
		}
	}
	if find(t, rows, under, "2 warnings: see Warnings") == 0 {
		t.Error("no count of warnings")
	}
}

func TestBooksSheet(t *testing.T) {
	r := newRun(300)
	f := reopen(t, r.workbook(t, 300))
	rows := sheet(t, f, "Books")
	for i, b := range r.summary.Books {
		row := rows[tableHead+i]
		if row[0] != b.Book || row[1] != b.Owner {
			t.Errorf("row %d is %q, want %s", i, row[:2], b.Book)
		}
		wantNumber(t, "lines", row[2], float64(b.Lines))
		wantNumber(t, "own lines", row[3], float64(b.Own.Lines))
		for m, x := range b.Measures {
			wantNumber(t, b.Book, row[5+m], x)
		}
		id, err := f.GetCellStyle("Books", xlsx.Ref(1, tableHead+1+i))
		if err != nil {
			t.Fatal(err)
		}
		style, err := f.GetStyle(id)
		if err != nil {
			t.Fatal(err)
		}
		if style.Alignment.Indent != 2*b.Level {
			t.Errorf("%s of level %d is indented by %d", b.Book, b.Level, style.Alignment.Indent)
		}
		if level, err := f.GetRowOutlineLevel("Books", tableHead+1+i); int(level) != b.Level || err != nil {
			t.Errorf("%s has the outline level %d (%v)", b.Book, level, err)
		}
	}
	total := rows[find(t, rows, tableHead, "Total")]
	wantNumber(t, "total lines", total[2], 300)
	wantNumber(t, "own lines in total", total[3], 300)
}

func TestOtherSheets(t *testing.T) {
	r := newRun(100)
	f := reopen(t, r.workbook(t, 100))
	rejects := sheet(t, f, "Rejects")
	if len(rejects) != tableHead+4 || rejects[tableHead][5] != "=1+1" || rejects[tableHead][7] != `T0,"book, quoted",=1+1` {
		t.Errorf("rejects: %q", rejects[tableHead:])
	}
	if want := "3 rows of the position file, as they came: they are in no total; 1 row of market data"; rejects[1][0] != want {
		t.Errorf("rejects: %q", rejects[1][0])
	}
	warnings := sheet(t, f, "Warnings")
	if len(warnings) != tableHead+2 || warnings[tableHead+1][1] != "=cmd|x" {
		t.Errorf("warnings: %q", warnings[tableHead:])
	}
	under := sheet(t, f, "Underlyings")
	if len(under) != tableHead+len(r.summary.Underlyings) {
		t.Errorf("%d rows of underlyings", len(under))
	}
	controls := sheet(t, f, "Controls")
	file := controls[find(t, controls, 0, "positions.csv")]
	if file[1] != "positions" || file[2] != "103" || file[3] != "12345" || file[4] != strings.Repeat("0a", 32) {
		t.Errorf("input file: %q", file)
	}
	totals := find(t, controls, 0, "Control totals")
	wantNumber(t, "Σ quantity", controls[find(t, controls, totals, "quantity")][2], r.summary.Total.Quantity)
	wantNumber(t, "Σ value", controls[find(t, controls, totals, "value_base")][2], r.summary.Total.Measures[schema.Value])
	wantNumber(t, "refused rows", controls[find(t, controls, totals, "bad_number")][2], 2)
	columns := sheet(t, f, "Columns")
	n := len(schema.RejectCodes) + len(schema.NoteCodes) + len(schema.ExerciseReasonDocs)
	for _, table := range schema.Outputs {
		n += len(table.Columns)
	}
	if len(columns) != tableHead+n {
		t.Errorf("%d rows of columns, want %d", len(columns), tableHead+n)
	}
}

// A control that can only pass is none: each must fail when its figure is off.
func TestControlsFail(t *testing.T) {
	base := newRun(100)
	count := len(controls(base.summary))
	for name, spoil := range map[string]func(*schema.Summary){
		"rows in = priced + expired + rejected": func(s *schema.Summary) { s.RowsIn++ },
		"lines of top-level books":              func(s *schema.Summary) { s.Books[0].Lines++ },
		"lines of all books' own lines":         func(s *schema.Summary) { s.Books[2].Own.Lines-- },
		"lines of underlyings":                  func(s *schema.Summary) { s.Underlyings[3].Lines++ },
		"lines of currencies":                   func(s *schema.Summary) { s.Currencies[0].Lines++ },
		"quantity of underlyings":               func(s *schema.Summary) { s.Underlyings[0].Quantity += 1 },
		"value_base of top-level books":         func(s *schema.Summary) { s.Books[0].Measures[schema.Value] *= 1 + 1e-9 },
		"rho_cash_1bp_base of currencies":       func(s *schema.Summary) { s.Currencies[1].Measures[schema.RhoCash1BP] += 0.01 },
		"delta_cash_base of all books' own lines": func(s *schema.Summary) {
			s.Books = s.Books[:len(s.Books)-1]
		},
		"largest pde_residual":                      func(s *schema.Summary) { s.MaxResidual = 1e-3 },
		"largest pde_residual of boundary_integral": func(s *schema.Summary) { s.MaxIntegralResidual = 1e-2 },
		"largest price_error, share of spot":        func(s *schema.Summary) { s.MaxPriceError = 1e-4 },
	} {
		r := newRun(100)
		spoil(r.summary)
		var failed []string
		for _, c := range controls(r.summary) {
			if !c.passes() {
				failed = append(failed, c.name)
			}
		}
		if !slices.Contains(failed, name) {
			t.Errorf("%s passes though its figure is off; what fails: %q", name, failed)
		}
		f := reopen(t, r.workbook(t, 100))
		rows := sheet(t, f, "Controls")
		if want := fmt.Sprintf("%d of %d controls FAIL", len(failed), count); rows[1][0] != want {
			t.Errorf("%s: the sheet says %q, want %q", name, rows[1][0], want)
		}
		if row := rows[find(t, rows, 2, name)]; row[1] != "FAIL" {
			t.Errorf("%s: the sheet says %q", name, row)
		}
		summary := sheet(t, f, "Summary")
		if row := summary[find(t, summary, 0, "Controls")]; !strings.HasSuffix(row[1], "FAIL") {
			t.Errorf("%s: the summary says %q", name, row)
		}
	}
}

func TestNothingPriced(t *testing.T) {
	r := newRun(0)
	r.summary.MaxResidual = math.NaN()
	rows := sheet(t, reopen(t, r.workbook(t, 1)), "Controls")
	if row := rows[find(t, rows, 0, "largest pde_residual")]; row[1] != "nothing to check" {
		t.Errorf("residual without options: %q", row)
	}
}

func TestExerciseSheet(t *testing.T) {
	r := newRun(100)
	note := func() string { return sheet(t, reopen(t, r.workbook(t, 100)), "Exercise")[1][0] }
	if want := "no American option is past its exercise boundary, and no call has less time value than its next dividend"; note() != want {
		t.Errorf("note %q", note())
	}
	b := r.batch
	b.OptionType[3], b.Strike[3], b.Spot[3], b.Price[3], b.Boundary[3], b.Expiry[3] = schema.Put, 100, 80, 20.5, 75, 20000
	r.early = []schema.ExerciseRow{{Index: 3, Reason: schema.BeforeDividend, ExDate: 19990, Dividend: 0.75}}
	f := reopen(t, r.workbook(t, 100))
	rows := sheet(t, f, "Exercise")
	row := rows[tableHead]
	if width, err := f.GetColWidth("Exercise", "I"); err != nil || width <= float64(len(row[8])) {
		t.Errorf("the reason %q stands in a column %v wide, %v", row[8], width, err)
	}
	if len(rows) != tableHead+1 || row[0] != b.LineID.At(3) || row[4] != "put" || row[8] != "before_dividend" || row[14] == "" {
		t.Errorf("row %q", row)
	}
	for column, want := range map[int]float64{5: 100, 9: 80, 10: 20.5, 11: 20, 12: 0.5, 13: 75, 15: 0.75} {
		wantNumber(t, schema.ExerciseOut.Columns[column].Name, row[column], want)
	}
	summary := sheet(t, reopen(t, r.workbook(t, 100)), "Summary")
	wantNumber(t, "early exercise in the summary", summary[find(t, summary, 0, "Early exercise")][1], 1)
	if want := "1 American option to exercise or to look at before an ex-date; of those sold, the holder decides"; rows[1][0] != want {
		t.Errorf("note %q", rows[1][0])
	}
}

// The workbook depends on what is in it alone.
func TestBytes(t *testing.T) {
	want := newRun(700).workbook(t, 700)
	for _, size := range []int{700, 64, 699} {
		if got := newRun(700).workbook(t, size); !bytes.Equal(got, want) {
			t.Errorf("frames of %d rows: other bytes", size)
		}
	}
}

func TestRefusedNumbers(t *testing.T) {
	r := newRun(10)
	r.summary.Books[0].Measures[schema.Value] = math.Inf(1)
	report, err := New(io.Discard, r.summary.Config, schema.LinesTable(nil))
	if err != nil {
		t.Fatal(err)
	}
	if err := report.Finish(r.summary); err == nil || !strings.Contains(err.Error(), "sheet Summary") || !strings.Contains(err.Error(), "not a finite number") {
		t.Errorf("error %v", err)
	}
}

func TestTooManyColumns(t *testing.T) {
	r := newRun(3)
	extra := make([]string, xlsx.MaxColumns)
	for i := range extra {
		extra[i] = fmt.Sprintf("house_%d", i)
	}
	table := schema.Lines
	for _, name := range extra {
		table.Columns = append(table.Columns, schema.Column{Name: name, Type: schema.Text})
	}
	var buf bytes.Buffer
	report, err := New(&buf, r.summary.Config, table)
	if err != nil {
		t.Fatal(err)
	}
	r.batch.Extra = make([]schema.Strings, len(extra))
	for i := range r.batch.Extra {
		for range r.batch.N {
			r.batch.Extra[i].AppendString("x")
		}
	}
	var f schema.Frame
	r.batch.Frame(r.dicts, &f)
	if err := report.Lines(&f); err != nil {
		t.Fatal(err)
	}
	if err := report.Finish(r.summary); err != nil {
		t.Fatal(err)
	}
	rows := sheet(t, reopen(t, buf.Bytes()), "Lines")
	want := fmt.Sprintf("all 3 lines; first 16,384 of %s", count(int64(len(table.Columns)), "column"))
	if rows[1][0] != want || len(rows[tableHead]) != xlsx.MaxColumns {
		t.Errorf("the note is %q, and there are %d columns", rows[1][0], len(rows[tableHead]))
	}
}

func TestAbort(t *testing.T) {
	t.Setenv("TMPDIR", t.TempDir())
	r := newRun(100)
	report, err := New(&failing{}, r.summary.Config, schema.LinesTable(invent.Extra))
	if err != nil {
		t.Fatal(err)
	}
	var f schema.Frame
	r.batch.Frame(r.dicts, &f)
	if err := report.Lines(&f); err != nil {
		t.Fatal(err)
	}
	report.Abort()
	report.Abort()
	if left, err := os.ReadDir(os.TempDir()); err != nil || len(left) > 0 {
		t.Errorf("left behind: %v (%v)", left, err)
	}

	report, err = New(&failing{}, r.summary.Config, schema.LinesTable(invent.Extra))
	if err != nil {
		t.Fatal(err)
	}
	if err := report.Finish(r.summary); !errors.Is(err, errFull) {
		t.Errorf("a failing output: %v", err)
	}
}

var errFull = errors.New("disk full")

type failing struct{}

func (*failing) Write([]byte) (int, error) { return 0, errFull }

func TestCount(t *testing.T) {
	for n, want := range map[int64]string{0: "0 lines", 1: "1 line", 999: "999 lines", 1000: "1,000 lines", 1234567: "1,234,567 lines", -1234: "-1,234 lines"} {
		if got := count(n, "line"); got != want {
			t.Errorf("%d is %q", n, got)
		}
	}
}
