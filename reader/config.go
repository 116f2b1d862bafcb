package reader

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/BurntSushi/toml"

	"nightbook/reader/csv"
	"nightbook/schema"
)

// runFile is run.toml. Every key may be left out but reporting_currency; a key
// that is not in this list is an error.
//
//	as_of = 2026-03-20              # date, date and time, or a text of either form; the command line's
//	                                # --as-of wins; with neither, the folder's name, YYYY-MM-DD, gives it
//	reporting_currency = "USD"      # needed: three letters of ISO 4217
//	calendar = "HOME"               # calendar of holidays that moves business days; default: Monday to Friday
//
//	[csv]                           # how text is written: in .csv files, and in text cells of the others
//	delimiter = ","                 # one of  ,  ;  |  or a tab, "\t"; default ","
//	decimal_comma = false           # true: 1.234,5 stands for 1234.5; default false
//	date_format = "YYYY-MM-DD"      # the letters YYYY, MM, DD in the house's order, such as "DD.MM.YYYY";
//	                                # HH:MM or HH:MM:SS may follow a date; default "YYYY-MM-DD"
//	encoding = "utf-8"              # utf-8, windows-1252 or utf-16; a byte order mark in a file wins; default "utf-8"
//	guard_formulas = true           # of the files written: put an apostrophe before a text that a spreadsheet would
//	                                # take for a formula; default true
//
//	[vols]
//	unit = "decimal"                # decimal: 0.20 is 20 %; percent: 20 is. Holds for the vol columns of
//	                                # positions, underlyings and vols; default "decimal"
//	from = "vols"                   # vols: the surface is the vols table; quotes: it is implied by the quotes
//	                                # table; default "vols"
//
//	[models]                        # of options without a closed form
//	american = "standard"           # accuracy of the boundary integral: fast, standard or exact; default "standard"
//	dividends = "piecewise"         # piecewise: the price is lognormal between ex-dates and drops by the amount;
//	                                # escrowed: less the value of the dividends, it is; default "piecewise"
//	tolerance = 2e-5                # error that finite differences may make in a price, as a share of the price of
//	                                # the underlying, 1e-7 to 1e-2; default 2e-5
//
//	[workbook]
//	max_lines = 50000               # rows of the workbook's Lines sheet, 0 to 1000000; default 50000
//
//	[parquet]
//	compression = "zstd"            # of the files written: zstd, snappy, gzip or none; default "zstd"
//	utc = "refuse"                  # of the files read, dates stored as moments of UTC: refuse them, or take them
//	                                # as_is for times of the desk's own clock; default "refuse"
//
//	[limits]                        # on what is read; schema.LimitDocs lists them
//	row_bytes = 1048576
//
//	[columns.positions]             # one such section a table: our column = the house's header
//	strike = "Strike Px"
type runFile struct {
	AsOf              any    `toml:"as_of"`
	ReportingCurrency string `toml:"reporting_currency"`
	Calendar          string `toml:"calendar"`
	CSV               struct {
		Delimiter    string `toml:"delimiter"`
		DecimalComma bool   `toml:"decimal_comma"`
		DateFormat   string `toml:"date_format"`
		Encoding     string `toml:"encoding"`

		GuardFormulas *bool `toml:"guard_formulas"`
	} `toml:"csv"`
	Vols struct {
		Unit string `toml:"unit"`
		From string `toml:"from"`
	} `toml:"vols"`
	Models struct {
		American  string   `toml:"american"`
		Dividends string   `toml:"dividends"`
		Tolerance *float64 `toml:"tolerance"`
	} `toml:"models"`
	Workbook struct {
		MaxLines *int `toml:"max_lines"`
	} `toml:"workbook"`
	Parquet struct {
		Compression string `toml:"compression"`
		UTC         string `toml:"utc"`
	} `toml:"parquet"`
	Limits  any `toml:"limits"`
	Columns any `toml:"columns"`
}

// configName is the file of the snapshot folder that holds the configuration.
const configName = "run.toml"

// maxRunFile bounds run.toml, in bytes.
const maxRunFile = 1 << 20

// Config reads run.toml, checks it, and lays asOf, a date or a date and time
// from the command line, over it. Each error names the file and the key.
func (f *Folder) Config(asOf string) (*schema.Config, error) {
	text, err := f.readConfig()
	if err != nil {
		return nil, err
	}
	cfg, err := parseConfig(text, asOf, f.name())
	if err != nil && text == "" {
		return nil, fmt.Errorf("%s: the file is not there or empty, and a run needs one: %w", filepath.Join(f.dir, configName), err)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", filepath.Join(f.dir, configName), err)
	}
	return cfg, nil
}

