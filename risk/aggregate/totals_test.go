package aggregate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"strings"
	"testing"

	"nightbook/schema"
)

var tree3 = []schema.BookRow{
	{Line: 2, Book: "House", Owner: "h"}, {Line: 3, Book: "North", Parent: "House"}, {Line: 4, Book: "South", Parent: "House", Owner: "s"},
	{Line: 5, Book: "N1", Parent: "North"}, {Line: 6, Book: "Lone"},
}

// lot is one line as Totals sees it.
type lot struct {
	book, underlying, currency string
	cash                       bool
	status                     schema.Choice
	quantity                   float64
	value, base                float64
}

func batchOf(d *schema.Dicts, lots []lot) *schema.Batch {
	b := new(schema.Batch)
	b.Resize(len(lots))
	for _, s := range b.Results.Floats() {
		clear(*s)
	}
	for i, l := range lots {
		b.Book[i], b.Underlying[i], b.Currency[i] = d.Books.Code(l.book), d.Underlyings.Code(l.underlying), d.Currencies.Code(l.currency)
		b.Instrument[i] = schema.Option
		if l.cash {
			b.Instrument[i] = schema.Cash
		}
		b.Status[i], b.Quantity[i] = l.status, l.quantity
		b.Residual[i] = math.NaN()
		b.LineID.AppendString("x")
		b.Raw.AppendString("x")
		for m := range schema.NumMeasures {
			b.Measures[m][i], b.MeasuresInBase[m][i] = l.value*float64(m+1), l.base*float64(m+1)
		}
		if l.status == schema.Rejected {
			b.Rejects = append(b.Rejects, schema.Reject{Code: schema.NoVol, Index: i})
		}
	}
	return b
}

func kindOf(schema.Code) schema.Choice { return schema.Equity }

func summaryOf(t *testing.T, lots []lot, cuts []int) *schema.Summary {
	t.Helper()
	d := schema.NewDicts()
	totals, err := NewTotals(tree3, d)
	if err != nil {
		t.Fatal(err)
	}
	from := 0
	for _, to := range append(cuts, len(lots)) {
		b := batchOf(d, lots[from:to])
		totals.AddRejects(b)
		b.Compact()
		totals.AddLines(b, kindOf)
		from = to
	}
	s := &schema.Summary{RowsIn: int64(len(lots))}
	if err := totals.Summary(t.Context(), s); err != nil {
		t.Fatal(err)
	}
	return s
}

