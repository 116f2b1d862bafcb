package risk

import (
	"context"
	"slices"

	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/schema"
)

// Engine prices batches against one market. It may be used by several
// goroutines, each with its own Worker.
type Engine struct {
	market *market.Market
	dicts  *schema.Dicts
	after  [instrument.Steps]schema.Moment // the moments of the theta revaluations
}

// NewEngine returns an engine for a market.
func NewEngine(m *market.Market, d *schema.Dicts) *Engine {
	e := &Engine{market: m, dicts: d}
	e.after[instrument.NextDay] = schema.Moment{Day: m.AsOf.Day + 1, Minute: m.AsOf.Minute}
	e.after[instrument.NextBusinessDay] = schema.Moment{Day: m.Calendar.Next(m.AsOf.Day), Minute: m.AsOf.Minute}
	return e
}

// Kind returns the kind of the underlying of a code, 0 where there is none.
func (e *Engine) Kind(c schema.Code) schema.Choice {
	if u := e.market.Underlying(c); u != nil {
		return u.Kind
	}
	return 0
}

// Worker is the scratch memory of one goroutine.
type Worker struct {
	terms terms
	notes map[noteKey]*schema.Note
	taken []rowNote

	termOf    []int32   // by row of the batch: where in terms.list
	onSurface []int32   // the rows whose volatility is read off a surface
	rows      [][]int32 // by route: 2·product, plus 1 for its expired form
	late      []int
	run       instrument.Run
}

// NewWorker returns scratch memory for one goroutine.
func (e *Engine) NewWorker() *Worker {
	w := &Worker{notes: map[noteKey]*schema.Note{}, rows: make([][]int32, 2*len(products))}
	w.run.Methods = methods(e.market)
	return w
}

const noRoute = 255

