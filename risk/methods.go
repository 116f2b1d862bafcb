package risk

import (
	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/risk/model/american"
	"nightbook/risk/model/pde"
	"nightbook/schema"
)

// The methods' own names of what run.toml chooses.
var (
	settings    = [...]american.Setting{schema.Fast: american.Fast, schema.Standard: american.Default, schema.Exact: american.Exact}
	conventions = [...]pde.Convention{schema.Piecewise: pde.Piecewise, schema.Escrowed: pde.Escrowed}
)

// methods returns the numerical methods that a market's configuration asks for.
func methods(m *market.Market) *instrument.Methods {
	return instrument.NewMethods(settings[m.Models.American], conventions[m.Models.Dividends], m.Models.Tolerance)
}
