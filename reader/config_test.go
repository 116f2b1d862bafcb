package reader

import (
	"context"
	"reflect"
	"strings"
	"testing"

	"nightbook/schema"
)

// moment returns a moment that is known to be well written.
func moment(t testing.TB, s string) schema.Moment {
	t.Helper()
	day, minute, why := isoDate.parse([]byte(s))
	if why != nil {
		t.Fatal(s)
	}
	return schema.Moment{Day: day, Minute: minute}
}

func TestConfigDefaults(t *testing.T) {
	got, err := parseConfig(`reporting_currency = "eur"`, "", "2026-03-20")
	if err != nil {
		t.Fatal(err)
	}
	want := &schema.Config{AsOf: moment(t, "2026-03-20"), ReportingCurrency: "EUR",
		Models: schema.DefaultModels, Workbook: schema.WorkbookConfig{MaxLines: schema.DefaultMaxLines}, Parquet: schema.ParquetConfig{Compression: "zstd"}}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("%+v, want %+v", got, want)
	}
}

func TestConfigAll(t *testing.T) {
	got, err := parseConfig(`
as_of = 2026-03-20T17:30:00
reporting_currency = "USD"
calendar = "Northport"
[csv]
delimiter = ";"
decimal_comma = true
date_format = "DD.MM.YYYY"
encoding = "windows-1252"
guard_formulas = false
[vols]
unit = "percent"
[workbook]
max_lines = 0

[models]
american = "exact"
dividends = "escrowed"
tolerance = 1e-6
[parquet]
compression = "none"
[limits]
rows = 7
[columns.positions]
strike = "Strike Px"
[columns.vols]
vol = "IV"
`, "", "x")
	if err != nil {
		t.Fatal(err)
	}
	want := &schema.Config{AsOf: moment(t, "2026-03-20T17:30"), ReportingCurrency: "USD", Calendar: "Northport",
		CSV:    schema.CSVConfig{Delimiter: ';', DecimalComma: true, DateFormat: "DD.MM.YYYY", Encoding: "windows-1252", BareText: true},
		Models: schema.ModelsConfig{American: schema.Exact, Dividends: schema.Escrowed, Tolerance: 1e-6},
		Vols:   schema.VolsConfig{Percent: true}, Parquet: schema.ParquetConfig{Compression: "none"}, Limits: schema.Limits{schema.Rows: 7},
		Columns: map[string]map[string]string{"positions": {"strike": "Strike Px"}, "vols": {"vol": "IV"}}}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("%+v, want %+v", got, want)
	}
}

// The command line wins over the file, the file over the folder's name.
func TestAsOf(t *testing.T) {
	for _, c := range []struct{ file, flag, folder, want string }{
		{"", "", "2026-03-20", "2026-03-20"},
		{"as_of = 2026-03-21", "", "2026-03-20", "2026-03-21"},
		{`as_of = "2026-03-21"`, "", "x", "2026-03-21"},
		{`as_of = "2026-03-21 09:15"`, "", "x", "2026-03-21T09:15"},
		{"as_of = 2026-03-21T09:15:59", "", "x", "2026-03-21T09:15"},
		{"as_of = 2026-03-21 00:00:00", "", "x", "2026-03-21T00:00"},
		{"as_of = 2026-03-21", "2026-03-22", "2026-03-20", "2026-03-22"},
		{"", "2026-03-22T18:00", "2026-03-20", "2026-03-22T18:00"},
		{"", "", "monday", "! as_of is not given"},
		{"", "", "2026-02-30", "! as_of is not given"},
		{"", "", "2026-03-20T10:00", "! as_of is not given"},
		{"", "20.3.2026", "2026-03-20", "! --as-of is"},
		{"", "2026-03-20T10:00Z", "x", "! desk's own clock"},
		{`as_of = "soon"`, "", "2026-03-20", `! as_of is "soon"`},
		{`as_of = "2026-02-30"`, "", "2026-03-20", "! no such day"},
		{"as_of = 2026-03-21T09:15:00Z", "", "x", "! desk's own clock"},
		{"as_of = 2026-03-21T09:15:00+02:00", "", "x", "! desk's own clock"},
		{"as_of = 09:15:00", "", "x", "! a time without a date"},
		{"as_of = 20260321", "", "x", "! expected a date"},
		{"as_of = {}", "", "x", "! expected a date"},
	} {
		cfg, err := parseConfig("reporting_currency = \"USD\"\n"+c.file, c.flag, c.folder)
		want, refused := strings.CutPrefix(c.want, "! ")
		switch {
		case refused && (err == nil || !strings.Contains(err.Error(), want)):
			t.Errorf("%+v: %v", c, err)
		case !refused && err != nil:
			t.Errorf("%+v: %v", c, err)
		case !refused && cfg.AsOf.String() != want:
			t.Errorf("%+v: %s", c, cfg.AsOf)
		}
	}
}

