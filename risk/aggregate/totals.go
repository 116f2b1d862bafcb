package aggregate

import (
	"cmp"
	"context"
	"math"
	"slices"

	"nightbook/schema"
)

// sums are the exact forms of schema.Totals.
type sums struct {
	row                       // quantity, and the measures in the reporting currency
	priced, expired, rejected int64
}

func (s *sums) merge(t *sums) {
	s.priced += t.priced
	s.expired += t.expired
	s.rejected += t.rejected
	s.row.merge(&t.row)
}

func (s *sums) round() schema.Totals {
	t := schema.Totals{
		Lines: s.priced + s.expired, Priced: s.priced, Expired: s.expired, Rejected: s.rejected,
		Quantity: s.row.round(0),
	}
	for m := range t.Measures {
		t.Measures[m] = s.row.round(1 + m)
	}
	return t
}

// local are sums of lines on one underlying in one currency.
type local struct {
	sums
	own          row // units of delta, and the measures in the price currency
	kind         schema.Choice
	spot, fx     float64
	underlying   schema.Code
	currency     schema.Code
	isUnderlying bool
}

// inCurrency returns the measures in the price currency.
func (l *local) inCurrency() (measures [schema.NumMeasures]float64) {
	for m := range measures {
		measures[m] = l.own.round(1 + m)
	}
	return measures
}

// Totals adds up a run. It is not safe for concurrent use.
type Totals struct {
	dicts *schema.Dicts
	tree  *tree
	notes []schema.Note

	books  []*sums // by schema.Code of the book; nil where no line names it
	locals map[localKey]*local
	recent [2][]*local // by code of the underlying: of underlyings, and of cash, the one in the currency met last
	noBook sums        // rejected rows whose book could not be read
	codes  map[schema.RejectCode]int64
	worst  [3]float64 // see Summary.MaxResidual, MaxIntegralResidual, MaxPriceError

	ofBook, ofLocal, own [blockRows]*row // of the lines at hand
}

// localKey names a local. Cash is kept apart from an underlying that bears a
// currency's name.
type localKey struct {
	underlying, currency schema.Code
	isUnderlying         bool
}

