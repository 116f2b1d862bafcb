package invent

import (
	"fmt"
	"slices"
	"strings"

	"nightbook/schema"
)

// Summary adds a batch of Lines up under a small tree of books, and puts some
// refused rows, warnings and files beside it.
func Summary(b *schema.Batch, dicts *schema.Dicts) *schema.Summary {
	s := &schema.Summary{
		Config:  &schema.Config{ReportingCurrency: "USD", Workbook: schema.WorkbookConfig{MaxLines: schema.DefaultMaxLines}},
		Version: "1.2.3",
		RowsIn:  int64(b.N) + 3, Rejects: 3, Faults: 1,
		RejectCount: []schema.CodeCount{{Code: string(schema.BadNumber), Count: 2}, {Code: string(schema.NoVol), Count: 1}},
		Notes: []schema.Note{
			{Code: schema.VolFallback, Subject: "NAME001", Message: "its flat volatility was used", File: "positions.csv", Line: 7, Count: 4},
			{Code: schema.NoHolidays, Subject: "=cmd|x", Message: "business days are Monday to Friday", Count: 1},
		},
		MaxResidual: 2.5e-14, MaxIntegralResidual: 1e-6, MaxPriceError: 1e-5,
		Inputs: []schema.InputFile{
			{Name: "positions.csv", Table: "positions", SHA256: strings.Repeat("0a", 32), Bytes: 12345, Rows: int64(b.N) + 3},
			{Name: "run.toml", Table: "run", SHA256: strings.Repeat("b1", 32), Bytes: 99},
		},
	}
	s.Config.AsOf.Day, _ = schema.DateOf(2026, 1, 30)
	s.Config.AsOf.Minute = schema.NoMinute

	books := map[string]*schema.BookTotal{}
	under, currencies := map[string]*schema.UnderlyingTotal{}, map[string]*schema.CurrencyTotal{}
	for i := range b.N {
		book, name, currency := dicts.Books.Name(b.Book[i]), dicts.Underlyings.Name(b.Underlying[i]), dicts.Currencies.Name(b.Currency[i])
		if books[book] == nil {
			books[book] = &schema.BookTotal{Book: book, Parent: "Desk", Path: "House / Desk / " + book, Level: 2, Listed: true}
		}
		if under[name] == nil {
			under[name] = &schema.UnderlyingTotal{Underlying: name, Kind: schema.Equity, Currency: currency, Spot: b.Spot[i], FX: b.FX[i]}
		}
		if currencies[currency] == nil {
			currencies[currency] = &schema.CurrencyTotal{Currency: currency, FX: b.FX[i]}
		}
		under[name].DeltaUnits += b.DeltaUnits[i]
		for m := range schema.NumMeasures {
			under[name].Local[m] += b.Measures[m][i]
			currencies[currency].Local[m] += b.Measures[m][i]
		}
		for _, t := range []*schema.Totals{&books[book].Own, &books[book].Totals, &under[name].Totals, &currencies[currency].Totals, &s.Total} {
			addLine(t, b, i)
		}
	}
	s.Total.Rejected = s.Rejects
	desk := schema.BookTotal{Book: "Desk", Parent: "House", Owner: "A. Desk", Path: "House / Desk", Level: 1, Listed: true}
	for _, name := range sortedKeys(books) {
		add(&desk.Totals, &books[name].Totals)
	}
	house := schema.BookTotal{Book: "House", Owner: "=2+5", Path: "House", Listed: true, Totals: desk.Totals}
	s.Books = append(s.Books, house, desk)
	for _, name := range sortedKeys(books) {
		s.Books = append(s.Books, *books[name])
	}
	for _, name := range sortedKeys(under) {
		s.Underlyings = append(s.Underlyings, *under[name])
	}
	for _, name := range sortedKeys(currencies) {
		s.Currencies = append(s.Currencies, *currencies[name])
	}
	return s
}

// Rejects returns n refused rows.
func Rejects(n int) []schema.Reject {
	list := make([]schema.Reject, n)
	for i := range list {
		list[i] = schema.Reject{
			File: "positions.csv", Line: int64(i + 2), Column: "quantity", Code: schema.BadNumber, Value: "=1+1",
			Reason: "expected a number", Row: fmt.Sprintf("T%d,\"book, quoted\",=1+1", i),
		}
	}
	return list
}

func addLine(t *schema.Totals, b *schema.Batch, i int) {
	t.Lines++
	t.Priced++
	t.Quantity += b.Quantity[i]
	for m := range schema.NumMeasures {
		t.Measures[m] += b.MeasuresInBase[m][i]
	}
}

func add(t, u *schema.Totals) {
	t.Lines += u.Lines
	t.Priced += u.Priced
	t.Quantity += u.Quantity
	for m := range t.Measures {
		t.Measures[m] += u.Measures[m]
	}
}

func sortedKeys[T any](m map[string]T) []string {
	var keys []string
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
