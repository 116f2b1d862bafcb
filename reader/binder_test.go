package reader

import (
	"context"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"nightbook/schema"
)

// desk writes an invented position file of n lines, of all instruments.
func desk(n int, seed uint64) string {
	rng := rand.New(rand.NewPCG(seed, 1))
	var b strings.Builder
	b.WriteString("line_id,book,underlying,instrument,quantity,multiplier,currency,option_type,exercise,payoff,strike,expiry,vol,mark,entry_price,strategy,trader\n")
	names := []string{"ALBA", "BORA", "CIRRUS", "DELOS", "EMBER"}
	for i := range n {
		u := names[rng.IntN(len(names))]
		fmt.Fprintf(&b, "L%07d,Book %d,%s,", i, rng.IntN(40), u)
		switch rng.IntN(8) {
		case 0:
			fmt.Fprintf(&b, "stock,%d,,,,,,,,,,,carry,\n", rng.IntN(2000)-1000)
		case 1:
			fmt.Fprintf(&b, "future,%d,50,,,,,,,,,%.2f,,Ines\n", rng.IntN(200)-100, 50+100*rng.Float64())
		case 2:
			fmt.Fprintf(&b, "forward,%d,,EUR,,,,%.4f,2026-%02d-15,,,,,\n", rng.IntN(200)-100, 50+100*rng.Float64(), 4+rng.IntN(9))
		default:
			kind := [2]string{"call", "put"}[rng.IntN(2)]
			fmt.Fprintf(&b, "option,%d,100,USD,%s,european,vanilla,%.2f,2027-%02d-%02dT16:00,%.6f,%.4f,,vol,Juno\n",
				rng.IntN(2000)-1000, kind, 20+200*rng.Float64(), 1+rng.IntN(12), 1+rng.IntN(28), 0.05+rng.Float64(), 30*rng.Float64())
		}
	}
	return b.String()
}

func TestBindRows(t *testing.T) {
	s := mustRead(t, map[string]string{"positions.csv": strings.Join([]string{
		"Line_ID , book,Underlying,instrument,quantity,multiplier,currency,option_type,exercise,payoff,strike,expiry,vol,average_start,strategy,Desk Note",
		`A1,North, ALBA ,OPTION,-3,100,usd,Call,,,12.5,2026-06-19T15:30:59,0.2,,carry,"said ""go"""`,
		`A2,North,ALBA,option,1e2,,,put,american,barrier,9,2026-06-19,,2026-04-01,, kept as is `,
		"",
		`A3,"So,uth",EUR,cash,-0.5,,,,,,,,,,,`,
		`A4,North,ALBA,forward,0,,,,,,-3,2026-06-19 00:00,,,,`,
	}, "\r\n")})
	b := s.batches[0]
	if len(b.Rejects) != 0 {
		t.Fatalf("rejects: %+v", b.Rejects)
	}
	if b.N != 4 {
		t.Fatalf("%d rows", b.N)
	}
	if got := fmt.Sprint(b.Line); got != "[2 3 5 6]" {
		t.Errorf("lines %s", got)
	}
	if got := strings.Join(s.positions.Extra(), "|"); got != "Desk Note" {
		t.Errorf("extra %q", got)
	}
	for i, want := range []string{`said "go"`, " kept as is ", "", ""} {
		if got := b.Extra[0].At(i); got != want {
			t.Errorf("extra of row %d: %q, want %q", i, got, want)
		}
	}
	for i, want := range []schema.Choice{schema.European, schema.American, 0, 0} {
		if b.Exercise[i] != want {
			t.Errorf("exercise of row %d: %v, want %v", i, b.Exercise[i], want)
		}
	}
	for i, want := range []schema.Choice{schema.Vanilla, schema.Barrier, 0, 0} {
		if b.Payoff[i] != want {
			t.Errorf("payoff of row %d: %v, want %v", i, b.Payoff[i], want)
		}
	}
	for i, want := range []int16{15*60 + 30, schema.NoMinute, schema.NoMinute, 0} {
		if b.ExpiryMinute[i] != want {
			t.Errorf("minute of row %d: %v, want %v", i, b.ExpiryMinute[i], want)
		}
	}
	for i, want := range []float64{12.5, 9, math.NaN(), -3} {
		if got := b.Strike[i]; got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Errorf("strike of row %d: %v, want %v", i, got, want)
		}
	}
	for i, want := range []float64{100, 1, 1, 1} {
		if b.Multiplier[i] != want {
			t.Errorf("multiplier of row %d: %v, want %v", i, b.Multiplier[i], want)
		}
	}
	if got := s.dicts.Currencies.Name(b.Currency[0]); got != "USD" {
		t.Errorf("currency %q", got)
	}
	if b.Currency[1] != 0 || b.Strategy[1] != 0 {
		t.Error("empty texts have a code")
	}
	if got := s.dicts.Underlyings.Name(b.Underlying[0]); got != "ALBA" {
		t.Errorf("underlying %q", got)
	}
	if b.Expiry[2] != schema.NoDate || b.AverageStart[1].String() != "2026-04-01" {
		t.Errorf("dates %v %v", b.Expiry[2], b.AverageStart[1])
	}
}

