package reader

import (
	"errors"
	"path/filepath"
	"strings"
	"testing"

	"nightbook/schema"
)

const positionHeader = "line_id,book,underlying,instrument,quantity,multiplier,currency,option_type,exercise,payoff,strike,expiry,vol,mark,payout,Barrier_Type,average_start,strategy,note\n"

// Each reason for refusing a row, at its exact address.
func TestRejects(t *testing.T) {
	long := strings.Repeat("n", maxText+1)
	for _, c := range []struct {
		row    string // "" fields at the end are left out
		column string
		code   schema.RejectCode
		value  string
		reason string
	}{
		{",North,ALBA,stock,1", "line_id", schema.MissingValue, "", "needs it"},
		{"A,,ALBA,stock,1", "book", schema.MissingValue, "", "needs it"},
		{"A, \t,ALBA,stock,1", "book", schema.MissingValue, " \t", "needs it"},
		{"A,North,,stock,1", "underlying", schema.MissingValue, "", "needs it"},
		{"A,North,ALBA,,1", "instrument", schema.MissingValue, "", "needs it"},
		{"A,North,ALBA,stock,", "quantity", schema.MissingValue, "", "needs it"},
		{"A,North,ALBA,swap,1", "instrument", schema.BadChoice, "swap", "expected one of option, stock, future, forward, cash"},
		{"A\x01,North,ALBA,stock,1", "line_id", schema.BadText, "A\x01", "control character"},
		{"A\x7f,North,ALBA,stock,1", "line_id", schema.BadText, "A\x7f", "control character"},
		{"\"A\nB\",North,ALBA,stock,1", "line_id", schema.BadText, "A\nB", "control character"},
		{"A,North\u0085,ALBA,stock,1", "book", schema.BadText, "North\u0085", "control character"},
		{"\uFEFFA,North,ALBA,stock,1", "line_id", schema.BadText, "\uFEFFA", "byte order mark"},
		{"A,N\xFCrd,ALBA,stock,1", "book", schema.BadText, "N\xFCrd", "not valid UTF-8"},
		{"A," + long + ",ALBA,stock,1", "book", schema.BadText, long, "longer than 256 bytes"},
		{"A,North,ALBA,stock,ten", "quantity", schema.BadNumber, "ten", "expected a number"},
		{"A,North,ALBA,stock,\"1,000\"", "quantity", schema.BadNumber, "1,000", "thousands separators"},
		{"A,North,ALBA,stock,inf", "quantity", schema.BadNumber, "inf", "expected a number"},
		{"A,North,ALBA,stock,1e999", "quantity", schema.BadNumber, "1e999", "expected a number"},
		{"A,North,ALBA,stock,1,0", "multiplier", schema.OutOfRange, "0", "above 0"},
		{"A,North,ALBA,stock,1,-5", "multiplier", schema.OutOfRange, "-5", "above 0"},
		{"A,North,ALBA,stock,1,,US", "currency", schema.BadChoice, "US", "three letters"},
		{"A,North,ALBA,stock,1,,U5D", "currency", schema.BadChoice, "U5D", "three letters"},
		{"A,North,ALBA,option,1,,,straddle,,,10,2026-06-19", "option_type", schema.BadChoice, "straddle", "expected one of call, put"},
		{"A,North,ALBA,option,1,,,call,bermudan,,10,2026-06-19", "exercise", schema.BadChoice, "bermudan", "european, american"},
		{"A,North,ALBA,option,1,,,call,,lookback,10,2026-06-19", "payoff", schema.BadChoice, "lookback", "vanilla, cash_digital"},
		{"A,North,ALBA,option,1,,,call,,barrier,10,2026-06-19,,,,sideways", "Barrier_Type", schema.BadChoice, "sideways", "down_in"},
		{"A,North,ALBA,option,1,,,,,,10,2026-06-19", "option_type", schema.MissingValue, "", "an option needs it"},
		{"A,North,ALBA,option,1,,,call,,,,2026-06-19", "strike", schema.MissingValue, "", "an option needs it"},
		{"A,North,ALBA,option,1,,,call,,,10", "expiry", schema.MissingValue, "", "an option needs it"},
		{"A,North,ALBA,forward,1,,,,,,,2026-06-19", "strike", schema.MissingValue, "", "a forward needs it"},
		{"A,North,ALBA,forward,1,,,,,,10", "expiry", schema.MissingValue, "", "a forward needs it"},
		{"A,North,ALBA,option,1,,,call,,,10,19.06.2026", "expiry", schema.BadDate, "19.06.2026", "expected a date"},
		{"A,North,ALBA,option,1,,,call,,,10,2026-06-31", "expiry", schema.BadDate, "2026-06-31", "no such day"},
		{"A,North,ALBA,option,1,,,call,,,10,2026-06-19T15:00Z", "expiry", schema.BadDate, "2026-06-19T15:00Z", "own clock"},
		{"A,North,ALBA,option,1,,,call,,,10,2026-06-19,-0.2", "vol", schema.OutOfRange, "-0.2", "0 or above"},
		{"A,North,ALBA,stock,1,,,,,,,,,12x", "mark", schema.BadNumber, "12x", "expected a number"},
		{"A,North,ALBA,stock,1,,,,,,,,,,,,soon", "average_start", schema.BadDate, "soon", "expected a date"},
		{"A,North,ALBA,stock,1,,,,,,,,,,,,,\x02", "strategy", schema.BadText, "\x02", "control character"},
		{"A,North,ALBA,stock,1,,,,,,,,,,,,,,\xFF", "note", schema.BadText, "\xFF", "not valid UTF-8"},
		{"A,North,ALBA,option,x,,,call,,,,", "quantity", schema.BadNumber, "x", "; also: strike, expiry"},
		{"A,North,ALBA,option,,-1,,call,,,1,,-9", "quantity", schema.MissingValue, "", "; also: multiplier, expiry, vol"},
	} {
		row := c.row
		if n := strings.Count(row, ",") - strings.Count(c.value, ","); n < 18 {
			row += strings.Repeat(",", 18-n)
		}
		s := mustRead(t, map[string]string{"positions.csv": positionHeader + "G1,North,ALBA,stock,1,,,,,,,,,,,,,,\n\n" + row})
		rejects := s.rejects()
		if len(rejects) != 1 {
			t.Errorf("%q: %d rejects, want 1: %+v", c.row, len(rejects), rejects)
			continue
		}
		got := rejects[0]
		reason := got.Reason
		got.Reason = ""
		want := schema.Reject{File: "positions.csv", Line: 4, Column: c.column, Code: c.code, Value: c.value, Row: row, Index: 1}
		if got != want {
			t.Errorf("%q:\n%+v, want\n%+v", c.row, got, want)
		}
		if !strings.Contains(reason, c.reason) {
			t.Errorf("%q: reason %q, want %q in it", c.row, reason, c.reason)
		}
		if b := s.batches[0]; b.Status[0] != 0 || b.Status[1] != schema.Rejected {
			t.Errorf("%q: statuses %v", c.row, b.Status)
		}
	}
}

