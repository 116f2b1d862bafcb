package reader

import (
	"fmt"
	"maps"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
	"weak"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
	"nightbook/schema"
)

// faultyDesk is desk with cells that are at fault, or written in other ways, each
// on several rows, as a table of cells.
func faultyDesk(n int, seed uint64) (header []string, rows [][]string) {
	header, rows = cellsOf(desk(n, seed))
	rng := rand.New(rand.NewPCG(seed, 2))
	odd := map[string][]string{
		"book": {"  Book 7\t", "Bo\x01ok", "B\xff", strings.Repeat("long", 80), "\ufeffBook", "Bücher", "North", ""}, "underlying": {"", "al\x7fba", " ALBA"},
		"instrument": {"OPTION", "Stock ", "optoin", ""}, "quantity": {"1e3", "", "1 000", " 5 ", "NaN", "1e999"}, "multiplier": {"", "0", "-1", "ten"},
		"currency": {"usd", "Usd ", "dollars", "U D", ""}, "option_type": {"CALL", "straddle", ""}, "exercise": {"American", "bermudan"},
		"payoff": {"VANILLA", "lookback"}, "strike": {"1e-3", "", "x"}, "expiry": {"2027-02-30", "", "2027-03-01", "2027-03-01 09:30:15", "soon", "2027-03-01T09:30Z"},
		"vol": {"-0.1", "", "0"}, "mark": {"", "?"}, "entry_price": {"12.5", "Infinity"}, "strategy": {"a\nb", "", "é"}, "trader": {"In\xffes", "", "  kept  ", "x\x00y"}, "line_id": {"", " L7 ", "L\x02", "é"},
	}
	for _, row := range rows {
		for k, h := range header {
			if words := odd[h]; rng.IntN(60) == 0 {
				row[k] = words[rng.IntN(len(words))]
			}
		}
	}
	return header, rows
}

// cellsOf takes a text apart that has no quotation marks.
func cellsOf(text string) (header []string, rows [][]string) {
	for line := range strings.Lines(text) {
		rows = append(rows, strings.Split(strings.TrimSuffix(line, "\n"), ","))
	}
	return rows[0], rows[1:]
}

// asCSV writes cells as a CSV text.
func asCSV(header []string, rows [][]string) string {
	var b strings.Builder
	fmt.Fprintln(&b, strings.Join(header, ","))
	for _, row := range rows {
		for k, x := range row {
			if k > 0 {
				b.WriteByte(',')
			}
			if strings.ContainsAny(x, "\",\n\r") {
				x = `"` + strings.ReplaceAll(x, `"`, `""`) + `"`
			}
			b.WriteString(x)
		}
		b.WriteByte('\n')
	}
	return b.String()
}

func textColumns(header []string) (columns []laidColumn) {
	for _, h := range header {
		columns = append(columns, laidColumn{h, parquet.Type_BYTE_ARRAY})
	}
	return columns
}

// inGroups cuts rows into row groups, none of them as long as a batch.
func inGroups(rows [][]string) (groups [][][]string) {
	for at, size := 0, 5000; at < len(rows); at, size = at+size, size*2/3+100 {
		groups = append(groups, rows[at:min(at+size, len(rows))])
	}
	return groups
}

// layouts are the ways in which the columns of a file may be laid out.
var layouts = map[string]func(group, column int, cells []string) chunk{
	"plain":            func(_, _ int, _ []string) chunk { return chunk{page: 1000} },
	"dictionaries":     func(g, _ int, c []string) chunk { return chunk{different(c, 13*g), len(c), 1 << 20} },
	"small pages":      func(g, _ int, c []string) chunk { return chunk{different(c, g), len(c), 77} },
	"plain pages last": func(g, k int, c []string) chunk { return chunk{different(c, g), 300 * (k + 1), 1000} },
	"some of each": func(g, k int, c []string) chunk {
		return []chunk{{page: 900}, {different(c, g), len(c), 900}, {different(c, g), len(c) / 2, 900}}[(g+k)%3]
	},
	// Words that no row has are nobody's fault, and no book.
	"unused words": func(g, _ int, c []string) chunk {
		words := []string{"unheard of", "", "x\x01y", "\xff\xfe", strings.Repeat("w", 300)}
		for _, x := range different(c, g) {
			if !slices.Contains(words, x) {
				words = append(words, x)
			}
		}
		return chunk{words, len(c), 2000}
	},
}

