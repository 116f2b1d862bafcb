package market

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"nightbook/schema"
)

// Market is a snapshot ready for pricing. It does not change after New and may
// be used by several goroutines.
type Market struct {
	AsOf      schema.Moment
	Calendar  *Calendar
	Reporting string
	Models    schema.ModelsConfig
	percent   bool // volatilities came in percent

	underlyings []*Underlying // by schema.Code of the underlying
	fx          []Currency    // by schema.Code of the currency
}

// Underlying is one underlying with all that prices a line on it.
type Underlying struct {
	Name     string
	Kind     schema.Choice
	Currency schema.Code
	Price    float64
	Yield    float64 // q, per year; of kind future unused
	FlatVol  float64 // NaN where there is none
	CurveID  schema.Code
	Curve    *Curve   // nil: CurveFault says why
	Surface  *Surface // nil: there is none, or VolFault says why not

	Fault      string // not "": no line on it may be priced
	CurveFault Problem
	VolFault   string     // not "": neither surface nor flat volatility may be used
	Dividends  []Dividend // after as_of, by ex-date; of kind equity and index only
}

// LineVol returns a line's own volatility in the unit of its kind, or what is
// wrong with it. The reader has taken it for one in the files' unit; that of a
// spread is in units of its price, whatever the others'.
func (m *Market) LineVol(vol float64, kind schema.Choice) (float64, string) {
	switch {
	case kind == schema.Spread && m.percent:
		return 100 * vol, ""
	case kind == schema.Spread:
		return vol, ""
	case vol > maxVol && m.percent:
		return vol, `expected a volatility in percent, from 0 to 1000, as [vols] unit = "percent" says`
	case vol > maxVol:
		return vol, `expected a volatility as a decimal, from 0 to 10 (1000 %): 0.20 is 20 %; if the files give percent, set [vols] unit = "percent"`
	}
	return vol, ""
}

// maxVol is the largest volatility that is believed: 1000 %.
const maxVol = 10

// Problem is a reason for refusing a line.
type Problem struct {
	Code   schema.RejectCode
	Reason string
}

// Currency is a currency's rate into the reporting currency.
type Currency struct {
	Rate    float64
	Problem Problem // Code "" where Rate may be used
}

// Underlying returns the underlying of a code, or nil.
func (m *Market) Underlying(c schema.Code) *Underlying {
	if int(c) < len(m.underlyings) {
		return m.underlyings[c]
	}
	return nil
}

// FX returns the rate of a currency code into the reporting currency.
func (m *Market) FX(c schema.Code) *Currency {
	if int(c) < len(m.fx) && (m.fx[c].Rate != 0 || m.fx[c].Problem.Code != "") {
		return &m.fx[c]
	}
	return &noRate
}

var noRate = Currency{math.NaN(), Problem{schema.NoFX, "fx has no rate for this currency: add a row"}}

// New builds a market. The notes are warnings about the snapshot. The error is
// a fault that leaves no line to price.
func New(cfg *schema.Config, raw *schema.Market, d *schema.Dicts) (*Market, []schema.Note, error) {
	b := builder{cfg: cfg, raw: raw, dicts: d, m: &Market{AsOf: cfg.AsOf, Reporting: cfg.ReportingCurrency, Models: cfg.Models.OrDefault(), percent: cfg.Vols.Percent}, faults: faultsByName(raw.Faults)}
	for _, t := range []struct{ table, what string }{{"books", "every sum along the book tree"}, {"holidays", "every line's theta_cash_1bd"}} {
		if row := refused(raw.Faults, t.table, nil); row != nil {
			return nil, nil, fmt.Errorf("%s has refused rows, and %s depends on it: mend %w", t.table, t.what, row)
		}
	}
	if row := refused(raw.Faults, "fx", &cfg.ReportingCurrency); row != nil {
		return nil, nil, fmt.Errorf("the fx row of the reporting currency is refused: take it out, or mend %w", row)
	}
	for _, r := range raw.FX {
		if r.Currency == cfg.ReportingCurrency && r.Rate != 1 {
			return nil, nil, fmt.Errorf("fx gives the reporting currency %s the rate %v: the table is quoted in another currency; rates are units of %s for one unit", r.Currency, r.Rate, r.Currency)
		}
	}
	nameless := ""
	for _, table := range []string{"underlyings", "rates", "fx", "vols", "dividends"} {
		if row := refused(raw.Faults, table, &nameless); row != nil {
			return nil, nil, fmt.Errorf("%s has a refused row whose name cannot be read, so every line is in doubt: mend %w", table, row)
		}
	}
	b.calendar()
	b.currencies()
	b.curves()
	b.underlyings()
	return b.m, b.notes, nil
}