// A row without the header's number of fields is refused; those around it are not.
func TestBadRow(t *testing.T) {
	s := mustRead(t, map[string]string{"positions.csv": "line_id,book,underlying,instrument,quantity\nA,North,ALBA,stock,1\nB,North,ALBA,stock\nC,North,ALBA,stock,1,\nD,North,ALBA,stock,4\n"})
	rejects := s.rejects()
	if len(rejects) != 2 {
		t.Fatalf("%+v", rejects)
	}
	for i, want := range []schema.Reject{
		{File: "positions.csv", Line: 3, Code: schema.BadRow, Reason: "the row has 4 fields, the header has 5: put fields that hold the delimiter in quotation marks", Row: "B,North,ALBA,stock", Index: 1},
		{File: "positions.csv", Line: 4, Code: schema.BadRow, Reason: "the row has 6 fields, the header has 5: put fields that hold the delimiter in quotation marks", Row: "C,North,ALBA,stock,1,", Index: 2},
	} {
		if rejects[i] != want {
			t.Errorf("%+v, want\n%+v", rejects[i], want)
		}
	}
	b := s.batches[0]
	if b.Quantity[0] != 1 || b.Quantity[3] != 4 || b.LineID.At(3) != "D" || b.LineID.At(1) != "" {
		t.Errorf("rows %v %q", b.Quantity, b.LineID.At(3))
	}
}

