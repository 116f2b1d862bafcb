package reader

import (
	"bufio"
	"bytes"
	"errors"
	"io"
	"testing"

	"github.com/klauspost/compress/gzip"

	"nightbook/reader/csv"
	"nightbook/schema"
)

// inMemory is a table that lies in memory.
type inMemory struct{}

func (inMemory) size() int64                    { return 0 }
func (inMemory) reached() int64                 { return 0 }
func (inMemory) fail(_ string, err error) error { return err }
func (inMemory) done(*Folder, int64) error      { return nil }
func (inMemory) Close() error                   { return nil }

// FuzzPositions reads any text as a position file, to the end: every row is in a
// batch, and is refused or has all that its instrument needs.
func FuzzPositions(f *testing.F) {
	f.Add([]byte(desk(12, 3)), false, false)
	f.Add([]byte("line_id;book;underlying;instrument;quantity;strike;expiry;option_type;note\n1;N;A;option;1.000,5;1e2;20.03.2026;put;x\n\"2;N;A;cash;-0;;;;\"\n"), true, true)
	f.Add([]byte("line_id,book,underlying,instrument,quantity\n,,,,\n1,2,3\n\xff,\x00,a,stock,nan\n"), false, true)
	f.Fuzz(func(t *testing.T, text []byte, semicolon, house bool) {
		cfg := &schema.Config{}
		if semicolon {
			cfg.CSV.Delimiter = ';'
		}
		if house {
			cfg.CSV.DecimalComma, cfg.CSV.DateFormat = true, "DD.MM.YYYY"
		}
		in := &input{path: "positions.csv", name: "positions.csv", table: inputTable("positions")}
		s, err := csv.NewScanner(bytes.NewReader(text), csv.Options{Delimiter: cfg.CSV.Delimiter})
		if err != nil {
			return
		}
		o := &opened{in: in, stored: inMemory{}, source: &textFile{Scanner: s}}
		if o.start(cfg) != nil {
			return
		}
		if _, err := o.splitExtra(in, o.Header()); err != nil {
			return
		}
		p := &Positions{folder: &Folder{}, o: o, cfg: cfg, dicts: schema.NewDicts(), extra: o.extraNames(o.Header())}
		n := p.NewBinder()
		var pc Piece
		var b schema.Batch
		var rows int64
		for {
			if err := p.Next(&pc); err == io.EOF {
				break
			} else if err != nil {
				return
			}
			if err := n.Bind(&pc, &b); err != nil {
				t.Fatal(err)
			}
			rows += int64(b.N)
			refused := 0
			for i := range b.N {
				b.LineID.At(i)
				b.Row(i)
				for k := range b.Extra {
					b.Extra[k].At(i)
				}
				if b.Status[i] == schema.Rejected {
					refused++
					continue
				}
				x := b.Instrument[i]
				if b.LineID.At(i) == "" || b.Book[i] == 0 || x == 0 || b.Quantity[i] != b.Quantity[i] ||
					x == schema.Option && (b.Strike[i] != b.Strike[i] || b.Expiry[i] == schema.NoDate || b.OptionType[i] == 0) {
					t.Fatalf("row %d lacks something and is not refused: %q", i, b.Row(i))
				}
			}
			if refused != len(b.Rejects) {
				t.Fatalf("%d rows refused, %d rejects", refused, len(b.Rejects))
			}
		}
		if rows != p.Rows() {
			t.Fatalf("%d rows read, %d bound", p.Rows(), rows)
		}
	})
}

// FuzzGzip unpacks the members of any file as the library does that reads them
// in one go, but for what stands behind the last.
func FuzzGzip(f *testing.F) {
	one := gzipped(f, "line_id,book\n")
	f.Add([]byte(one))
	f.Add([]byte(one + gzipped(f, "1,North\n")))
	f.Add([]byte(one + "junk"))
	f.Add([]byte(one + one[:12]))
	f.Fuzz(func(t *testing.T, b []byte) {
		packed := bufio.NewReader(bytes.NewReader(b))
		z, err := gzip.NewReader(packed)
		if err != nil {
			return
		}
		z.Multistream(false)
		got, err := io.ReadAll(io.LimitReader(&members{z, packed}, 1<<20))
		if len(got) == 1<<20 {
			return
		}
		library, wantErr := gzip.NewReader(bytes.NewReader(b))
		if wantErr != nil {
			t.Fatal(wantErr)
		}
		want, wantErr := io.ReadAll(library)
		if err == nil && wantErr == nil && !bytes.Equal(got, want) {
			t.Fatalf("%q, the library has %q", got, want)
		}
		if wantErr == nil && err != nil && !errors.Is(err, errTrailing) {
			t.Fatalf("%v, the library reads it", err)
		}
	})
}
