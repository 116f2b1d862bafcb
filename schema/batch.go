package schema

import "slices"

// BatchRows is about how many rows a batch holds. Readers may give fewer or
// somewhat more; nothing that is written depends on where batches end.
const BatchRows = 4096

// Batch is a run of consecutive rows of the position file on their way through
// the program: the reader fills Positions, the risk core Results, the writers
// write both. Batches are recycled.
type Batch struct {
	N    int
	File string // of the snapshot folder, which the rows stand in
	Positions
	Results
	Rejects []Reject // of rows with Status Rejected, in row order
	Notes   []Note   // warnings, in row order

	// AsText appends row i of a file that is no text as a line of text; nil where
	// Raw has the rows. To make it of every row takes longer than to read them.
	AsText func(to []byte, i int) []byte

	minutes []int64 // memory of Frame
}

// Positions are the columns of the position file, row i of each slice being
// one line. An absent number is NaN, date NoDate, minute NoMinute, text,
// code or choice zero. Defaults are filled in by the reader, except the
// currency, which is the underlying's.
type Positions struct {
	Line         []int64 // where the row stands in its file, see Source
	LineID       Strings
	Book         []Code
	Underlying   []Code
	Currency     []Code
	Strategy     []Code
	Instrument   []Choice
	Quantity     []float64
	Multiplier   []float64
	OptionType   []Choice
	Exercise     []Choice
	Payoff       []Choice
	Strike       []float64
	Expiry       []Date
	ExpiryMinute []int16
	Vol          []float64 // decimal, per √year
	Mark         []float64
	Payout       []float64
	BarrierType  []Choice
	Barrier      []float64
	Rebate       []float64
	Monitoring   []Choice
	AverageStart []Date
	AverageSoFar []float64
	EntryPrice   []float64
	Extra        []Strings // the house's own columns, in file order
	Raw          Strings   // each row as it came, for rejects
}

// Results are what the risk core adds to each line. The units are those of the
// data dictionary (see Lines).
type Results struct {
	Status        []Choice
	Model         []Choice
	Setting       []Choice // accuracy of an American option's model, where it has settings
	DividendModel []Choice
	VolSource     []Choice
	Curve         []Code // the discount curve used

	// the inputs used
	Spot, Forward, VolUsed, Rate, Carry, Time, DividendsPV, FX []float64

	// one unit of the contract
	Price, Delta, Gamma, Vega, Theta, Rho, CarryRho, Vanna, Volga, Charm, Residual []float64

	PriceError  []float64 // estimated error of Price, where the method gives one
	Boundary    []float64 // the price of the underlying past which exercise is optimal now
	ExerciseNow []bool    // it is past that price

	// the position, in its currency, and in the reporting currency
	DeltaUnits     []float64
	Measures       [NumMeasures][]float64
	MeasuresInBase [NumMeasures][]float64
}

// Measure numbers the position measures that are given in the line's currency
// and in the reporting currency, and added up over books.
type Measure int

// The position measures.
const (
	Value Measure = iota
	DeltaCash
	GammaCash1Pct
	VegaCash1Pt
	ThetaCash1D
	ThetaCash1BD
	RhoCash1BP
	NumMeasures
)

// MeasureNames are the column names of the position measures; with "_base"
// behind it, of the measure in the reporting currency.
var MeasureNames = [NumMeasures]string{
	"value", "delta_cash", "gamma_cash_1pct", "vega_cash_1pt", "theta_cash_1d", "theta_cash_1bd", "rho_cash_1bp",
}

// Floats returns pointers to all float columns of the results, for resizing
// and moving rows.
func (r *Results) Floats() [resultFloats]*[]float64 {
	s := [resultFloats]*[]float64{
		&r.Spot, &r.Forward, &r.VolUsed, &r.Rate, &r.Carry, &r.Time, &r.DividendsPV, &r.FX,
		&r.Price, &r.Delta, &r.Gamma, &r.Vega, &r.Theta, &r.Rho, &r.CarryRho, &r.Vanna, &r.Volga, &r.Charm, &r.Residual,
		&r.PriceError, &r.Boundary, &r.DeltaUnits,
	}
	measures := s[resultFloats-2*NumMeasures:]
	for m := range r.Measures {
		measures[2*m], measures[2*m+1] = &r.Measures[m], &r.MeasuresInBase[m]
	}
	return s
}

const (
	resultFloats   = 22 + 2*NumMeasures
	positionFloats = 10
)