func (f *Folder) readConfig() (string, error) {
	path := filepath.Join(f.dir, configName)
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		return "", nil
	}
	if err != nil {
		return "", err
	}
	if !info.Mode().IsRegular() {
		return "", fmt.Errorf("%s: %w", path, errNotRegular)
	}
	if info.Size() > maxRunFile {
		return "", fmt.Errorf("%s: larger than 1 MiB, which no configuration is: see whether it is another file", path)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		return "", err
	}
	f.record(inputOfBytes(configName, "run", text))
	return string(text), nil
}

// parseConfig turns the text of run.toml into a configuration. folder is the
// name of the snapshot folder.
func parseConfig(text, asOf, folder string) (*schema.Config, error) {
	var r runFile
	meta, err := toml.Decode(text, &r)
	if err != nil {
		var syntax toml.ParseError
		if errors.As(err, &syntax) {
			return nil, fmt.Errorf("line %d: %s; a line is a key, = and a value, and a text stands in quotation marks", syntax.Position.Line, syntax.Message)
		}
		return nil, err
	}
	for _, key := range meta.Undecoded() {
		if key[0] != "columns" && key[0] != "limits" { // looked at below
			return nil, fmt.Errorf("unknown key %s: mend its name or take it out; the keys are %s", key, strings.Join(configKeys(), ", "))
		}
	}
	cfg := &schema.Config{ReportingCurrency: strings.ToUpper(r.ReportingCurrency), Calendar: r.Calendar}
	if r.ReportingCurrency != "" && !isCurrency(cfg.ReportingCurrency) {
		return nil, fmt.Errorf("reporting_currency is %q: expected three letters of ISO 4217, such as \"USD\"", r.ReportingCurrency)
	}
	if r.ReportingCurrency == "" {
		return nil, errors.New(`reporting_currency is needed: three letters of ISO 4217, such as reporting_currency = "USD"`)
	}
	if why := checkName([]byte(r.Calendar)); why != nil {
		return nil, fmt.Errorf("calendar: %s", why.reason)
	}
	if cfg.AsOf, err = asOfFrom(r.AsOf, asOf, folder); err != nil {
		return nil, err
	}
	if cfg.CSV, err = r.csv(); err != nil {
		return nil, err
	}
	switch r.Vols.Unit {
	case "", "decimal":
	case "percent":
		cfg.Vols.Percent = true
	default:
		return nil, fmt.Errorf("vols.unit is %q: expected decimal or percent", r.Vols.Unit)
	}
	switch r.Vols.From {
	case "", "vols":
	case "quotes":
		cfg.Vols.FromQuotes = true
	default:
		return nil, fmt.Errorf("vols.from is %q: expected vols or quotes", r.Vols.From)
	}
	if cfg.Models, err = r.models(); err != nil {
		return nil, err
	}
	cfg.Workbook.MaxLines = schema.DefaultMaxLines
	if n := r.Workbook.MaxLines; n != nil {
		if *n < 0 || *n > 1_000_000 {
			return nil, fmt.Errorf("workbook.max_lines is %d: expected 0 to 1000000, as many rows as a sheet holds", *n)
		}
		cfg.Workbook.MaxLines = *n
	}
	switch cfg.Parquet.Compression = r.Parquet.Compression; cfg.Parquet.Compression {
	case "":
		cfg.Parquet.Compression = "zstd"
	case "zstd", "snappy", "gzip", "none":
	default:
		return nil, fmt.Errorf("parquet.compression is %q: expected zstd, snappy, gzip or none", r.Parquet.Compression)
	}
	switch r.Parquet.UTC {
	case "", "refuse":
	case "as_is":
		cfg.Parquet.UTCAsIs = true
	default:
		return nil, fmt.Errorf("parquet.utc is %q: expected refuse or as_is", r.Parquet.UTC)
	}
	if cfg.Limits, err = checkLimits(r.Limits); err != nil {
		return nil, err
	}
	cfg.Columns, err = checkColumns(r.Columns)
	return cfg, err
}

func (r *runFile) csv() (c schema.CSVConfig, err error) {
	switch r.CSV.Delimiter {
	case "":
	case ",", ";", "|", "\t":
		c.Delimiter = r.CSV.Delimiter[0]
	default:
		return c, fmt.Errorf(`csv.delimiter is %q: expected one of "," ";" "|" "\t"`, r.CSV.Delimiter)
	}
	c.DecimalComma = r.CSV.DecimalComma
	if r.CSV.DateFormat != "" {
		if _, err := parseDateFormat(r.CSV.DateFormat); err != nil {
			return c, fmt.Errorf("csv.date_format is %q: %w", r.CSV.DateFormat, err)
		}
		c.DateFormat = r.CSV.DateFormat
	}
	if r.CSV.Encoding != "" && !slices.Contains(csv.EncodingNames[:], r.CSV.Encoding) {
		return c, fmt.Errorf("csv.encoding is %q: expected one of %s", r.CSV.Encoding, strings.Join(csv.EncodingNames[:], ", "))
	}
	c.Encoding = r.CSV.Encoding
	c.BareText = r.CSV.GuardFormulas != nil && !*r.CSV.GuardFormulas
	return c, nil
}