// NewTotals returns empty totals over the book tree of the snapshot.
func NewTotals(books []schema.BookRow, d *schema.Dicts) (*Totals, error) {
	t, notes, err := newTree(books)
	if err != nil {
		return nil, err
	}
	return &Totals{
		dicts: d, tree: t, notes: notes,
		locals: map[localKey]*local{}, codes: map[schema.RejectCode]int64{}, worst: [3]float64{math.NaN(), math.NaN(), math.NaN()},
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
	for from := 0; from < b.N; from += blockRows {
		t.addBlock(b, from, min(from+blockRows, b.N), kind)
	}
	t.lookForWorst(b)
}

// addBlock adds the lines from and up to.
func (t *Totals) addBlock(b *schema.Batch, from, to int, kind func(schema.Code) schema.Choice) {
	n := to - from
	ofBook, ofLocal, own := t.ofBook[:n], t.ofLocal[:n], t.own[:n]
	for j := range n {
		i := from + j
		s, l := t.book(b.Book[i]), t.local(b, i, kind)
		s.reserve()
		l.row.reserve()
		l.own.reserve()
		ofBook[j], ofLocal[j], own[j] = &s.row, &l.row, &l.own
		expired := int64(0)
		if b.Status[i] == schema.Expired {
			expired = 1
		}
		s.expired += expired
		l.expired += expired
		s.priced += 1 - expired
		l.priced += 1 - expired
	}
	addTwice(0, ofBook, ofLocal, b.Quantity[from:to])
	addOnce(0, own, b.DeltaUnits[from:to])
	for m := range int(schema.NumMeasures) {
		addTwice(1+m, ofBook, ofLocal, b.MeasuresInBase[m][from:to])
		addOnce(1+m, own, b.Measures[m][from:to])
	}
}

// lookForWorst keeps the largest errors.
func (t *Totals) lookForWorst(b *schema.Batch) {
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

// local returns the sums of the underlying and the currency of line i.
func (t *Totals) local(b *schema.Batch, i int, kind func(schema.Code) schema.Choice) *local {
	key := localKey{b.Underlying[i], b.Currency[i], b.Instrument[i] != schema.Cash}
	recent := &t.recent[0]
	if !key.isUnderlying {
		recent = &t.recent[1]
	}
	if int(key.underlying) < len(*recent) {
		if l := (*recent)[key.underlying]; l != nil && l.currency == key.currency {
			return l
		}
	}
	l := t.locals[key]
	if l == nil {
		l = &local{underlying: key.underlying, currency: key.currency, spot: b.Spot[i], fx: b.FX[i], isUnderlying: key.isUnderlying}
		if key.isUnderlying {
			l.kind = kind(key.underlying)
		}
		t.locals[key] = l
	}
	for int(key.underlying) >= len(*recent) {
		*recent = append(*recent, nil)
	}
	(*recent)[key.underlying] = l
	return l
}

// Summary rounds the sums into a summary: totals, books, underlyings,
// currencies, reject counts and notes about books. The error is that of a context
// that ended before, or that a sum is beyond the range of doubles: the summary
// then must not be used.
func (t *Totals) Summary(ctx context.Context, s *schema.Summary) error {
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
	if err := t.sumBooks(ctx, s); err != nil {
		return err
	}
	if err := t.sumLocals(ctx, s); err != nil {
		return err
	}
	for _, c := range schema.RejectCodes {
		if n := t.codes[schema.RejectCode(c.Code)]; n > 0 {
			s.RejectCount = append(s.RejectCount, schema.CodeCount{Code: c.Code, Count: n})
			s.Rejects += n
		}
	}
	s.Notes = append(s.Notes, t.notes...)
	s.MaxResidual, s.MaxIntegralResidual, s.MaxPriceError = t.worst[0], t.worst[1], t.worst[2]
	return checkRange(s)
}

// sumBooks adds the books up along the tree.
func (t *Totals) sumBooks(ctx context.Context, s *schema.Summary) error {
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
		if err := ctx.Err(); err != nil {
			return err
		}
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
		if ctx.Err() != nil {
			return
		}
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
	return ctx.Err()
}

// sumLocals adds the underlyings up by currency.
func (t *Totals) sumLocals(ctx context.Context, s *schema.Summary) error {
	currencies := map[schema.Code]*local{}
	for _, l := range t.locals {
		if err := ctx.Err(); err != nil {
			return err
		}
		u := schema.UnderlyingTotal{
			Underlying: t.dicts.Underlyings.Name(l.underlying), Kind: l.kind,
			Currency: t.dicts.Currencies.Name(l.currency), Spot: l.spot, FX: l.fx,
			DeltaUnits: l.own.round(0), Local: l.inCurrency(), Totals: l.sums.round(),
		}
		c := currencies[l.currency]
		if c == nil {
			c = &local{fx: l.fx}
			currencies[l.currency] = c
		}
		c.sums.merge(&l.sums)
		c.own.merge(&l.own)
		s.Underlyings = append(s.Underlyings, u)
	}
	for code, l := range currencies {
		s.Currencies = append(s.Currencies, schema.CurrencyTotal{
			Currency: t.dicts.Currencies.Name(code), FX: l.fx, Local: l.inCurrency(), Totals: l.sums.round(),
		})
	}
	slices.SortFunc(s.Underlyings, func(a, b schema.UnderlyingTotal) int {
		return cmp.Or(cmp.Compare(a.Underlying, b.Underlying), cmp.Compare(a.Currency, b.Currency), cmp.Compare(a.Kind, b.Kind))
	})
	slices.SortFunc(s.Currencies, func(a, b schema.CurrencyTotal) int { return cmp.Compare(a.Currency, b.Currency) })
	return nil
}
