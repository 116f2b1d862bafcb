package schema

import "cmp"

// Config is run.toml, checked, with the command line laid over it.
type Config struct {
	AsOf              Moment
	ReportingCurrency string
	Calendar          string // "" is Monday to Friday

	CSV      CSVConfig
	Models   ModelsConfig
	Vols     VolsConfig
	Workbook WorkbookConfig
	Parquet  ParquetConfig
	Limits   Limits

	// Columns maps, table by table, our column names to the house's own headers.
	Columns map[string]map[string]string
}

// CSVConfig says how the house writes its text files, and how it wants ours.
type CSVConfig struct {
	Delimiter    byte   // 0: comma
	DecimalComma bool   // 1.234,5 rather than 1,234.5
	DateFormat   string // in the letters YYYY, MM, DD; "" is YYYY-MM-DD
	Encoding     string // utf-8, windows-1252 or utf-16; "" is utf-8
	BareText     bool   // in files written, no apostrophe before what a spreadsheet takes for a formula
}

// VolsConfig says how volatilities are written.
type VolsConfig struct {
	Percent    bool // 20 stands for 0.20
	FromQuotes bool // the surface is that of quotes, not of vols
}

// ModelsConfig says how options without a closed form are priced. A field that
// is 0 stands for its default.
type ModelsConfig struct {
	American  Choice  // setting of the boundary integral
	Dividends Choice  // dividend model
	Tolerance float64 // of finite differences: the error allowed in a price, as a share of the spot
}

// DefaultModels are the models of a run.toml that says nothing of them.
var DefaultModels = ModelsConfig{American: Standard, Dividends: Piecewise, Tolerance: 2e-5}

// OrDefault returns m with its fields filled in.
func (m ModelsConfig) OrDefault() ModelsConfig {
	return ModelsConfig{cmp.Or(m.American, DefaultModels.American), cmp.Or(m.Dividends, DefaultModels.Dividends), cmp.Or(m.Tolerance, DefaultModels.Tolerance)}
}

// WorkbookConfig bounds the workbook.
type WorkbookConfig struct {
	MaxLines int // rows of the Lines sheet; the rest is in the lines table
}

// ParquetConfig says how Parquet is written, and what its times mean.
type ParquetConfig struct {
	Compression string // of the files written: zstd, snappy, gzip or none
	UTCAsIs     bool   // moments of UTC in the files read are times of the desk's own clock
}

// DefaultMaxLines is the default of WorkbookConfig.MaxLines.
const DefaultMaxLines = 50_000
