package risk

import (
	"math"
	"strings"

	"nightbook/risk/market"
	"nightbook/risk/vec"
	"nightbook/schema"
)

var nan = math.NaN()

// largeDividends is the share of the price above which what dividends are worth is
// told of: at 40 % volatility and ten years of quarterly dividends of 1 %, put, call
// and forward then miss their parity by a hundredth of the price.
const largeDividends = 0.4

// resolveBlock finds for a block of rows what each is priced with, and writes the
// inputs used. The rows that are not refused go to their routes.
func (e *Engine) resolveBlock(b *schema.Batch, from, to int, w *Worker) {
	for _, s := range [...][]float64{b.Forward, b.VolUsed, b.Rate, b.Carry, b.Time, b.DividendsPV, b.PriceError, b.Boundary} {
		fill(s[from:to], nan)
	}
	fill(b.DividendModel[from:to], e.market.Models.Dividends)
	clear(b.Setting[from:to])
	clear(b.VolSource[from:to])
	clear(b.Curve[from:to])
	clear(b.ExerciseNow[from:to])
	w.onSurface = w.onSurface[:0]
	for i := from; i < to; i++ {
		if b.Status[i] == schema.Rejected {
			continue
		}
		if route := e.resolve(b, i, w); route != noRoute {
			w.rows[route] = append(w.rows[route], int32(i))
		}
	}
	w.smiles(b)
}

func fill[T any](s []T, x T) {
	for i := range s {
		s[i] = x
	}
}

// resolve finds for row i what it is priced with, and how, and writes the
// inputs used. It returns the row's route, or noRoute for a refused row.
func (e *Engine) resolve(b *schema.Batch, i int, w *Worker) uint8 {
	inst := b.Instrument[i]
	if inst != schema.Option && !plainTerms(b, i) {
		return noRoute
	}
	if inst == schema.Cash {
		return e.resolveCash(b, i, w)
	}

	at := w.terms.find(e, termKey{b.Underlying[i], b.Expiry[i], b.ExpiryMinute[i]})
	w.termOf[i] = at
	t := &w.terms.list[at]
	u := t.underlying
	switch {
	case u == nil:
		return refuse(b, i, schema.UnknownUnderlying, "underlying", e.dicts.Underlyings.Name(b.Underlying[i]), "the underlying is not in underlyings: add it there, or mend the name")
	case u.Fault != "":
		return refuse(b, i, schema.BadMarketData, "underlying", u.Name, u.Fault)
	case b.Currency[i] == 0:
		b.Currency[i] = u.Currency
	case b.Currency[i] != u.Currency:
		return refuse(b, i, schema.CurrencyMismatch, "currency", e.dicts.Currencies.Name(b.Currency[i]),
			"the price of "+u.Name+" is in "+e.dicts.Currencies.Name(u.Currency)+": a line in another currency is not priced; leave currency empty or mend it")
	}
	if !e.exchange(b, i, t.fx) {
		return noRoute
	}
	var payoff, exercise schema.Choice
	if inst == schema.Option {
		payoff, exercise = b.Payoff[i], b.Exercise[i]
	}
	product := productAt[inst][u.Kind][payoff][exercise][withoutDividends]
	if product == 0 {
		code, column, reason := unsupported(inst, u.Kind, payoff, exercise)
		return refuse(b, i, code, column, choiceText(b, i, column), reason)
	}
	p := &products[product-1]
	route := 2 * (product - 1)
	b.Spot[i] = u.Price
	switch {
	case u.Price < 0 && u.Kind != schema.FuturePrice && u.Kind != schema.Spread:
		return refuse(b, i, schema.OutOfRange, "underlying", u.Name, "the price of "+u.Name+" is negative: only kinds future and spread may have such a price")
	case inst == schema.Stock, inst == schema.Future:
		if math.IsNaN(b.EntryPrice[i]) && inst == schema.Future {
			b.EntryPrice[i] = u.Price
		}
		if inst == schema.Future && b.Expiry[i] != schema.NoDate && t.time <= 0 {
			return route + 1
		}
		return route
	}
	if inst == schema.Option && u.Kind != schema.Spread {
		if u.Price <= 0 {
			return refuse(b, i, schema.OutOfRange, "underlying", u.Name, "the price of "+u.Name+" is not positive, and model "+schema.Models[p.model]+" needs it to be")
		}
		if b.Strike[i] <= 0 {
			return refuse(b, i, schema.OutOfRange, "strike", number(b.Strike[i]), "the strike must be positive for model "+schema.Models[p.model])
		}
	}

	if inst == schema.Option && !e.checkTerms(b, i) {
		return noRoute
	}

	if t.time <= 0 {
		b.Time[i], b.Forward[i] = 0, u.Price
		return route + 1
	}
	if u.Curve == nil {
		return refuse(b, i, u.CurveFault.Code, "underlying", u.Name, u.CurveFault.Reason)
	}
	if t.dividends != nil {
		if product = productAt[inst][u.Kind][payoff][exercise][withDividends]; product == 0 {
			return refuse(b, i, schema.Unsupported, "payoff", choiceText(b, i, "payoff"), u.Name+" pays a cash dividend on "+u.Dividends[0].ExDate.String()+
				", before expiry, with which payoff "+schema.Payoffs[payoff]+" is not priced by this version, and it is never left out: take the line out or price it elsewhere")
		}
		route = 2 * (product - 1)
		if t.dividendsPV > largeDividends*u.Price {
			w.note(i, schema.DividendsLarge, b.Underlying[i])
		}
		if b.DividendsPV[i] = t.dividendsPV; inst == schema.Option && e.market.Models.Dividends == schema.Escrowed && !(t.forward > 0) {
			return refuse(b, i, schema.BadMarketData, "underlying", u.Name, "the forward price to expiry is "+number(t.forward)+
				" once its cash dividends are paid, and the escrowed model has nothing left to price: check dividends, or set dividends = \"piecewise\" under [models]")
		}
	}
	b.Time[i], b.Rate[i], b.Forward[i] = t.time, t.rate, t.forward
	b.Curve[i] = u.CurveID
	if b.Carry[i] = u.Yield; u.Kind == schema.FuturePrice || u.Kind == schema.Spread {
		b.Carry[i] = t.rate
	}
	if !t.curveInside {
		w.note(i, schema.CurveFlatEnd, u.CurveID)
	}
	if inst == schema.Option && !e.volatility(b, i, u, t, w) {
		return noRoute
	}
	return route
}