// Price fills the results of a batch. Rows it refuses get Status Rejected and a
// Reject; rows refused before are left alone. The error is that of a context that
// ended before the batch was done, which then must not be used.
func (e *Engine) Price(ctx context.Context, b *schema.Batch, w *Worker) error {
	w.run.Methods.InterruptedBy(func() bool { return ctx.Err() != nil })
	w.terms.trim()
	w.termOf = append(w.termOf[:0], make([]int32, b.N)...)
	for i := range w.rows {
		w.rows[i] = w.rows[i][:0]
	}
	late := w.late[:0] // blocks with lines that wait
	for from := 0; from < b.N; from += blockRows {
		to := min(from+blockRows, b.N)
		e.resolveBlock(b, from, to, w)
		waiting := false
		for route, rows := range w.rows {
			if len(rows) > 0 && sharesWork(route) {
				waiting = waiting || int(rows[len(rows)-1]) >= from
			} else if len(rows) > 0 {
				e.priceRun(b, w, route, rows)
				w.rows[route] = rows[:0]
			}
		}
		if waiting {
			late = append(late, from)
		} else {
			measure(b, from, to)
		}
	}
	for route, rows := range w.rows {
		if len(rows) > 0 {
			e.priceRun(b, w, route, rows)
		}
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	for _, from := range late {
		measure(b, from, min(from+blockRows, b.N))
	}
	w.late = late
	slices.SortStableFunc(b.Rejects, func(x, y schema.Reject) int { return x.Index - y.Index })
	e.flushNotes(b, w)
	return nil
}

// blockRows is how many rows go through all steps together, so that what one step
// leaves is still in the cache for the next.
const blockRows = 512

// sharesWork reports whether the lines of a route wait for the end of the batch:
// the more of them come together, the less each takes.
func sharesWork(route int) bool { return route%2 == 0 && products[route/2].knowsExercise() }

// priceRun gathers the rows of one route, prices them and scatters the results.
func (e *Engine) priceRun(b *schema.Batch, w *Worker, route int, rows []int32) {
	p := &products[route/2]
	price, model := p.price, p.model
	if route%2 == 1 {
		price, model = p.expired, schema.ModelPayoff
		if p.instrument == schema.Future {
			model = p.model
		}
	}
	r := &w.run
	r.Resize(len(rows))
	r.SameDay = e.after[instrument.NextDay] == e.after[instrument.NextBusinessDay]
	gather(r.Spot, b.Spot, rows)
	gather(r.Strike, b.Strike, rows)
	gather(r.Time, b.Time, rows)
	gather(r.Vol, b.VolUsed, rows)
	gather(r.Rate, b.Rate, rows)
	gather(r.Yield, b.Carry, rows)
	gather(r.Entry, b.EntryPrice, rows)
	for j, i := range rows {
		r.Sign[j] = orientations[b.OptionType[i]]
	}
	for s, after := range r.TimeAfter {
		if s == instrument.NextBusinessDay && r.SameDay {
			copy(after, r.TimeAfter[instrument.NextDay])
			break
		}
		for j, i := range rows {
			after[j] = w.terms.list[w.termOf[i]].after[s]
		}
	}
	if p.payoff > schema.Vanilla {
		e.gatherTerms(b, r, rows)
	}
	if p.dividends == withDividends {
		for j, i := range rows {
			r.Dividends[j] = w.terms.list[w.termOf[i]].dividends
		}
	}
	price(r)
	for k, s := range r.Greeks.Slices() {
		scatter(*greekColumns(&b.Results)[k], *s, rows)
	}
	// the two revaluations wait in the theta columns for measure
	scatter(b.Measures[schema.ThetaCash1D], r.After[instrument.NextDay], rows)
	scatter(b.Measures[schema.ThetaCash1BD], r.After[instrument.NextBusinessDay], rows)
	status := schema.Priced
	if route%2 == 1 {
		status = schema.Expired
	}
	for _, i := range rows {
		b.Model[i], b.Status[i] = model, status
	}
	if p.instrument != schema.Option {
		for _, i := range rows {
			b.Residual[i] = nan
		}
	}
	if sharesWork(route) {
		e.exercise(b, w, rows)
	}
}

// worstError is the error of a price by finite differences, as a share of the
// spot, beyond which no line is priced: the loosest tolerance that can be asked for.
const worstError = 1e-2

// exercise scatters what is known of the rows of a run besides their values.
func (e *Engine) exercise(b *schema.Batch, w *Worker, rows []int32) {
	x := &w.run.Exercise
	scatter(b.Boundary, x.Boundary, rows)
	scatter(b.PriceError, x.PriceError, rows)
	for j, i := range rows {
		b.ExerciseNow[i] = x.Flags[j]&instrument.ExerciseNow != 0
		switch {
		case x.Flags[j]&instrument.OnGrid != 0:
			b.Model[i] = schema.ModelFiniteDifferences
		case x.Flags[j]&instrument.InClosedForm != 0:
			b.Model[i] = schema.ModelBSM
		default:
			b.Setting[i] = e.market.Models.American
		}
		switch {
		case x.PriceError[j] > worstError*b.Spot[i]:
			refuse(b, int(i), schema.Inaccurate, "", "", "the estimated error of its price by finite differences is "+number(x.PriceError[j])+
				", more than 1 % of the price of the underlying: price it elsewhere, or check vol "+number(b.VolUsed[i])+", time "+number(b.Time[i])+" and the dividends of the underlying")
		case x.Flags[j]&instrument.Uncertain != 0:
			w.note(int(i), schema.PriceUncertain, b.Underlying[i])
		}
	}
}

// greekColumns returns the columns of the results in the order of
// model.Greeks.Slices.
func greekColumns(r *schema.Results) [11]*[]float64 {
	return [11]*[]float64{&r.Price, &r.Delta, &r.Gamma, &r.Vega, &r.Theta, &r.Rho, &r.CarryRho, &r.Vanna, &r.Volga, &r.Charm, &r.Residual}
}

func scatter(to, from []float64, rows []int32) {
	from = from[:len(rows)]
	for j, i := range rows {
		to[i] = from[j]
	}
}

func gather(to, from []float64, rows []int32) {
	to = to[:len(rows)]
	for j, i := range rows {
		to[j] = from[i]
	}
}

// orientations are +1 for a call, −1 for a put, 0 for neither.
var orientations = [...]float64{0, schema.Call: 1, schema.Put: -1}
