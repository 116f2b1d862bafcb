package aggregate

import (
	"cmp"
	"math"
	"slices"

	"nightbook/schema"
)

// sums are the exact forms of schema.Totals.
type sums struct {
	priced, expired, rejected int64
	quantity                  Sum
	measures                  [schema.NumMeasures]Sum
}

func (s *sums) merge(t *sums) {
	s.priced += t.priced
	s.expired += t.expired
	s.rejected += t.rejected
	s.quantity.Merge(&t.quantity)
	for m := range s.measures {
		s.measures[m].Merge(&t.measures[m])
	}
}

func (s *sums) round() schema.Totals {
	t := schema.Totals{
		Lines: s.priced + s.expired, Priced: s.priced, Expired: s.expired, Rejected: s.rejected,
		Quantity: s.quantity.Round(),
	}
	for m := range s.measures {
		t.Measures[m] = s.measures[m].Round()
	}
	return t
}

// local are sums in the price currency, of lines on one underlying in one currency.
type local struct {
	sums
	deltaUnits   Sum
	measures     [schema.NumMeasures]Sum
	kind         schema.Choice
	spot, fx     float64
	underlying   schema.Code
	currency     schema.Code
	isUnderlying bool
}

// Totals adds up a run. It is not safe for concurrent use; sums made apart may
// be made one with Merge.
type Totals struct {
	dicts *schema.Dicts
	tree  *tree
	notes []schema.Note

	books     []*sums // by schema.Code of the book; nil where no line names it
	locals    map[[2]schema.Code]*local
	lastLocal *local
	rowBooks  []*sums  // of the batch at hand, by row
	rowLocals []*local // likewise
	noBook    sums     // rejected rows whose book could not be read
	codes     map[schema.RejectCode]int64
	worst     [3]float64 // see Summary.MaxResidual, MaxIntegralResidual, MaxPriceError
}

// NewTotals returns empty totals over the book tree of the snapshot.
func NewTotals(books []schema.BookRow, d *schema.Dicts) (*Totals, error) {
	t, notes, err := newTree(books)
	if err != nil {
		return nil, err
	}
	return &Totals{
		dicts: d, tree: t, notes: notes,
		locals: map[[2]schema.Code]*local{}, codes: map[schema.RejectCode]int64{}, worst: [3]float64{math.NaN(), math.NaN(), math.NaN()},
	}, nil
}

// AddRejects counts the refused rows of a batch. It is called before the batch
// is compacted.
func (t *Totals) AddRejects(b *schema.Batch) {
	for i := range b.Rejects {
		r := &b.Rejects[i]
		t.codes[r.Code]++
		t.book(b.Book[r.Index]).rejected++
	}
}

// AddLines adds the lines of a compacted batch. kind gives the kind of an
// underlying, 0 for a name that is none.
func (t *Totals) AddLines(b *schema.Batch, kind func(schema.Code) schema.Choice) {
	t.rowBooks, t.rowLocals = t.rowBooks[:0], t.rowLocals[:0]
	for i := range b.N {
		s, l := t.book(b.Book[i]), t.local(b, i, kind)
		t.rowBooks, t.rowLocals = append(t.rowBooks, s), append(t.rowLocals, l)
		if b.Status[i] == schema.Expired {
			s.expired++
			l.expired++
		} else {
			s.priced++
			l.priced++
		}
		s.quantity.Add(b.Quantity[i])
		l.quantity.Add(b.Quantity[i])
		l.deltaUnits.Add(b.DeltaUnits[i])
	}
	for m := range schema.NumMeasures {
		own, inBase := b.Measures[m], b.MeasuresInBase[m]
		for i, l := range t.rowLocals {
			t.rowBooks[i].measures[m].Add(inBase[i])
			l.sums.measures[m].Add(inBase[i])
			l.measures[m].Add(own[i])
		}
	}
	for i, r := range b.Residual[:b.N] {
		worst := &t.worst[0]
		switch b.Model[i] {
		case schema.ModelBoundaryIntegral:
			worst = &t.worst[1]
		case schema.ModelFiniteDifferences:
			worst, r = &t.worst[2], b.PriceError[i]/b.Spot[i]
		}
		if r > *worst || r == r && *worst != *worst {
			*worst = r
		}
	}
}

func (t *Totals) book(c schema.Code) *sums {
	if c == 0 {
		return &t.noBook
	}
	for int(c) >= len(t.books) {
		t.books = append(t.books, nil)
	}
	if t.books[c] == nil {
		t.books[c] = &sums{}
	}
	return t.books[c]
}