// A column the file does not have is spoken of by our name, and the reason says so.
func TestRejectWithoutColumn(t *testing.T) {
	s := mustRead(t, map[string]string{"positions.csv": "line_id,book,underlying,instrument,quantity\nA,North,ALBA,option,1\n"})
	r := s.rejects()[0]
	if r.Column != "option_type" || r.Code != schema.MissingValue || r.Value != "" ||
		r.Reason != "the cell is empty and an option needs it; also: strike, expiry; the file has no such column" {
		t.Errorf("%+v", r)
	}
}

// Mapped columns are named in rejects as the file names them.
func TestRejectOfMappedColumn(t *testing.T) {
	s := mustRead(t, map[string]string{
		"run.toml":      smallest["run.toml"] + "[columns.positions]\nquantity = \"Lots\"\nexpiry = \"Verfall\"\n[csv]\ndelimiter = \";\"\ndecimal_comma = true\ndate_format = \"DD.MM.YYYY\"\n",
		"positions.csv": "line_id;book;underlying;instrument;LOTS;Verfall\nA;North;ALBA;future;1.000,5;20.06.2026\nB;North;ALBA;stock;1000.5;2026-06-20\n",
		"rates.csv":     "curve;tenor;zero_rate\nUSD;1Y;0,04\n", "underlyings.csv": "underlying;kind;currency;price\nALBA;equity;USD;1.100,25\n",
	})
	b := s.batches[0]
	if b.Quantity[0] != 1000.5 || b.Expiry[0].String() != "2026-06-20" || s.market.Underlyings[0].Price != 1100.25 || s.market.Rates[0].Zero != 0.04 {
		t.Errorf("%v %v %v %v", b.Quantity[0], b.Expiry[0], s.market.Underlyings[0].Price, s.market.Rates[0].Zero)
	}
	r := s.rejects()
	if len(r) != 1 || r[0].Column != "LOTS" || r[0].Code != schema.BadNumber || r[0].Value != "1000.5" || !strings.Contains(r[0].Reason, "decimal comma") || !strings.HasSuffix(r[0].Reason, "; also: Verfall") {
		t.Errorf("%+v", r)
	}
}

// Percentages are brought to decimals everywhere vols are read.
func TestVolsInPercent(t *testing.T) {
	s := mustRead(t, map[string]string{
		"run.toml":        smallest["run.toml"] + "[vols]\nunit = \"percent\"\n",
		"positions.csv":   "line_id,book,underlying,instrument,quantity,option_type,strike,expiry,vol\nA,North,ALBA,option,1,call,10,2026-06-19,20\nB,North,ALBA,option,1,call,10,2026-06-19,-1001\n",
		"underlyings.csv": "underlying,kind,currency,price,vol\nALBA,equity,USD,100,25\n",
		"vols.csv":        "underlying,expiry,strike,vol\nALBA,2026-06-19,100,22.5\n",
	})
	if got := []float64{s.batches[0].Vol[0], s.market.Underlyings[0].Vol, s.market.Vols[0].Vol}; got[0] != 0.2 || got[1] != 0.25 || got[2] != 0.225 {
		t.Errorf("%v", got)
	}
	if r := s.rejects(); len(r) != 1 || r[0].Code != schema.OutOfRange || r[0].Value != "-1001" || !strings.Contains(r[0].Reason, "in percent") {
		t.Errorf("%+v", r)
	}
}

// A quotation mark that is not closed ends the reading, at its address: what
// follows it would be lost in one row.
func TestOpenQuote(t *testing.T) {
	for name, text := range map[string]string{
		"positions.csv": "line_id,book,underlying,instrument,quantity\nL1,\"North,ALBA,stock,10\nL2,North,ALBA,stock,10\n",
		"fx.csv":        "currency,rate\n\"EUR,1.1\nGBP,1.2\n",
	} {
		dir := folderOf(t, map[string]string{name: text})
		_, err := readAll(dir)
		var at *schema.CellError
		if !errors.As(err, &at) || at.File != filepath.Join(dir, name) || at.Line != 2 || !strings.Contains(err.Error(), "close the quotation mark that opens on line 2") {
			t.Errorf("%s: %v", name, err)
		}
	}
}