func TestBooksAddUpAlongTheTree(t *testing.T) {
	s := summaryOf(t, []lot{
		{"N1", "U", "EUR", false, schema.Priced, 1, 10, 10},
		{"North", "U", "EUR", false, schema.Expired, 2, 1, 1},
		{"South", "V", "USD", false, schema.Priced, 4, 100, 90},
		{"Stray", "EUR", "EUR", true, schema.Priced, 8, 1000, 1000},
		{"South", "V", "USD", false, schema.Rejected, 16, 0, 0},
		{"", "", "", false, schema.Rejected, 16, 0, 0},
	}, nil)
	var got []string
	for _, b := range s.Books {
		got = append(got, fmt.Sprintf("%s|%s|%d|%v|%v|own %d|%d+%d-%d|%v", b.Path, b.Parent, b.Level, b.Listed, b.Owner, b.Own.Lines, b.Priced, b.Expired, b.Rejected, b.Measures[schema.Value]))
	}
	want := []string{
		"House||0|true|h|own 0|2+1-1|101",
		"House / North|House|1|true||own 1|1+1-0|11",
		"House / North / N1|North|2|true||own 1|1+0-0|10",
		"House / South|House|1|true|s|own 1|1+0-1|90",
		"Lone||0|true||own 0|0+0-0|0",
		"Stray||0|false||own 1|1+0-0|1000",
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("books:\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	if s.Total.Lines != 4 || s.Total.Rejected != 2 || s.Rejects != 2 || s.Total.Quantity != 15 || s.Total.Measures[schema.Value] != 1101 || !s.RowsAccounted() {
		t.Errorf("total %+v, rejects %d", s.Total, s.Rejects)
	}
	if len(s.Notes) != 1 || s.Notes[0].Code != schema.BookNotInTree || s.Notes[0].Subject != "Stray" {
		t.Errorf("warnings %v", s.Notes)
	}
	if len(s.Currencies) != 2 || s.Currencies[1].Currency != "USD" || s.Currencies[1].Local[schema.Value] != 100 || s.Currencies[1].Measures[schema.Value] != 90 {
		t.Errorf("currencies %+v", s.Currencies)
	}
	if len(s.Underlyings) != 3 || s.Underlyings[0].Underlying != "EUR" || s.Underlyings[0].Kind != 0 || s.Underlyings[1].Kind != schema.Equity {
		t.Errorf("underlyings %+v", s.Underlyings)
	}
}

func TestTotalsDoNotDependOnOrderOrBatches(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	books := []string{"N1", "North", "South", "Lone", "Stray"}
	var lots []lot
	for i := range 3000 {
		x := math.Ldexp(rng.NormFloat64(), rng.IntN(120)-60)
		currency := []string{"EUR", "USD", "JPY"}[i%3]
		lots = append(lots, lot{books[rng.IntN(5)], currency + fmt.Sprint(rng.IntN(9)), currency, i%50 == 0, schema.Priced + schema.Choice(rng.IntN(3)), rng.NormFloat64(), x, x / 3})
	}
	want := summaryOf(t, lots, nil)
	for range 10 {
		rng.Shuffle(len(lots), func(i, j int) { lots[i], lots[j] = lots[j], lots[i] })
		var cuts []int
		for at := rng.IntN(700); at < len(lots); at += 1 + rng.IntN(700) {
			cuts = append(cuts, at)
		}
		got := summaryOf(t, lots, cuts)
		for _, s := range []*schema.Summary{got, want} { // NaN: no option among them
			s.MaxResidual, s.MaxIntegralResidual, s.MaxPriceError = 0, 0, 0
		}
		for i := range want.Underlyings { // the market's, taken from any line
			want.Underlyings[i].FX, got.Underlyings[i].FX = 0, 0
		}
		if !reflect.DeepEqual(got, want) {
			t.Fatal("another order or other batches gave other totals")
		}
	}
	// the tree's top adds up to the total, to the bit
	var top Sum
	for _, b := range want.Books {
		if b.Level == 0 {
			top.Add(b.Measures[schema.Value])
		}
	}
	if d := top.Round() - want.Total.Measures[schema.Value]; math.Abs(d) > 1e-12*math.Abs(want.Total.Measures[schema.Value]) {
		t.Errorf("top-level books miss the total by %v", d)
	}
}

func TestBooksThatAreTheirOwnAncestors(t *testing.T) {
	for _, rows := range [][]schema.BookRow{
		{{Book: "A", Parent: "A"}},
		{{Book: "A", Parent: "B"}, {Book: "B", Parent: "C"}, {Book: "C", Parent: "A"}, {Book: "D", Parent: "A"}},
	} {
		_, err := NewTotals(rows, schema.NewDicts())
		if err == nil || !strings.Contains(err.Error(), "own ancestors: A") {
			t.Errorf("%v: error %v", rows, err)
		}
	}
}

func TestParentWithoutARow(t *testing.T) {
	d := schema.NewDicts()
	totals, err := NewTotals([]schema.BookRow{{Line: 2, Book: "child", Parent: "ghost"}}, d)
	if err != nil {
		t.Fatal(err)
	}
	s := &schema.Summary{}
	if err := totals.Summary(t.Context(), s); err != nil {
		t.Fatal(err)
	}
	if len(s.Books) != 2 || s.Books[0].Book != "ghost" || s.Books[0].Listed || s.Books[1].Level != 1 {
		t.Errorf("%+v", s.Books)
	}
	if len(s.Notes) != 1 || s.Notes[0].Subject != "ghost" || s.Notes[0].Line != 2 {
		t.Errorf("%+v", s.Notes)
	}
}

func BenchmarkAddLines(b *testing.B) {
	rng := rand.New(rand.NewPCG(8, 8))
	d := schema.NewDicts()
	totals, err := NewTotals(nil, d)
	if err != nil {
		b.Fatal(err)
	}
	lots := make([]lot, schema.BatchRows)
	for i := range lots {
		lots[i] = lot{fmt.Sprint("B", rng.IntN(200)), fmt.Sprint("U", rng.IntN(100)), "EUR", false, schema.Priced, 1, rng.NormFloat64() * 1e4, rng.NormFloat64() * 1e4}
	}
	batch := batchOf(d, lots)
	for b.Loop() {
		totals.AddLines(batch, kindOf)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/schema.BatchRows, "ns/line")
}
