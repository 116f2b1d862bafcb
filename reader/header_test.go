package reader

import (
	"strings"
	"testing"

	"nightbook/schema"
)

// The places of our columns are those of the schema, name by name.
func TestPositionColumns(t *testing.T) {
	if got := len(schema.PositionsTable.Columns); got != positionColumns {
		t.Fatalf("%d columns, want %d", got, positionColumns)
	}
	for k, name := range map[int]string{
		lineID: "line_id", book: "book", underlying: "underlying", instrument: "instrument", quantity: "quantity", multiplier: "multiplier",
		currency: "currency", optionType: "option_type", exercise: "exercise", payoff: "payoff", strike: "strike", expiry: "expiry", vol: "vol",
		mark: "mark", payout: "payout", barrierType: "barrier_type", barrier: "barrier", rebate: "rebate", averageStart: "average_start",
		averageSoFar: "average_so_far", entryPrice: "entry_price", strategy: "strategy",
	} {
		if got := schema.PositionsTable.Columns[k].Name; got != name {
			t.Errorf("column %d is %s, want %s", k, got, name)
		}
	}
}

func TestHeaders(t *testing.T) {
	const toml = "as_of = 2026-03-20\nreporting_currency = \"USD\"\n"
	mapped := toml + "[columns.positions]\nbook = \"Portfolio\"\n"
	row := "\nL1,North,ALBA,stock,10"
	for _, c := range []struct{ name, toml, header, extra, want string }{
		{"as ours", toml, "line_id,book,underlying,instrument,quantity", "", ""},
		{"case and spaces", toml, " LINE_ID ,Book,Underlying\t,INSTRUMENT, quantity", "", ""},
		{"quoted", toml, `"line_id","book","underlying","instrument","quantity"`, "", ""},
		{"mapped", mapped, "line_id,PORTFOLIO ,underlying,instrument,quantity", "", ""},
		{"mapped, not there", mapped, "line_id,book,underlying,instrument,quantity", "", `maps book to "Portfolio", which is not in the header; the columns found are "line_id" "book"`},
		{"mapped, and ours too", mapped, "line_id,portfolio,book,underlying,instrument,quantity", "", `two columns stand for book: "portfolio" and "book"`},
		{"two mapped to one", toml + "[columns.positions]\nstrike = \"K\"\nvol = \"k\"\n", "line_id,book,underlying,instrument,quantity,K", "", `the column "K" stands for both strike and vol: map one of them to another header in [columns.positions] of run.toml`},
		{"mapped to another of ours", toml + "[columns.positions]\nstrike = \"vol\"\n", "line_id,book,underlying,instrument,quantity,vol", "", `the column "vol" stands for both strike and vol`},
		{"missing", toml, "line_id,bk,underlying,instrument,quantity", "", `there is no column book; the columns found are "line_id" "bk" "underlying" "instrument" "quantity"; if the file names it otherwise, add book = "Its Header" under [columns.positions] in run.toml`},
		{"twice", toml, "line_id,book,underlying,instrument,quantity,Book", "", `two columns stand for book: "book" and "Book"`},
		{"another delimiter", toml, "line_id;book;underlying;instrument;quantity", "", `set [csv] delimiter = ";"`},
		{"extra", toml, "desk,line_id,book,underlying,instrument,quantity, My Note ", "desk|My Note", ""},
		{"extra twice", toml, "line_id,book,underlying,instrument,quantity,note,NOTE", "", `two columns are named "NOTE"`},
		{"not UTF-8", toml, "line_id,book,underlying,instrument,quantity,B\xFCch", "", `is not valid UTF-8`},
	} {
		t.Run(c.name, func(t *testing.T) {
			text := c.header + row
			if c.extra != "" {
				text = c.header + "\nx,L1,North,ALBA,stock,10,y"
			}
			s, err := readAll(folderOf(t, map[string]string{"run.toml": c.toml, "positions.csv": text}))
			switch {
			case c.want == "" && err != nil:
				t.Error(err)
			case c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), "positions.csv: ")):
				t.Errorf("%v, want %q", err, c.want)
			case c.want == "":
				if got := strings.Join(s.positions.Extra(), "|"); got != c.extra {
					t.Errorf("extra %q, want %q", got, c.extra)
				}
				if b := s.batches[0]; b.LineID.At(0) != "L1" || b.Quantity[0] != 10 || s.dicts.Books.Name(b.Book[0]) != "North" {
					t.Errorf("row %q %v", b.LineID.At(0), b.Quantity)
				}
			}
		})
	}
}

// Columns without a name are dropped, and one note says so.
func TestColumnWithoutName(t *testing.T) {
	s := mustRead(t, map[string]string{"positions.csv": "line_id,,book,underlying,instrument,quantity,\nL1,x,North,ALBA,stock,10,y\n"})
	if len(s.positions.Extra()) != 0 || s.batches[0].LineID.At(0) != "L1" || s.batches[0].Quantity[0] != 10 {
		t.Errorf("extra %q", s.positions.Extra())
	}
	n := s.Notes()
	if len(n) != 1 || n[0].Code != schema.ColumnEmptyName || n[0].Count != 2 || n[0].File != "positions.csv" {
		t.Errorf("%+v", n)
	}
}

// Rows that one quotation mark has drawn into a field of another are told of;
// texts of several lines are not, nor is a row that is refused all the same.
func TestRowInField(t *testing.T) {
	s := mustRead(t, map[string]string{"positions.csv": "line_id,book,underlying,instrument,quantity,note\n1,N,ALBA,stock,1,\"of,\ntwo, or\nthree\"\n2,N,ALBA,stock,1,\"note\n3,N,ALBA,stock,1,\n4,N,ALBA,stock,1,note\"\n5,N,ALBA,stock,1,\"broken\n\"x\n"})
	var found []schema.Note
	for _, n := range s.Notes() {
		if n.Code == schema.RowInField {
			found = append(found, n)
		}
	}
	if len(found) != 1 || found[0].Count != 2 || found[0].Line != 5 {
		t.Errorf("%+v", found)
	}
	if r := s.rejects(); len(r) != 1 || r[0].Line != 8 || !strings.Contains(r[0].Reason, "closed only on line 9, so that 2 lines are refused as one") {
		t.Errorf("%+v", r)
	}
}

func TestEncodingNote(t *testing.T) {
	var utf16 strings.Builder
	utf16.WriteString("\xFF\xFE")
	for _, c := range smallest["positions.csv"] {
		utf16.WriteByte(byte(c))
		utf16.WriteByte(0)
	}
	s := mustRead(t, map[string]string{"positions.csv": utf16.String()})
	n := s.Notes()
	if s.batches[0].LineID.At(0) != "L1" || len(n) != 1 || n[0].Code != schema.FormatDetected || !strings.Contains(n[0].Message, "utf-16") {
		t.Errorf("%q %+v", s.batches[0].LineID.At(0), n)
	}
}

func TestWindows1252(t *testing.T) {
	s := mustRead(t, map[string]string{
		"run.toml":      smallest["run.toml"] + "[csv]\nencoding = \"windows-1252\"\n",
		"positions.csv": "line_id,book,underlying,instrument,quantity,\xFCbrig\nL1,N\xF6rd,ALBA,stock,10,\x80\n",
	})
	if got := s.dicts.Books.Name(s.batches[0].Book[0]) + s.positions.Extra()[0] + s.batches[0].Extra[0].At(0); got != "Nördübrig€" {
		t.Errorf("%q", got)
	}
}
