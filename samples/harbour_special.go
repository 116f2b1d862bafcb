package samples

import (
	"fmt"
	"sort"
	"strings"

	"nightbook/schema"
)

// today holds what expires around as_of, half past ten in the morning.
func (h *harbourDesk) today() {
	d := h.asOf
	h.option("MAJORS", h.eurusd, -8, "1000000", "call", "1.085", at(d, "15:00"), "expiry") // four and a half hours left
	h.option("MAJORS", h.eurusd, -8, "1000000", "put", "1.088", at(d, "15:00"), "expiry")
	h.option("ASIA", h.usdjpy, 6, "1000000", "call", "149.5", at(d+1, "09:00"), "expiry") // gone before tomorrow at this time
	h.option("ASIA", h.usdjpy, 5, "1000000", "put", "150.5", at(d, "09:00"), "expiry")    // this morning
	h.option("MAJORS", h.gbpusd, -4, "1000000", "put", "1.28", at(d, "10:30"), "expiry")  // this minute
	h.option("MAJORS", h.gbpusd, 4, "1000000", "call", "1.27", d.String(), "expiry")      // some time today
	h.option("KELP", h.kelpNear, -25, "50", "call", "405", at(day(2026, 10, 9), "12:30"), "expiry")
}

// faulty breaks lines, one way each. A line that is good but for its market
// data is broken where it is added.
func (h *harbourDesk) faulty() {
	fault := func(code schema.RejectCode, row map[string]string, pairs ...string) {
		for i := 0; i < len(pairs); i += 2 {
			row[pairs[i]] = pairs[i+1]
		}
		h.breaks(row, code)
	}
	like := func() map[string]string {
		return h.option("CLIENTS", h.eurusd, h.between(1, 5), "1000000", "call", h.eurusd.offset(10), h.quarter, "outright")
	}
	fault(schema.BadNumber, like(), "strike", "1,08x")
	fault(schema.BadDate, like(), "expiry", "01/14/2027 15:00")
	fault(schema.OutOfRange, like(), "strike", "-1.095")
	fault(schema.MissingValue, like(), "quantity", "")
	fault(schema.NoFX, h.linear("FUNDING", "SEK", "cash", 500_000), "strategy", "funding")
	fault(schema.NoRate, h.option("STONE", h.teasel, 15, "1000", "put", h.teasel.near(980), h.goodsMid, "trial"))
	fault(schema.BadRow, like(), "Notiz", "siehe Mail vom 13.", stray, "bitte prüfen")
	good := h.option("CLIENTS", h.gbpusd, 1, "1000000", "call", "1.3", h.half, "outright")
	good["Notiz"] = "Kunde: \"bis 1,35 laufen lassen\";\nLinie größer als üblich"
}

var harbourTraders = map[string]string{
	"MAJORS": "Jörn Kolk", "ASIA": "Ada Wattling", "CROSSES": "Jörn Kolk", "CLIENTS": "Zoë Marsk",
	"KELP": "Piet Düne", "STONE": "Piet Düne", "MARSH": "Zoë Marsk", "FUNDING": "Haus",
}

// harbourHeaders maps our column names to the house's, table by table.
var harbourHeaders = map[string]map[string]string{
	"positions": {"line_id": "Position", "book": "Buch", "underlying": "Basiswert", "instrument": "Art", "quantity": "Menge",
		"multiplier": "Kontraktgröße", "option_type": "Typ", "strike": "Basispreis", "expiry": "Verfall", "vol": "Vola",
		"entry_price": "Einstand", "strategy": "Strategie"},
	"underlyings": {"underlying": "Basiswert", "kind": "Gattung", "currency": "Währung", "price": "Kurs", "carry_yield": "Ertrag",
		"vol": "Vola", "curve": "Kurve", "observed_at": "Stand"},
	"rates":    {"curve": "Kurve", "tenor": "Laufzeit", "zero_rate": "Zins"},
	"vols":     {"underlying": "Basiswert", "expiry": "Verfall", "strike": "Basispreis", "vol": "Vola"},
	"fx":       {"currency": "Währung", "rate": "Kurs"},
	"books":    {"book": "Buch", "parent": "Über", "owner": "Leitung"},
	"holidays": {"calendar": "Kalender", "date": "Tag"},
}

// houseTable starts a table under the house's headers.
func houseTable(name string, columns ...string) *table {
	var header []string
	for _, c := range columns {
		header = append(header, harbourHeaders[name][c])
	}
	return newTable(house, header...)
}