// refusals are the rejects of a snapshot, but for the file and line, by the row
// that each stands at in the whole of the data.
func refusals(s *snapshot) (all []string) {
	row := 0
	for _, b := range s.batches {
		for _, r := range b.Rejects {
			all = append(all, fmt.Sprintf("row %d: %s %s %q %s %q", row+r.Index+1, r.Code, r.Column, r.Value, r.Reason, r.Row))
		}
		row += b.N
	}
	return all
}

func diff(t *testing.T, what string, got, want []string) {
	t.Helper()
	for i := range max(len(got), len(want)) {
		if i >= len(got) || i >= len(want) || got[i] != want[i] {
			t.Errorf("%s: %d, want %d; at %d:\n%.300q\n%.300q", what, len(got), len(want), i, got[i:min(i+1, len(got))], want[i:min(i+1, len(want))])
			return
		}
	}
}

// The same rows, with all their faults, come out of a text file and of Parquet
// files however their columns are laid out: each row is refused by itself, with
// its own line and value.
func TestCodedColumns(t *testing.T) {
	header, rows := faultyDesk(11_000, 5)
	text := mustRead(t, map[string]string{"positions.csv": asCSV(header, rows)})
	want, refused := strings.Split(content(text), "\n"), refusals(text)
	codes := map[string]bool{}
	for _, r := range text.rejects() {
		codes[string(r.Code)+" "+r.Column] = true
	}
	if len(codes) < 25 || len(refused) < 1000 {
		t.Fatalf("%d rows are refused, for %d reasons: too few to tell", len(refused), len(codes))
	}
	// Cells that are empty are nulls here and there.
	rng := rand.New(rand.NewPCG(1, 1))
	for _, row := range rows {
		for k := range row {
			if row[k] == "" && rng.IntN(3) > 0 {
				row[k] = null
			}
		}
	}
	for _, name := range slices.Sorted(maps.Keys(layouts)) {
		s := mustRead(t, map[string]string{"positions.csv": "", "positions.parquet": laid(t, textColumns(header), inGroups(rows), layouts[name])})
		diff(t, name, strings.Split(content(s), "\n"), want)
		got := refusals(s)
		diff(t, name+", rejects", got, refused)
		for i, r := range s.rejects() {
			if !strings.HasPrefix(got[i], fmt.Sprintf("row %d: ", r.Line)) || r.File != "positions.parquet" {
				t.Fatalf("%s: %s is told of as line %d of %s", name, got[i], r.Line, r.File)
			}
		}
		for what, d := range map[string][2]*schema.Dict{"books": {s.dicts.Books, text.dicts.Books}, "underlyings": {s.dicts.Underlyings, text.dicts.Underlyings}, "strategies": {s.dicts.Strategies, text.dicts.Strategies}} {
			if d[0].Len() != d[1].Len() {
				t.Errorf("%s: %d %s, want %d", name, d[0].Len()-1, what, d[1].Len()-1)
			}
		}
	}
}