// Each error names the key at fault.
func TestConfigErrors(t *testing.T) {
	for text, want := range map[string]string{
		`x = 1`:                               "unknown key x",
		"[csv]\nseparator = ';'":              "unknown key csv.separator",
		"[spreadsheet]\nmax_lines = 1":        "unknown key spreadsheet",
		"[csv]\ndelimiter = ':'":              `csv.delimiter is ":"`,
		"[csv]\ndelimiter = ',,'":             `csv.delimiter is ",,"`,
		"[csv]\ndecimal_comma = 'yes'":        "decimal_comma",
		"[csv]\ndate_format = 'D.M.Y'":        `csv.date_format is "D.M.Y"`,
		"[csv]\nencoding = 'latin'":           `csv.encoding is "latin": expected one of utf-8, windows-1252, utf-16`,
		"[vols]\nunit = 'bp'":                 `vols.unit is "bp"`,
		"[models]\namerican = 'rough'":        `models.american is "rough": expected one of fast, standard, exact`,
		"[models]\ndividends = 'none'":        `models.dividends is "none": expected one of piecewise, escrowed`,
		"[models]\ntolerance = 0.5":           "models.tolerance is 0.5: expected 1e-7 to 1e-2",
		"[models]\ntolerance = nan":           "models.tolerance is NaN",
		"[workbook]\nmax_lines = -1":          "workbook.max_lines is -1",
		"[workbook]\nmax_lines = 1000001":     "workbook.max_lines is 1000001",
		"[parquet]\ncompression = 'lz4'":      `parquet.compression is "lz4"`,
		"[parquet]\nutc = true":               "utc",
		"[parquet]\nutc = 'desk'":             `parquet.utc is "desk": expected refuse or as_is`,
		"[limits]\nrow_bytes = 1":             "limits.row_bytes is 1: expected a whole number from 1024 to 67108864",
		"[limits]\nrow_bytes = '2 MiB'":       "limits.row_bytes is 2 MiB: expected a whole number",
		"[limits]\nratio = 5":                 "limits.ratio: there is no such limit; the limits are field_bytes, row_bytes",
		"limits = 1":                          "limits: expected a section [limits]",
		"[columns.limits]\nlower = 'Lo'":      "columns.limits: there is no such table; the tables are positions, underlyings",
		"[columns.positions]\nprice = 'Px'":   "columns.positions.price: there is no such column",
		"[columns.positions]\nstrike = ' '":   "columns.positions.strike: expected a header",
		"calendar = \"a\\u0001\"":             "calendar: the text holds a control character",
		"a = ":                                "line 2",
		"reporting_currency = 'EUR'":          "line 2",
		"[csv]\n[csv]":                        "csv",
		"csv = 1":                             "csv",
		"columns = 1":                         "columns",
		"[[columns.positions]]\nstrike = 'K'": "columns.positions: expected a section",
		"[columns]\npositions = 'strike'":     "columns.positions: expected a section",
		"[columns.positions]\nstrike = 1":     "columns.positions.strike: expected a header",
		"[columns.positions.strike]\nx = 'y'": "columns.positions.strike: expected a header",
	} {
		_, err := parseConfig("reporting_currency = \"USD\"\n"+text, "2026-03-20", "x")
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v, want %q", text, err, want)
		}
	}
	for _, text := range []string{"", `reporting_currency = ""`, `reporting_currency = "US"`, `reporting_currency = "U1D"`, `reporting_currency = "dollar"`} {
		if _, err := parseConfig(text, "2026-03-20", "x"); err == nil || !strings.Contains(err.Error(), "letters of ISO 4217") {
			t.Errorf("%q: %v", text, err)
		}
	}
}

// The error of a folder's configuration begins with the file's path.
func TestConfigPath(t *testing.T) {
	dir := folderOf(t, map[string]string{"run.toml": "colour = 1\nreporting_currency = 'USD'"})
	f, err := OpenFolder(context.Background(), dir)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.Config("2026-03-20"); err == nil || !strings.HasPrefix(err.Error(), dir) || !strings.Contains(err.Error(), "run.toml: unknown key colour") {
		t.Error(err)
	}
}

func FuzzConfig(f *testing.F) {
	f.Add("as_of = 2026-03-20\nreporting_currency = \"USD\"\n[columns.positions]\nstrike = \"K\"", "", "x")
	f.Add("reporting_currency = 'eur'\n[csv]\ndelimiter = ';'\ndate_format='DD.MM.YYYY'", "2026-03-20T10:00", "2026-03-20")
	f.Fuzz(func(t *testing.T, text, asOf, folder string) {
		cfg, err := parseConfig(text, asOf, folder)
		if err != nil {
			return
		}
		if !isCurrency(cfg.ReportingCurrency) || cfg.AsOf.Day < firstDay || cfg.AsOf.Day > lastDay || cfg.Parquet.Compression == "" {
			t.Errorf("%+v", cfg)
		}
	})
}

// A key that is none is told with those that there are.
func TestConfigKeys(t *testing.T) {
	_, err := parseConfig("as_of = 2026-03-20\nreporting_currency = \"USD\"\n[csv]\ndelimeter = \";\"\n", "", "x")
	if err == nil || !strings.Contains(err.Error(), "unknown key csv.delimeter: mend its name or take it out; the keys are as_of, reporting_currency, calendar, csv.delimiter, ") ||
		!strings.HasSuffix(err.Error(), "limits, columns") {
		t.Errorf("%v", err)
	}
}
