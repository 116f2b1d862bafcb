package risk

import (
	"context"
	"math"
	"math/rand/v2"
	"reflect"
	"testing"

	"nightbook/risk/market"
	"nightbook/schema"
)

// mixedDesk has lines of most kinds, and some that are refused at every step, in no order.
func mixedDesk(t *testing.T, n int) (*desk, []line) {
	rng := rand.New(rand.NewPCG(51, 52))
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.rate("USD", 0.04)
	d.underlying("S", schema.Equity, "EUR", 100, 0.01, nan)
	d.underlying("V", schema.Index, "USD", 100, 0.01, 0.2)
	d.underlying("F", schema.FuturePrice, "EUR", 100, 0, 0.3)
	d.underlying("X", schema.Spread, "EUR", -2, 0, nan)
	d.underlying("N", schema.Equity, "EUR", 100, 0, nan) // no volatility
	d.underlying("P", schema.Index, "EUR", 100, 0, 0.25) // pays
	for _, days := range []schema.Date{20, 200, 400} {
		d.raw.Dividends = append(d.raw.Dividends, schema.DividendRow{Underlying: "P", ExDate: d.cfg.AsOf.Day + days, Amount: 1.5})
	}
	for _, days := range []int{30, 90, 365} {
		for k := 60.0; k < 150; k += 7 {
			row := schema.VolRow{Underlying: "S", Day: d.cfg.AsOf.Day + schema.Date(days), Minute: schema.NoMinute, Strike: k, Vol: 0.2 + (k-100)*(k-100)/1e5}
			d.raw.Vols = append(d.raw.Vols, row)
			row.Underlying, row.Strike, row.Vol = "X", k-110, 5+k/100
			d.raw.Vols = append(d.raw.Vols, row)
		}
	}
	lines := make([]line, n)
	for i := range lines {
		l := option([]string{"S", "S", "V", "F", "N"}[rng.IntN(5)], schema.Call+schema.Choice(rng.IntN(2)), 70+float64(rng.IntN(60)), 1+rng.IntN(500), 0)
		switch rng.IntN(40) {
		case 0:
			l = l.american()
		case 1:
			l = line{underlying: l.underlying, instrument: schema.Stock}
		case 2:
			l = line{underlying: "EUR", instrument: schema.Cash}
		case 3:
			l.underlying, l.strike = "X", l.strike-110
		case 4:
			l.days = -3
		case 5:
			l.quantity, l.multiplier = 1e200, 1e200
		case 6:
			l.underlying = "nobody"
		case 7:
			l = line{underlying: "F", instrument: schema.Future, entry: 90}
		case 8:
			l.payoff, l.payout = schema.CashDigital, 10
		case 9:
			l = l.american()
			l.quantity, l.multiplier = 1e200, 1e200
		case 10:
			l.underlying = "P"
		case 11:
			l = l.american()
			l.underlying = "P"
		case 12: // refused where a dividend comes before expiry
			l.underlying, l.payoff, l.start = "P", schema.AsianGeometric, 1
		case 13:
			l = line{underlying: []string{"P", "S"}[rng.IntN(2)], instrument: schema.Forward, strike: l.strike, days: l.days}
		case 14:
			l.payoff, l.barrierType, l.barrier = schema.Barrier, schema.UpOut, 160
		}
		lines[i] = l
	}
	return d, lines
}