// So they do where numbers and dates have types of their own.
func TestTypedColumns(t *testing.T) {
	header, rows := faultyDesk(11_000, 6)
	kinds := map[string]parquet.Type{"quantity": parquet.Type_INT64, "multiplier": parquet.Type_DOUBLE, "strike": parquet.Type_DOUBLE, "vol": parquet.Type_DOUBLE,
		"entry_price": parquet.Type_DOUBLE, "expiry": parquet.Type_INT32}
	columns := textColumns(header)
	for i, row := range rows {
		for k, h := range header {
			kind, typed := kinds[h]
			if columns[k].kind = kind; !typed {
				columns[k].kind = parquet.Type_BYTE_ARRAY
			}
			_, number := parseNumber([]byte(row[k]))
			_, minute, why := isoDate.parse([]byte(row[k]))
			switch {
			case row[k] == "":
			case kind == parquet.Type_INT32 && why == nil && minute == schema.NoMinute:
			case kind == parquet.Type_INT32:
				row[k] = fmt.Sprintf("20%02d-05-%02d", i%90, 1+i%28)
			case kind == parquet.Type_INT64:
				row[k] = fmt.Sprint([]int64{-3, 0, 77, 1 << 53, -1 << 62}[i%5])
			case kind == parquet.Type_DOUBLE && (!number || i%50 == 0):
				row[k] = []string{"-0", "5e-324", "1.5e300", "-2.25"}[i%4]
			}
		}
	}
	text := mustRead(t, map[string]string{"positions.csv": asCSV(header, rows)})
	want := strings.Split(content(text), "\n")
	for _, row := range rows {
		for k := range row {
			if row[k] == "" {
				row[k] = null
			}
		}
	}
	for name, how := range layouts {
		if name == "unused words" { // which are no numbers
			continue
		}
		s := mustRead(t, map[string]string{"positions.csv": "", "positions.parquet": laid(t, columns, inGroups(rows), how)})
		diff(t, name, strings.Split(content(s), "\n"), want)
		got, refused := s.rejects(), text.rejects()
		if len(got) != len(refused) || len(got) < 1000 {
			t.Fatalf("%s: %d rejects, want %d", name, len(got), len(refused))
		}
		for i, r := range got {
			if w := refused[i]; r.Code != w.Code || r.Column != w.Column || r.Reason != w.Reason {
				t.Fatalf("%s: reject %d is %+v, want %+v", name, i, r, w)
			}
		}
	}
}