func (r *runFile) models() (schema.ModelsConfig, error) {
	m := schema.DefaultModels
	for _, c := range []struct {
		key, value string
		list       schema.Choices
		to         *schema.Choice
	}{
		{"american", r.Models.American, schema.Settings, &m.American},
		{"dividends", r.Models.Dividends, schema.DividendModels, &m.Dividends},
	} {
		if c.value == "" {
			continue
		}
		i := slices.Index(c.list, c.value)
		if i < 0 {
			return m, fmt.Errorf("models.%s is %q: expected one of %s", c.key, c.value, strings.Join(c.list[1:], ", "))
		}
		*c.to = schema.Choice(i)
	}
	if x := r.Models.Tolerance; x != nil {
		if !(*x >= 1e-7 && *x <= 1e-2) {
			return m, fmt.Errorf("models.tolerance is %v: expected 1e-7 to 1e-2, a share of the price of the underlying", *x)
		}
		m.Tolerance = *x
	}
	return m, nil
}

// checkColumns refuses a mapping of a table or a column that does not exist.
// The library passes over other values where a map is expected, so the types
// are looked at here.
func checkColumns(columns any) (map[string]map[string]string, error) {
	sections, ok := columns.(map[string]any)
	if !ok && columns != nil {
		return nil, errors.New("columns: expected sections such as [columns.positions]")
	}
	var mapping map[string]map[string]string
	for _, name := range sortedKeys(sections) {
		t := inputTable(name)
		if t == nil {
			return nil, fmt.Errorf("columns.%s: there is no such table; the tables are %s", name, strings.Join(inputNames(), ", "))
		}
		section, ok := sections[name].(map[string]any)
		if !ok {
			return nil, fmt.Errorf("columns.%s: expected a section [columns.%s] with lines such as strike = \"Strike Px\"", name, name)
		}
		columns := map[string]string{}
		for _, ours := range sortedKeys(section) {
			theirs, ok := section[ours].(string)
			if t.Column(ours) == nil {
				return nil, fmt.Errorf("columns.%s.%s: there is no such column in %s; see nightbook columns", name, ours, name)
			}
			if theirs = strings.TrimSpace(theirs); !ok || theirs == "" {
				return nil, fmt.Errorf("columns.%s.%s: expected a header of the file, in quotation marks", name, ours)
			}
			columns[ours] = theirs
		}
		if mapping == nil {
			mapping = map[string]map[string]string{}
		}
		mapping[name] = columns
	}
	return mapping, nil
}

// asOfFrom picks the moment of the valuation: the command line's, the file's,
// or the one the folder is named by.
func asOfFrom(inFile any, commandLine, folder string) (schema.Moment, error) {
	if commandLine != "" {
		return parseMoment("--as-of", commandLine)
	}
	switch v := inFile.(type) {
	case nil:
	case string:
		return parseMoment("as_of", v)
	case time.Time:
		switch v.Location().String() {
		case "date-local":
			return parseMoment("as_of", v.Format(time.DateOnly))
		case "datetime-local":
			return parseMoment("as_of", v.Format("2006-01-02T15:04:05"))
		case "time-local":
			return schema.Moment{}, errors.New("as_of is a time without a date: expected a date such as 2026-03-20")
		}
		return schema.Moment{}, errors.New("as_of: " + zoned.reason)
	default:
		return schema.Moment{}, errors.New("as_of: expected a date such as 2026-03-20")
	}
	if m, err := parseMoment("", folder); err == nil && m.Minute == schema.NoMinute {
		return m, nil
	}
	return schema.Moment{}, fmt.Errorf("as_of is not given: set as_of in %s, give --as-of, or name the folder YYYY-MM-DD (it is %q)", configName, folder)
}

func parseMoment(name, text string) (schema.Moment, error) {
	day, minute, why := isoDate.parse([]byte(text))
	if why == notDate {
		return schema.Moment{}, fmt.Errorf("%s is %q: expected a date such as 2026-03-20, or a date and time such as 2026-03-20T17:30", name, text)
	}
	if why != nil {
		return schema.Moment{}, fmt.Errorf("%s is %q: %s", name, text, why.reason)
	}
	return schema.Moment{Day: day, Minute: minute}, nil
}

func isCurrency(s string) bool {
	return len(s) == 3 && strings.Trim(s, "ABCDEFGHIJKLMNOPQRSTUVWXYZ") == ""
}

func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