// resolveCash takes the underlying of a cash line for its currency.
func (e *Engine) resolveCash(b *schema.Batch, i int, w *Worker) uint8 {
	name := e.dicts.Underlyings.Name(b.Underlying[i])
	currency := e.dicts.Currencies.Code(strings.ToUpper(name))
	if b.Currency[i] != 0 && b.Currency[i] != currency {
		return refuse(b, i, schema.CurrencyMismatch, "currency", e.dicts.Currencies.Name(b.Currency[i]),
			"the underlying of a cash line is its currency, and it says "+name+": leave currency empty, or make the two the same")
	}
	b.Currency[i] = currency
	fx := e.market.FX(currency)
	if fx.Problem.Code != "" {
		return refuse(b, i, fx.Problem.Code, "underlying", name, fx.Problem.Reason)
	}
	b.FX[i], b.Spot[i] = fx.Rate, 1
	w.termOf[i] = w.terms.find(e, termKey{day: schema.NoDate, minute: schema.NoMinute})
	return 2 * (productAt[schema.Cash][0][0][0][withoutDividends] - 1)
}

// exchange sets the row's rate into the reporting currency, or refuses it.
func (e *Engine) exchange(b *schema.Batch, i int, fx *market.Currency) bool {
	if fx.Problem.Code != "" {
		refuse(b, i, fx.Problem.Code, "currency", e.dicts.Currencies.Name(b.Currency[i]), fx.Problem.Reason)
		return false
	}
	b.FX[i] = fx.Rate
	return true
}

// volatility sets the row's volatility and its source, or refuses it: the
// line's own before the surface before the underlying's flat one.
func (e *Engine) volatility(b *schema.Batch, i int, u *market.Underlying, t *term, w *Worker) bool {
	switch {
	case !math.IsNaN(b.Vol[i]):
		vol, tooHigh := e.market.LineVol(b.Vol[i], u.Kind)
		if tooHigh != "" {
			refuse(b, i, schema.OutOfRange, "vol", number(b.Vol[i]), tooHigh)
			return false
		}
		b.VolUsed[i], b.VolSource[i] = vol, schema.VolFromLine
	case u.VolFault != "":
		refuse(b, i, schema.BadMarketData, "underlying", u.Name, u.VolFault)
		return false
	case u.Surface != nil && !(t.forward > 0) && u.Kind != schema.Spread:
		refuse(b, i, schema.BadMarketData, "underlying", u.Name, "the forward price to expiry is "+number(t.forward)+
			" once its cash dividends are paid, and the surface is laid out along it: check dividends, or give the line a vol")
		return false
	case u.Surface != nil:
		b.VolSource[i] = schema.VolFromSurface
		w.onSurface = append(w.onSurface, int32(i))
		if !t.smile.Inside {
			w.note(i, schema.SurfaceFlatEnd, b.Underlying[i])
		}
	case !math.IsNaN(u.FlatVol):
		b.VolUsed[i], b.VolSource[i] = u.FlatVol, schema.VolFromUnderlying
		w.note(i, schema.VolFallback, b.Underlying[i])
	default:
		refuse(b, i, schema.NoVol, "vol", "", "there is no volatility: give the line a vol, or "+u.Name+" a surface in vols or a vol in underlyings")
		return false
	}
	return true
}

// smiles reads the volatilities of the rows of a block that have theirs from a surface.
func (w *Worker) smiles(b *schema.Batch) {
	var strike, forward, k [blockRows]float64
	n := len(w.onSurface)
	gather(strike[:n], b.Strike, w.onSurface)
	gather(forward[:n], b.Forward, w.onSurface)
	vec.LogRatio(k[:n], strike[:n], forward[:n])
	for j, i := range w.onSurface {
		t := &w.terms.list[w.termOf[i]]
		if t.underlying.Kind == schema.Spread {
			k[j] = strike[j] - forward[j]
		}
		b.VolUsed[i] = t.smile.Vol(k[j])
	}
}

// choiceText returns the word at fault for a product that does not exist.
func choiceText(b *schema.Batch, i int, column string) string {
	switch column {
	case "exercise":
		return schema.Exercises[b.Exercise[i]]
	case "payoff":
		return schema.Payoffs[b.Payoff[i]]
	}
	return schema.Instruments[b.Instrument[i]]
}