// Files of one folder have dictionaries of their own, and folders that name a
// value give it to every row.
func TestCodedParts(t *testing.T) {
	header, rows := faultyDesk(7000, 8)
	text := mustRead(t, map[string]string{"positions.csv": asCSV(append(slices.Clone(header), "desk"), withColumn(rows, "7"))})
	dir := folderOf(t, map[string]string{"positions.csv": ""})
	below := filepath.Join(dir, "positions.parquet", "desk=7")
	if err := os.MkdirAll(below, 0o755); err != nil {
		t.Fatal(err)
	}
	for i, part := range [][][]string{rows[:2500], rows[2500:2600], rows[2600:]} {
		file := laid(t, textColumns(header), inGroups(part), func(g, _ int, c []string) chunk { return chunk{different(c, 7*i), len(c), 1000} })
		if err := os.WriteFile(filepath.Join(below, fmt.Sprintf("part-%d.parquet", i)), []byte(file), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	s, err := readAll(dir)
	if err != nil {
		t.Fatal(err)
	}
	diff(t, "rows", strings.Split(content(s), "\n"), strings.Split(content(text), "\n"))
	for _, b := range s.batches {
		for i := range b.N {
			if got := b.Extra[1].At(i); got != "7" {
				t.Fatalf("the folder gives row %d %q", i, got)
			}
		}
	}
	if got, want := len(s.rejects()), len(text.rejects()); got != want || s.rejects()[got-1].File != "positions.parquet/desk=7/part-2.parquet" {
		t.Errorf("%d rejects, want %d; the last %+v", got, want, s.rejects()[got-1])
	}
}

func withColumn(rows [][]string, text string) (wider [][]string) {
	for _, row := range rows {
		wider = append(wider, append(slices.Clone(row), text))
	}
	return wider
}

// A binder knows words again without keeping them in memory: they live as long as
// the piece that has them.
func TestWordsAreNotKept(t *testing.T) {
	header, rows := cellsOf(desk(3000, 4))
	file := laid(t, textColumns(header), [][][]string{rows[:2000], rows[2000:]}, layouts["dictionaries"])
	p := positionsOf(t, folderOf(t, map[string]string{"positions.csv": "", "positions.parquet": file}))
	binder := p.NewBinder()
	var pc Piece
	var b schema.Batch
	var words [2][]weak.Pointer[table.Words]
	for i := range words {
		if err := p.Next(&pc); err != nil {
			t.Fatal(err)
		}
		for _, c := range pc.rows.Coded {
			words[i] = append(words[i], weak.Make(c.Words))
		}
		if i > 0 { // the binder has seen the first only
			break
		}
		if err := binder.Bind(&pc, &b); err != nil {
			t.Fatal(err)
		}
	}
	runtime.GC()
	for k, h := range header {
		if words[0][k].Value() != nil || words[1][k].Value() == nil {
			t.Errorf("column %s: the words of the piece before are kept: %v; those of the piece at hand: %v", h, words[0][k].Value() != nil, words[1][k].Value() != nil)
		}
	}
	runtime.KeepAlive(binder)
	runtime.KeepAlive(&pc)
}

// A word that is too long refuses the rows that have it, and what the words of a
// run take is counted as if each row had its own.
func TestLimitsOfWords(t *testing.T) {
	header := []string{"line_id", "book", "underlying", "instrument", "quantity", "note"}
	long := strings.Repeat("x", 600)
	const n = 5000
	var rows [][]string
	for i := range n {
		rows = append(rows, []string{fmt.Sprint(i), "North", "ALBA", "stock", "1", "short"})
	}
	read := func(limits string, words bool) (*snapshot, error) {
		how := func(_, _ int, c []string) chunk { return chunk{page: 1 << 20} }
		if words {
			how = func(_, _ int, c []string) chunk { return chunk{append(different(c, 0), long), len(c), 1 << 20} }
		}
		return readAll(folderOf(t, map[string]string{"positions.csv": "", "positions.parquet": laid(t, textColumns(header), [][][]string{rows}, how),
			"run.toml": smallest["run.toml"] + "[limits]\n" + limits}))
	}
	rows[7][5], rows[4500][5] = long, long
	for _, words := range []bool{false, true} {
		s, err := read("field_bytes = 500\n", words)
		if err != nil {
			t.Fatal(err)
		}
		r := s.rejects()
		if len(r) != 2 || r[0].Line != 8 || r[1].Line != 4501 || r[0].Code != schema.BadRow || !strings.Contains(r[0].Reason, "field_bytes = 500") || r[0].Row != "7,North,ALBA,stock,1," {
			t.Errorf("words %v: %+v", words, r)
		}
		// A few long ones among many: as if all were long, they would be too many.
		if s, err = read("batch_bytes = 1048576\n", words); err != nil || len(s.rejects()) > 0 || s.batches[0].Extra[0].At(7) != long {
			t.Errorf("words %v: %v", words, err)
		}
	}
	for i := range rows {
		rows[i][5] = long
	}
	for _, words := range []bool{false, true} {
		_, err := read("batch_bytes = 1048576\n", words)
		if err == nil || !strings.Contains(err.Error(), "column note, row group 1: the texts of 4,096 rows have more bytes than batch_bytes = 1048576 allows") {
			t.Errorf("words %v: %v", words, err)
		}
	}
}

// Texts, numbers and dates by dictionaries, as most programs write them.
func BenchmarkCodedBind(b *testing.B) {
	const rows = 100_000
	header, cells := cellsOf(desk(rows, 3))
	columns := textColumns(header)
	for i, name := range []string{"quantity", "multiplier", "strike", "vol", "mark", "entry_price"} {
		k := slices.IndexFunc(columns, func(c laidColumn) bool { return c.name == name })
		if columns[k].kind = parquet.Type_DOUBLE; i < 2 {
			columns[k].kind = parquet.Type_INT64
		}
	}
	for _, row := range cells {
		for k := range row {
			if row[k] == "" {
				row[k] = null
			}
		}
	}
	file := laid(b, columns, [][][]string{cells}, func(_, column int, c []string) chunk {
		if words := different(c, 0); len(words) < 5000 {
			return chunk{words, len(c), 1 << 20}
		}
		return chunk{page: 1 << 20}
	})
	benchmarkBind(b, "positions.parquet", file, rows)
}