// refused returns the first refused row of a market table, of one name if that is
// given, with what is wrong with it; nil is that there is none.
func refused(faults []schema.Fault, table string, name *string) error {
	for i := range faults {
		if f := &faults[i]; f.Table == table && (name == nil || f.Name == *name) {
			return f.CellError()
		}
	}
	return nil
}

// faultTable tells, by name, where the first refused row of a market table is.
type faultTable map[string]string

func faultsByName(faults []schema.Fault) map[string]faultTable {
	byTable := map[string]faultTable{}
	for _, f := range faults {
		t := byTable[f.Table]
		if t == nil {
			t = faultTable{}
			byTable[f.Table] = t
		}
		if _, ok := t[f.Name]; !ok {
			t[f.Name] = fmt.Sprintf("%s line %d (%s)", f.File, f.Line, f.Code)
		}
	}
	return byTable
}

type builder struct {
	cfg    *schema.Config
	raw    *schema.Market
	dicts  *schema.Dicts
	faults map[string]faultTable
	m      *Market
	notes  []schema.Note
	curve  map[string]*Curve
}

func (b *builder) note(code schema.NoteCode, subject, format string, args ...any) {
	b.notes = append(b.notes, schema.Note{Code: code, Subject: subject, Message: fmt.Sprintf(format, args...), Count: 1})
}

func (b *builder) calendar() {
	c, n := newCalendar(b.cfg.Calendar, b.raw.Holidays)
	b.m.Calendar = c
	if n == 0 {
		b.note(schema.NoHolidays, b.cfg.Calendar, "no holidays for calendar %q: theta_cash_1bd takes Monday to Friday as business days", b.cfg.Calendar)
	}
}

func (b *builder) currencies() {
	set := func(name string, c Currency) {
		code := b.dicts.Currencies.Code(name)
		for int(code) >= len(b.m.fx) {
			b.m.fx = append(b.m.fx, Currency{})
		}
		b.m.fx[code] = c
	}
	for _, r := range b.raw.FX {
		set(r.Currency, Currency{Rate: r.Rate})
	}
	for name, at := range b.faults["fx"] {
		set(name, Currency{math.NaN(), Problem{schema.BadMarketData, "the fx rate has a refused row: mend " + at}})
	}
	set(b.cfg.ReportingCurrency, Currency{Rate: 1})
}

func (b *builder) curves() {
	rows := map[string][]schema.RateRow{}
	for _, r := range b.raw.Rates {
		rows[r.Curve] = append(rows[r.Curve], r)
	}
	b.curve = map[string]*Curve{}
	for name, rs := range rows {
		c, err := newCurve(name, rs, b.cfg.AsOf)
		if err != nil { // the reader refuses such rows; a market built by hand may hold them
			b.fault("rates", name, fmt.Sprintf("curve %s: %v", name, err))
			continue
		}
		b.curve[name] = c
	}
}

func (b *builder) fault(table, name, at string) {
	if b.faults[table] == nil {
		b.faults[table] = faultTable{}
	}
	if _, ok := b.faults[table][name]; !ok {
		b.faults[table][name] = at
	}
}

func (b *builder) underlyings() {
	vols := map[string][]schema.VolRow{}
	for _, v := range b.raw.Vols {
		vols[v.Underlying] = append(vols[v.Underlying], v)
	}
	paid := map[string][]schema.DividendRow{}
	for _, d := range b.raw.Dividends {
		paid[d.Underlying] = append(paid[d.Underlying], d)
	}
	set := func(name string, u *Underlying) {
		code := b.dicts.Underlyings.Code(name)
		for int(code) >= len(b.m.underlyings) {
			b.m.underlyings = append(b.m.underlyings, nil)
		}
		b.m.underlyings[code] = u
	}
	for _, r := range b.raw.Underlyings {
		set(r.Name, b.underlying(r, vols[r.Name], paid[r.Name]))
	}
	unused(b, "vols", vols)
	unused(b, "dividends", paid)
	for name, at := range b.faults["underlyings"] {
		set(name, &Underlying{Name: name, Fault: "the underlying has a refused row: mend " + at})
	}
}

