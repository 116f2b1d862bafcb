package reader

import (
	"fmt"
	"io"
	"math"

	"nightbook/reader/table"
	"nightbook/schema"
)

// Market reads all tables of the snapshot but the positions. A row that cannot
// be read is among the faults, with the name of what it belongs to; the others
// keep the order of their files.
func (f *Folder) Market(cfg *schema.Config) (*schema.Market, error) {
	m := &schema.Market{}
	for _, t := range []struct {
		name string
		rows func(*schema.Market, *schema.Config) func(*marketRow) // what reads one row into the market
		held int64                                                 // bytes that a row takes beside its texts, those of a table that is copied as it grows included
	}{
		{"underlyings", underlyingRows, 500},
		{"rates", rateRows, 250},
		{"vols", volRows, 250},
		{"fx", fxRows, 250},
		{"books", bookRows, 1500},
		{"dividends", dividendRows, 120},
		{"holidays", holidayRows, 100},
		{"quotes", quoteRows, 450},
	} {
		if t.name == "quotes" && !cfg.Vols.FromQuotes {
			if in := f.tables[t.name]; in != nil {
				f.note(schema.Note{Code: schema.FileNotUsed, Subject: in.name, File: in.name, Count: 1,
					Message: `the quotes are not used: the surface is that of vols, unless [vols] from = "quotes"`})
			}
			continue
		}
		if err := f.readMarket(t.name, cfg, m, t.rows(m, cfg), t.held); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// readMarket reads one table of the market, if the folder has it.
func (f *Folder) readMarket(name string, cfg *schema.Config, m *schema.Market, row func(*marketRow), held int64) error {
	o, err := f.open(name, cfg)
	if o == nil || err != nil {
		return err
	}
	defer o.Close()
	if err := o.checkMemory(cfg.Limits.Ceiling()); err != nil {
		return err
	}
	limits := []schema.Limit{schema.MarketRows}
	if name == "books" { // each has its sums, whether lines are in it or not
		limits = append(limits, schema.Books)
	}
	r := &marketRow{o: o, m: m}
	var rows table.Rows
	r.cells = cells{Rows: &rows, style: o.style}
	for {
		err := o.Next(&rows)
		if err == io.EOF {
			break
		}
		if err != nil {
			return o.fail(o.sheet, err)
		}
		bad := rows.Bad
		for i := range rows.N {
			r.start(i)
			if len(bad) > 0 && bad[0].Row == i {
				r.refuse(-1, &finding{schema.BadRow, bad[0].Reason})
				bad = bad[1:]
				if name == "quotes" { // each is answered, this one too
					m.Quotes = append(m.Quotes, unreadQuote(r))
				}
			} else {
				row(r)
			}
			r.end()
		}
		f.held += r.bytes + held*int64(rows.N)
		r.bytes = 0
		if err := f.checkMarket(cfg.Limits.Ceiling()); err != nil {
			return o.in.fail(o.sheet, err)
		}
		o.rows += int64(rows.N)
		for _, limit := range limits {
			if o.rows > cfg.Limits.Of(limit) {
				return o.in.fail(o.sheet, cfg.Limits.Exceeded(limit))
			}
		}
	}
	return o.finish(f)
}

// marketRow reads the cells of one market row by the names of our columns, and
// keeps the first thing found wrong with it.
type marketRow struct {
	cells
	o *opened
	m *schema.Market

	bytes int64 // of the texts that are kept

	i      int
	name   string // of what the row belongs to
	column int    // ours, at fault; -1: the row as a whole
	why    *finding
	also   string
}

func (r *marketRow) start(i int) {
	r.i, r.name, r.why, r.also = i, "", nil, ""
}

// end puts a refused row among the faults.
func (r *marketRow) end() {
	if r.why != nil {
		x := r.rejected()
		r.bytes += faultBytes + int64(len(x.Row))
		r.m.Faults = append(r.m.Faults, schema.Fault{Table: r.o.in.table.Name, Name: r.name, Reject: x})
	}
}

// rejected tells what is wrong with the row, and where.
func (r *marketRow) rejected() schema.Reject {
	x := schema.Reject{
		File: r.o.in.name, Sheet: r.o.sheet, Line: r.line(),
		Code: r.why.code, Reason: r.why.reason + r.also, Row: string(appendRaw(nil, r.Rows, r.i)),
	}
	if r.column >= 0 {
		x.Column = r.o.names[r.column]
		if at := r.o.at[r.column]; at >= 0 {
			x.Value = r.value(at, r.i)
		}
	}
	return x
}

// ok reports whether nothing is wrong with the row so far.
func (r *marketRow) ok() bool { return r.why == nil }

func (r *marketRow) line() int64 { return r.Line[r.i] }

// refuse notes what is wrong with our column k; -1 is the row as a whole.
func (r *marketRow) refuse(k int, why *finding) {
	if r.why == nil {
		r.column, r.why = k, why
		return
	}
	if k < 0 {
		return
	}
	if r.also == "" {
		r.also = "; also: " + r.o.names[k]
	} else {
		r.also += ", " + r.o.names[k]
	}
}

// col returns the number of our column.
func (r *marketRow) col(name string) int {
	for k := range r.o.in.table.Columns {
		if r.o.in.table.Columns[k].Name == name {
			return k
		}
	}
	panic("reader: a market table is asked for a column it has not")
}

// text returns a name; "" is an empty cell.
func (r *marketRow) text(name string) string {
	k := r.col(name)
	if r.o.at[k] < 0 {
		return ""
	}
	b, why := r.cells.name(r.o.at[k], r.i)
	if why != nil {
		r.refuse(k, why)
		return ""
	}
	r.bytes += int64(len(b)) + textBytes
	return string(b)
}

// key returns a name that must be there, and takes it for what the row belongs to.
func (r *marketRow) key(name string) string {
	s := r.text(name)
	if s == "" && r.ok() {
		r.refuse(r.col(name), missing)
	}
	r.name = s
	return s
}

// currency returns a currency that must be there.
func (r *marketRow) currency(name string) string {
	k := r.col(name)
	b, why := r.cells.currency(r.o.at[k], r.i)
	if why == nil && b == nil {
		why = missing
	}
	if why != nil {
		r.refuse(k, why)
		return ""
	}
	return string(b)
}

// given returns a number within the bounds, NaN if it is refused, and whether
// the cell holds anything.
func (r *marketRow) given(name string, within bounds) (x float64, ok bool) {
	k := r.col(name)
	if r.o.at[k] < 0 {
		return math.NaN(), false
	}
	x, why := r.number(r.o.at[k], r.i)
	if why == nil && math.IsNaN(x) {
		return x, false
	}
	if why == nil {
		x, why = within.check(x, r.Cell(r.o.at[k], r.i))
	}
	if why != nil {
		r.refuse(k, why)
	}
	return x, true
}

// optional returns a number within the bounds, or absent where the cell is empty.
func (r *marketRow) optional(name string, absent float64, within bounds) float64 {
	if x, ok := r.given(name, within); ok {
		return x
	}
	return absent
}

// needed returns a number within the bounds that must be there.
func (r *marketRow) needed(name string, within bounds) float64 {
	x, ok := r.given(name, within)
	if !ok {
		r.refuse(r.col(name), missing)
	}
	return x
}

// day returns a date; NoDate is an empty cell.
func (r *marketRow) day(name string) (schema.Date, int16) {
	k := r.col(name)
	if r.o.at[k] < 0 {
		return schema.NoDate, schema.NoMinute
	}
	d, minute, why := r.date(r.o.at[k], r.i)
	if why != nil {
		r.refuse(k, why)
	}
	return d, minute
}

// neededDay returns a date that must be there.
func (r *marketRow) neededDay(name string) (schema.Date, int16) {
	k := r.col(name)
	d, minute, why := r.date(r.o.at[k], r.i)
	if why == nil && d == schema.NoDate {
		why = missing
	}
	if why != nil {
		r.refuse(k, why)
	}
	return d, minute
}

// duplicate refuses the row as having the key of an earlier one.
func (r *marketRow) duplicate(column, key string, first int64) {
	r.refuse(r.col(column), &finding{schema.DuplicateKey, fmt.Sprintf("%s stands on line %d already: leave one of the two", key, first)})
}