// A line has the same results by itself and in a batch of several blocks, and the
// results of an earlier batch leave no trace.
func TestBlocksDoNotMatter(t *testing.T) {
	d, lines := mixedDesk(t, 3*blockRows+77)
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	e := NewEngine(m, d.dicts)
	b, w := d.batch(lines), e.NewWorker()
	for _, s := range b.Results.Floats() {
		fill(*s, 1e308) // as an earlier batch might have left them
	}
	if err := e.Price(context.Background(), b, w); err != nil {
		t.Fatal(err)
	}
	refused := map[schema.RejectCode]int{}
	notes := map[string]int64{}
	rejects := b.Rejects
	alone := e.NewWorker()
	for i, l := range lines {
		one := d.batch([]line{l})
		if err := e.Price(context.Background(), one, alone); err != nil {
			t.Fatal(err)
		}
		for _, n := range one.Notes {
			notes[string(n.Code)+n.Subject] += n.Count
		}
		if one.Status[0] != b.Status[i] {
			t.Fatalf("line %d: status %d, by itself %d", i, b.Status[i], one.Status[0])
		}
		if one.Status[0] == schema.Rejected {
			r := rejects[0]
			if rejects = rejects[1:]; r.Index != i || r.Code != one.Rejects[0].Code || r.Reason != one.Rejects[0].Reason {
				t.Fatalf("line %d: refused as %+v, by itself as %+v", i, r, one.Rejects[0])
			}
			refused[r.Code]++
			continue
		}
		got, want := b.Results.Floats(), one.Results.Floats()
		for k := range got {
			if x, y := (*got[k])[i], (*want[k])[0]; math.Float64bits(x) != math.Float64bits(y) && (x == x || y == y) {
				t.Fatalf("line %d (%+v), column %d: %v, by itself %v", i, l, k, x, y)
			}
		}
		if b.Model[i] != one.Model[0] || b.VolSource[i] != one.VolSource[0] || b.Curve[i] != one.Curve[0] || b.Setting[i] != one.Setting[0] ||
			b.DividendModel[i] != one.DividendModel[0] || b.ExerciseNow[i] != one.ExerciseNow[0] || b.Currency[i] != one.Currency[0] {
			t.Fatalf("line %d: other words than by itself", i)
		}
	}
	if len(rejects) != 0 || refused[schema.NotFinite] < 10 || refused[schema.UnknownUnderlying] < 10 || refused[schema.NoVol] < 10 || refused[schema.Unsupported] < 10 {
		t.Errorf("refused %v, %d left", refused, len(rejects))
	}
	for _, n := range b.Notes {
		if notes[string(n.Code)+n.Subject] != n.Count {
			t.Errorf("%s %s: %d times, by themselves %d", n.Code, n.Subject, n.Count, notes[string(n.Code)+n.Subject])
		}
	}
	if len(b.Notes) < 3 || len(notes) != len(b.Notes) {
		t.Errorf("warnings %v, by themselves %v", b.Notes, notes)
	}
}

// A worker's memory of terms gives what the market gives, however many there are.
func TestTerms(t *testing.T) {
	d, _ := mixedDesk(t, 0)
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	e := NewEngine(m, d.dicts)
	rng := rand.New(rand.NewPCG(53, 54))
	var s terms
	most := 0
	for range 3 * maxTerms {
		if rng.IntN(64) == 0 { // as from batch to batch
			s.trim()
		}
		key := termKey{schema.Code(rng.IntN(8)), d.cfg.AsOf.Day + schema.Date(rng.IntN(20_000)-10), schema.NoMinute}
		if rng.IntN(4) == 0 {
			key.minute = int16(rng.IntN(1440))
		}
		at := s.find(e, key)
		got, want := &s.list[at], e.newTerm(key)
		if got.key != key || got.time != want.time || got.underlying != want.underlying || got.fx != want.fx ||
			math.Float64bits(got.rate) != math.Float64bits(want.rate) || math.Float64bits(got.forward) != math.Float64bits(want.forward) ||
			got.after != want.after || got.curveInside != want.curveInside || got.dividendsPV != want.dividendsPV ||
			!reflect.DeepEqual(got.dividends, want.dividends) || got.smile != want.smile {
			t.Fatalf("%+v: %+v, want %+v", key, *got, want)
		}
		if again := s.find(e, key); again != at {
			t.Fatalf("%+v stands at %d and at %d", key, at, again)
		}
		most = max(most, len(s.list))
	}
	if most < maxTerms || most > maxTerms+schema.BatchRows {
		t.Errorf("%d terms at most, want about %d", most, maxTerms)
	}
}