func (t *Totals) local(b *schema.Batch, i int, kind func(schema.Code) schema.Choice) *local {
	u, c := b.Underlying[i], b.Currency[i]
	if l := t.lastLocal; l != nil && l.underlying == u && l.currency == c && l.isUnderlying == (b.Instrument[i] != schema.Cash) {
		return l
	}
	key := [2]schema.Code{u, c}
	isUnderlying := b.Instrument[i] != schema.Cash
	if !isUnderlying {
		key[0] = ^u // cash is kept apart from an underlying that bears a currency's name
	}
	l := t.locals[key]
	if l == nil {
		l = &local{underlying: u, currency: c, spot: b.Spot[i], fx: b.FX[i], isUnderlying: isUnderlying}
		if isUnderlying {
			l.kind = kind(u)
		}
		t.locals[key] = l
	}
	t.lastLocal = l
	return l
}

// Summary rounds the sums into a summary: totals, books, underlyings,
// currencies, reject counts and notes about books.
func (t *Totals) Summary(s *schema.Summary) {
	listed := len(t.tree.nodes) > 0
	for c, sum := range t.books {
		if sum == nil {
			continue
		}
		name := t.dicts.Books.Name(schema.Code(c))
		if t.tree.nodes[name] == nil {
			t.tree.add(name)
			if listed { // without a books table every book stands at the top
				n := notInTree(name, "", 0)
				n.Count = sum.priced + sum.expired + sum.rejected
				t.notes = append(t.notes, n)
			}
		}
	}
	t.sumBooks(s)
	t.sumLocals(s)
	for _, c := range schema.RejectCodes {
		if n := t.codes[schema.RejectCode(c.Code)]; n > 0 {
			s.RejectCount = append(s.RejectCount, schema.CodeCount{Code: c.Code, Count: n})
			s.Rejects += n
		}
	}
	s.Notes = append(s.Notes, t.notes...)
	s.MaxResidual, s.MaxIntegralResidual, s.MaxPriceError = t.worst[0], t.worst[1], t.worst[2]
}

func (t *Totals) sumBooks(s *schema.Summary) {
	own := map[string]*sums{}
	for c, sum := range t.books {
		if sum != nil {
			own[t.dicts.Books.Name(schema.Code(c))] = sum
		}
	}
	total := &sums{}
	total.merge(&t.noBook)
	// Depth first, a book comes before the books below it: from the last to the
	// first, each is whole by the time it is added to the one above.
	var order []*node
	t.tree.walk(func(n *node, _ int, _ string) { order = append(order, n) })
	all := map[*node]*sums{}
	of := func(n *node) *sums {
		if all[n] == nil {
			all[n] = &sums{}
		}
		return all[n]
	}
	rounded := make(map[*node]schema.Totals, len(order))
	for _, n := range slices.Backward(order) {
		s := of(n)
		if o := own[n.book]; o != nil {
			s.merge(o)
		}
		if n.parent != nil {
			of(n.parent).merge(s)
		} else {
			total.merge(s)
		}
		rounded[n] = s.round()
		delete(all, n)
	}
	t.tree.walk(func(n *node, level int, path string) {
		b := schema.BookTotal{Book: n.book, Owner: n.owner, Path: path, Level: level, Listed: n.listed}
		if n.parent != nil {
			b.Parent = n.parent.book
		}
		if o := own[n.book]; o != nil {
			b.Own = o.round()
		}
		b.Totals = rounded[n]
		s.Books = append(s.Books, b)
	})
	s.Total = total.round()
}

func (t *Totals) sumLocals(s *schema.Summary) {
	currencies := map[schema.Code]*local{}
	for _, l := range t.locals {
		u := schema.UnderlyingTotal{
			Underlying: t.dicts.Underlyings.Name(l.underlying), Kind: l.kind,
			Currency: t.dicts.Currencies.Name(l.currency), Spot: l.spot, FX: l.fx,
			DeltaUnits: l.deltaUnits.Round(), Totals: l.round(),
		}
		c := currencies[l.currency]
		if c == nil {
			c = &local{fx: l.fx}
			currencies[l.currency] = c
		}
		c.merge(&l.sums)
		for m := range l.measures {
			u.Local[m] = l.measures[m].Round()
			c.measures[m].Merge(&l.measures[m])
		}
		s.Underlyings = append(s.Underlyings, u)
	}
	for code, l := range currencies {
		c := schema.CurrencyTotal{Currency: t.dicts.Currencies.Name(code), FX: l.fx, Totals: l.round()}
		for m := range l.measures {
			c.Local[m] = l.measures[m].Round()
		}
		s.Currencies = append(s.Currencies, c)
	}
	slices.SortFunc(s.Underlyings, func(a, b schema.UnderlyingTotal) int {
		return cmp.Or(cmp.Compare(a.Underlying, b.Underlying), cmp.Compare(a.Currency, b.Currency), cmp.Compare(a.Kind, b.Kind))
	})
	slices.SortFunc(s.Currencies, func(a, b schema.CurrencyTotal) int { return cmp.Compare(a.Currency, b.Currency) })
}
