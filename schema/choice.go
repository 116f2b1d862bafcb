package schema

// Choice is a value out of a short closed list. 0 is absent in every list.
type Choice uint8

// Choices is a closed list: its index is the Choice, its text the name in
// files. Entry 0 is the empty text.
type Choices []string

// Find returns the choice of that name, compared without regard to ASCII case.
func (c Choices) Find(name string) (Choice, bool) {
	for i := 1; i < len(c); i++ {
		if equalFold(c[i], name) {
			return Choice(i), true
		}
	}
	return 0, false
}

func equalFold(a, b string) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range len(a) {
		x, y := a[i], b[i]
		if 'A' <= x && x <= 'Z' {
			x += 'a' - 'A'
		}
		if 'A' <= y && y <= 'Z' {
			y += 'a' - 'A'
		}
		if x != y {
			return false
		}
	}
	return true
}

// Instruments a line may hold.
const (
	Option Choice = 1 + iota
	Stock
	Future
	Forward
	Cash
)

// Kinds of underlying.
const (
	Equity Choice = 1 + iota
	Index
	FX
	FuturePrice
	Spread
)

// Option types.
const (
	Call Choice = 1 + iota
	Put
)

// Exercise styles.
const (
	European Choice = 1 + iota
	American
)

// Payoffs of an option.
const (
	Vanilla Choice = 1 + iota
	CashDigital
	AssetDigital
	Barrier
	AsianGeometric
	AsianArithmetic
)

// Barrier types.
const (
	DownIn Choice = 1 + iota
	DownOut
	UpIn
	UpOut
)

// Statuses of a row. Only the first two are ever written.
const (
	Priced Choice = 1 + iota
	Expired
	Rejected
)

// Sources of the volatility a line was priced with.
const (
	VolFromLine       Choice = 1 + iota // the line's own vol
	VolFromSurface                      // the vols table
	VolFromUnderlying                   // the underlying's flat vol
)

// Models a line may be priced with. A Future line is marked at its price.
const (
	ModelBSM Choice = 1 + iota // generalised Black–Scholes–Merton
	ModelBlack76
	ModelGarmanKohlhagen
	ModelDiscountedForward
	ModelMark   // price as quoted
	ModelFace   // cash at face value
	ModelPayoff // payoff at the current price: expired lines
	ModelBachelier
	ModelCashOrNothing
	ModelAssetOrNothing
	ModelReinerRubinstein
	ModelKemnaVorst
	ModelTurnbullWakeman
	ModelBoundaryIntegral  // American options with a continuous yield only
	ModelFiniteDifferences // options with cash dividends, and the American ones that the integral does not reach
)

// Settings of the boundary integral.
const (
	Fast Choice = 1 + iota
	Standard
	Exact
)

// What a cash dividend does to the price of its underlying.
const (
	Piecewise Choice = 1 + iota // it is lognormal between ex-dates and drops by the amount on each
	Escrowed                    // less the present value of the dividends, it is lognormal
)

// How often a barrier is watched.
const (
	Continuous Choice = 1 + iota
	Daily
	Weekly
	Monthly
)

// The closed lists, by column.
var (
	Instruments  = Choices{"", "option", "stock", "future", "forward", "cash"}
	Kinds        = Choices{"", "equity", "index", "fx", "future", "spread"}
	OptionTypes  = Choices{"", "call", "put"}
	Exercises    = Choices{"", "european", "american"}
	Payoffs      = Choices{"", "vanilla", "cash_digital", "asset_digital", "barrier", "asian_geometric", "asian_arithmetic"}
	BarrierTypes = Choices{"", "down_in", "down_out", "up_in", "up_out"}
	Statuses     = Choices{"", "priced", "expired", "rejected"}
	VolSources   = Choices{"", "line", "surface", "underlying"}
	Models       = Choices{"", "black_scholes_merton", "black_76", "garman_kohlhagen", "discounted_forward", "mark", "face", "payoff",
		"bachelier", "cash_or_nothing", "asset_or_nothing", "reiner_rubinstein", "kemna_vorst", "turnbull_wakeman",
		"boundary_integral", "finite_differences"}
	Settings       = Choices{"", "fast", "standard", "exact"}
	DividendModels = Choices{"", "piecewise", "escrowed"}
	Monitorings    = Choices{"", "continuous", "daily", "weekly", "monthly"}
	choiceColumns  = map[string]Choices{
		"instrument": Instruments, "kind": Kinds, "option_type": OptionTypes, "exercise": Exercises,
		"payoff": Payoffs, "barrier_type": BarrierTypes, "status": Statuses, "vol_source": VolSources, "model": Models, "monitoring": Monitorings, "setting": Settings, "dividend_model": DividendModels,
	}
)

// ChoicesOf returns the closed list behind a column, or nil.
func ChoicesOf(column string) Choices { return choiceColumns[column] }