func (h *harbourDesk) underlyingsFile() file {
	t := houseTable("underlyings", "underlying", "kind", "currency", "price", "carry_yield", "vol", "curve", "observed_at")
	for _, q := range h.quotes {
		t.text(q.name)
		t.text(schema.Kinds[q.kind])
		t.text(q.currency)
		t.number(q.price)
		if q.kind == schema.FX {
			t.number(decimal{q.yield, 4})
		} else {
			t.text("")
		}
		if q.flat == 0 {
			t.text("")
		} else {
			t.vol(q.flat)
		}
		t.text(q.curve)
		t.text("14/10/2026 10:30")
		t.end()
	}
	return t.file("underlyings.csv")
}

// volsFile writes the surfaces, one point of MARSHOIL-JUN27 without its
// volatility. The table is the largest of the folder and comes compressed.
func (h *harbourDesk) volsFile() file {
	t := houseTable("vols", "underlying", "expiry", "strike", "vol")
	for _, q := range h.quotes {
		if q.smile != nil {
			q.surface(t, h.asOf)
		}
	}
	t.text(h.marsh.name)
	t.text("12/02/2027 12:30")
	t.text("75")
	t.text("n/a")
	t.end()
	return t.file("vols.csv.gz")
}

func harbourRates() file {
	t := houseTable("rates", "curve", "tenor", "zero_rate")
	tenors := []string{"1D", "1W", "1M", "3M", "6M", "1Y", "2Y"}
	for _, c := range []struct {
		curve string
		rates []int64 // hundred-thousandths
	}{
		{"USD", []int64{4105, 4098, 4060, 3991, 3875, usdRate * 10, 3588}},
		{"EUR", []int64{1931, 1936, 1950, 1985, 2040, eurRate * 10, 2235}},
		{"GBP", []int64{4012, 4010, 4001, 3978, 3946, gbpRate * 10, 3822}},
		{"JPY", []int64{481, 487, 512, 566, 648, jpyRate * 10, 934}},
	} {
		for i, r := range c.rates {
			t.text(c.curve)
			t.text(tenors[i])
			t.number(decimal{r, 5})
			t.end()
		}
	}
	return t.file("rates.csv")
}

func harbourFX() file {
	t := houseTable("fx", "currency", "rate")
	for _, c := range []struct {
		code string
		fx   int64
	}{{"USD", usdFX}, {"EUR", eurFX}, {"GBP", gbpFX}, {"JPY", jpyFX}} {
		t.text(c.code)
		t.number(decimal{c.fx, 6})
		t.end()
	}
	return t.file("fx.csv")
}

func harbourBooks() file {
	t := houseTable("books", "book", "parent", "owner")
	for _, b := range [][3]string{
		{"HARBOUR", "", "Tilda Priel"},
		{"PAIRS", "HARBOUR", "Jörn Kolk"}, {"GOODS", "HARBOUR", "Piet Düne"}, {"FUNDING", "HARBOUR", "Tilda Priel"},
		{"MAJORS", "PAIRS", "Jörn Kolk"}, {"ASIA", "PAIRS", "Ada Wattling"}, {"CROSSES", "PAIRS", "Jörn Kolk"}, {"CLIENTS", "PAIRS", "Zoë Marsk"},
		{"KELP", "GOODS", "Piet Düne"}, {"STONE", "GOODS", "Piet Düne"}, {"MARSH", "GOODS", "Zoë Marsk"},
	} {
		t.text(b[0])
		t.text(b[1])
		t.text(b[2])
		t.end()
	}
	return t.file("books.csv")
}

func harbourHolidays() file {
	t := houseTable("holidays", "calendar", "date")
	for _, d := range []schema.Date{day(2026, 10, 16), day(2026, 12, 25), day(2027, 1, 1)} {
		t.text("LOCKGATE")
		t.date(d)
		t.end()
	}
	return t.file("holidays.csv")
}

// harbourRun is run.toml: the house's habits, and its headers.
var harbourRun = func() string {
	var b strings.Builder
	b.WriteString(`# The harbour currency and goods desk. Everything is invented; see README.md.
as_of = "2026-10-14T10:30"
reporting_currency = "USD"
calendar = "LOCKGATE"

[csv]
delimiter = ";"
decimal_comma = true
date_format = "DD/MM/YYYY"
encoding = "windows-1252"

[vols]
unit = "percent"

[workbook]
max_lines = 10000

[parquet]
compression = "snappy"
`)
	for _, t := range schema.Inputs {
		headers := harbourHeaders[t.Name]
		if headers == nil {
			continue
		}
		fmt.Fprintf(&b, "\n[columns.%s]\n", t.Name)
		var ours []string
		for c := range headers {
			ours = append(ours, c)
		}
		sort.Strings(ours)
		for _, c := range ours {
			fmt.Fprintf(&b, "%s = %q\n", c, headers[c])
		}
	}
	return b.String()
}()
