package instrument

import (
	"nightbook/risk/model/american"
	"nightbook/risk/model/pde"
)

// Methods are the numerical methods behind products without a closed form, with
// their settings and working memory. They serve one goroutine.
type Methods struct {
	stop       func() bool
	integral   *american.Solver
	grid       pde.Solver
	convention pde.Convention

	status    []american.Status // of the lines at hand
	after     american.Results  // of their revaluations
	gridLines pde.Lines
	cells     pde.Results
	prices    []float64 // of their revaluations
}

// NewMethods returns the methods with a setting of the boundary integral, a
// dividend model, and the error that finite differences may make, as a share of
// the spot.
func NewMethods(setting american.Setting, convention pde.Convention, tolerance float64) *Methods {
	return &Methods{integral: american.NewSolver(setting), convention: convention, grid: pde.Solver{Tolerance: tolerance}}
}

// InterruptedBy sets what is asked between lines and boundaries, which take long:
// once it says yes, the results at hand are void.
func (m *Methods) InterruptedBy(stop func() bool) {
	m.stop, m.integral.Interrupted, m.grid.Interrupted = stop, stop, stop
}

func (m *Methods) interrupted() bool { return m.stop != nil && m.stop() }

// Schedule is the cash dividends that move a line, as seen now and as seen after
// each step of theta. What goes ex within a step is taken off the price of the
// underlying, as the model has it.
type Schedule struct {
	Now   []pde.Dividend
	After [Steps][]pde.Dividend
	Drop  [Steps]float64
}

// Exercise is what is known of a line besides its value.
type Exercise struct {
	Boundary   []float64 // price of the underlying past which exercise is optimal now; NaN where there is none
	PriceError []float64 // estimated error of the price; NaN where the method gives none
	Flags      []Flag
}

// Flag is a set of facts about a line.
type Flag uint8

// The facts.
const (
	ExerciseNow  Flag = 1 << iota // exercise is optimal now
	OnGrid                        // priced by finite differences
	Uncertain                     // PriceError is above the tolerance
	InClosedForm                  // there was a formula after all
)

func (e *Exercise) resize(n int) {
	for _, s := range []*[]float64{&e.Boundary, &e.PriceError} {
		*s = resized(*s, n)
	}
	e.Flags = resized(e.Flags, n)
}