// unused notes the names of a table that no underlying bears: a slip of the pen
// there would leave the right underlying without its rows.
func unused[V any](b *builder, table string, rows map[string][]V) {
	known := map[string]bool{}
	for _, r := range b.raw.Underlyings {
		known[r.Name] = true
	}
	for _, name := range slices.Sorted(maps.Keys(rows)) {
		if _, refused := b.faults["underlyings"][name]; !known[name] && !refused {
			b.notes = append(b.notes, schema.Note{Code: schema.MarketRowUnused, Subject: name, Count: int64(len(rows[name])),
				Message: table + " has rows of " + name + ", which is not in underlyings: they are not used"})
		}
	}
}

func (b *builder) underlying(r schema.UnderlyingRow, vols []schema.VolRow, paid []schema.DividendRow) *Underlying {
	curve := r.Curve
	if curve == "" {
		curve = r.Currency
	}
	u := &Underlying{
		Name: r.Name, Kind: r.Kind, Currency: b.dicts.Currencies.Code(r.Currency),
		Price: r.Price, Yield: r.CarryYield, FlatVol: r.Vol,
		CurveID: b.dicts.Curves.Code(curve), Curve: b.curve[curve],
	}
	pays := r.Kind == schema.Equity || r.Kind == schema.Index
	switch {
	case pays:
		u.Dividends = dividends(paid, b.cfg.AsOf)
	case len(paid) > 0:
		b.notes = append(b.notes, schema.Note{Code: schema.MarketRowUnused, Subject: r.Name, Count: int64(len(paid)),
			Message: "dividends has rows of " + r.Name + ", which is of kind " + schema.Kinds[r.Kind] + ": they are not used; only kinds equity and index pay cash dividends"})
	}
	if at, bad := b.faults["dividends"][r.Name]; bad && pays {
		u.Fault = "its cash dividends have a refused row: mend " + at
	}
	if (r.Kind == schema.FuturePrice || r.Kind == schema.Spread) && r.CarryYield != 0 {
		u.Yield = 0
		b.note(schema.CarryIgnored, r.Name, "carry_yield %v of %s is not used: a futures price carries nothing", r.CarryYield, r.Name)
	}
	if u.Curve == nil {
		u.CurveFault = Problem{schema.NoRate, "rates has no curve " + curve + ": add it, or name another in underlyings"}
	}
	if at, bad := b.faults["rates"][curve]; bad {
		u.Curve, u.CurveFault = nil, Problem{schema.BadMarketData, "curve " + curve + " has a refused row: mend " + at}
	}
	if at, bad := b.faults["vols"][r.Name]; bad {
		u.VolFault = "its volatility surface has a refused row: mend " + at
		return u
	}
	if len(vols) == 0 {
		return u
	}
	if u.Curve == nil || r.Price <= 0 && r.Kind != schema.Spread {
		u.VolFault = "its volatility surface needs a forward price, and there is none: see its curve and price"
		return u
	}
	s, past, err := newSurface(vols, b.cfg.AsOf, r.Kind == schema.Spread, func(T float64, day schema.Date) float64 {
		rate, _ := u.Curve.Rate(T)
		return u.Forward(rate, T, day)
	})
	if len(past) > 0 {
		b.note(schema.SliceExpired, r.Name, "the surface of %s has slices that are not after as_of and are not used: %s", r.Name, joinDates(past))
	}
	if err != nil {
		u.VolFault = "its volatility surface cannot be built: " + err.Error()
		return u
	}
	u.Surface = s
	if s != nil {
		if i := s.calendarFall(); i > 0 {
			b.note(schema.SurfaceCalendar, r.Name, "at the money, total variance of %s falls between the expiries in %.4g and %.4g years: check the quotes", r.Name, s.slices[i-1].T, s.slices[i].T)
		}
	}
	return u
}

func joinDates(days []schema.Date) string {
	texts := make([]string, len(days))
	for i, d := range days {
		texts[i] = d.String()
	}
	return strings.Join(texts, ", ")
}