// Floats returns pointers to all float columns of the positions.
func (p *Positions) Floats() [positionFloats]*[]float64 {
	return [...]*[]float64{&p.Quantity, &p.Multiplier, &p.Strike, &p.Vol, &p.Mark, &p.Payout, &p.Barrier, &p.Rebate, &p.AverageSoFar, &p.EntryPrice}
}

// floats returns pointers to all float columns.
func (b *Batch) floats() (s [positionFloats + resultFloats]*[]float64) {
	p, r := b.Positions.Floats(), b.Results.Floats()
	copy(s[copy(s[:], p[:]):], r[:])
	return s
}

// Row returns row i as it came. After Compact there are no such rows any more.
func (b *Batch) Row(i int) string {
	if b.AsText != nil {
		return string(b.AsText(nil, i))
	}
	return string(b.Raw.Bytes(i))
}

// Resize makes every fixed-width column n rows long, keeping memory, and
// empties the text columns, the rejects and the notes. The values are left over
// from before: the reader sets those of Positions, the risk core those of Results.
func (b *Batch) Resize(n int) {
	b.N = n
	b.resizeFloats(n)
	for _, s := range b.codes() {
		*s = resized(*s, n)
	}
	for _, s := range b.choices() {
		*s = resized(*s, n)
	}
	b.Line = resized(b.Line, n)
	b.Expiry, b.AverageStart = resized(b.Expiry, n), resized(b.AverageStart, n)
	b.ExpiryMinute = resized(b.ExpiryMinute, n)
	b.ExerciseNow = resized(b.ExerciseNow, n)
	b.LineID.Reset()
	b.Raw.Reset()
	b.AsText = nil
	for i := range b.Extra {
		b.Extra[i].Reset()
	}
	b.Rejects, b.Notes = b.Rejects[:0], b.Notes[:0]
}

// Compact drops the rows with Status Rejected; the others keep their order.
func (b *Batch) Compact() {
	b.Raw.Start, b.Raw.End, b.AsText = b.Raw.Start[:0], b.Raw.End[:0], nil
	if !slices.Contains(b.Status, Rejected) {
		return
	}
	keep := make([]int32, 0, b.N)
	for i, s := range b.Status {
		if s != Rejected {
			keep = append(keep, int32(i))
		}
	}
	b.N = len(keep)
	for _, s := range b.floats() {
		*s = picked(*s, keep)
	}
	for _, s := range b.codes() {
		*s = picked(*s, keep)
	}
	for _, s := range b.choices() {
		*s = picked(*s, keep)
	}
	b.Line = picked(b.Line, keep)
	b.Expiry, b.AverageStart = picked(b.Expiry, keep), picked(b.AverageStart, keep)
	b.ExpiryMinute = picked(b.ExpiryMinute, keep)
	b.ExerciseNow = picked(b.ExerciseNow, keep)
	pick := func(s *Strings) { s.Start, s.End = picked(s.Start, keep), picked(s.End, keep) }
	pick(&b.LineID)
	for i := range b.Extra {
		pick(&b.Extra[i])
	}
}

func (b *Batch) codes() [5]*[]Code {
	return [...]*[]Code{&b.Book, &b.Underlying, &b.Currency, &b.Strategy, &b.Curve}
}

func (b *Batch) choices() [11]*[]Choice {
	return [...]*[]Choice{&b.Instrument, &b.OptionType, &b.Exercise, &b.Payoff, &b.BarrierType, &b.Monitoring, &b.Status, &b.Model, &b.Setting, &b.DividendModel, &b.VolSource}
}

// Columns that stand whole pages apart fall into the same few lines of the
// processor's first cache, row by row: these are kept a page and some lines apart.
const (
	pageFloats  = 4096 / 8
	apartFloats = 11 * 64 / 8 // 11 lines of 64: a row of 64 columns falls into 64 of the cache's sets
)

// resizeFloats makes the float columns n rows long, all in one piece of memory.
func (b *Batch) resizeFloats(n int) {
	columns := b.floats()
	enough := true
	for _, s := range columns {
		enough = enough && cap(*s) >= n
	}
	if !enough {
		apart := (n+n/4+pageFloats-1)/pageFloats*pageFloats + apartFloats
		whole := make([]float64, apart*len(columns))
		for k, s := range columns {
			*s = whole[k*apart : (k+1)*apart : (k+1)*apart]
		}
	}
	for _, s := range columns {
		*s = (*s)[:n]
	}
}

func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n, n+n/4)
	}
	return s[:n]
}

// picked moves the rows keep (ascending) to the front of s.
func picked[T any](s []T, keep []int32) []T {
	for to, from := range keep {
		s[to] = s[from]
	}
	return s[:len(keep)]
}