// Every row of a file comes out once, whatever the batches.
func TestManyBatches(t *testing.T) {
	const n = 3*schema.BatchRows + 17
	s := mustRead(t, map[string]string{"positions.csv": desk(n, 7)})
	line, rows := int64(2), 0
	for _, b := range s.batches {
		if len(b.Rejects) > 0 {
			t.Fatalf("reject %+v", b.Rejects[0])
		}
		for i := range b.N {
			if b.Line[i] != line || b.LineID.At(i) != fmt.Sprintf("L%07d", rows) {
				t.Fatalf("row %d: line %d, id %s", rows, b.Line[i], b.LineID.At(i))
			}
			line++
			rows++
		}
	}
	if rows != n {
		t.Errorf("%d rows, want %d", rows, n)
	}
	if in := s.Inputs()[0]; in.Rows != n || in.Name != "positions.csv" {
		t.Errorf("input %+v", in)
	}
}

func BenchmarkCSVBind(b *testing.B) {
	const rows = 200_000
	benchmarkBind(b, "positions.csv", desk(rows, 3), rows)
}

func BenchmarkParquetBind(b *testing.B) {
	const rows = 100_000
	benchmarkBind(b, "positions.parquet", parquetOf(b, desk(rows, 3)), rows)
}

func BenchmarkXLSXBind(b *testing.B) {
	const rows = 10_000
	benchmarkBind(b, "positions.xlsx", sheetOf(b, desk(rows, 3)), rows)
}

// benchmarkBind reads and binds a position file on one goroutine.
func benchmarkBind(b *testing.B, name, file string, rows int) {
	dir := folderOf(b, map[string]string{"positions.csv": "", name: file})
	f, err := OpenFolder(context.Background(), dir)
	if err != nil {
		b.Fatal(err)
	}
	cfg, err := f.Config("")
	if err != nil {
		b.Fatal(err)
	}
	dicts := schema.NewDicts()
	var pc Piece
	var batch schema.Batch
	b.SetBytes(int64(len(file)))
	b.ReportAllocs()
	for b.Loop() {
		p, err := f.Positions(cfg, dicts)
		if err != nil {
			b.Fatal(err)
		}
		n := p.NewBinder()
		for {
			if err := p.Next(&pc); err == io.EOF {
				break
			} else if err != nil {
				b.Fatal(err)
			}
			if err := n.Bind(&pc, &batch); err != nil {
				b.Fatal(err)
			}
			if len(batch.Rejects) > 0 {
				b.Fatal(batch.Rejects[0])
			}
		}
		p.Close()
	}
	b.ReportMetric(float64(rows)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}
