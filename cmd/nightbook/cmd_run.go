package main

import (
	"io"
	"runtime"
	"slices"
	"strings"
	"time"

	"github.com/urfave/cli/v2"
)

// options are what the command line says of a run.
type options struct {
	snapshot string
	out      string    // "": no results are written
	check    io.Writer // where refused rows are listed if out is ""
	asOf     string
	formats  []string
	workers  int
	memory   int64 // ceiling in bytes; 0: none
	strict   bool
	replace  bool
}

var readFlags = []cli.Flag{
	&cli.StringFlag{Name: "as-of", Usage: "valuation `DATE`, as YYYY-MM-DD or YYYY-MM-DDTHH:MM; wins over run.toml and the folder's name"},
	&cli.IntFlag{Name: "workers", Usage: "price on `N` processors; the results do not depend on it", DefaultText: "all"},
	&cli.BoolFlag{Name: "strict", Usage: "fail at the first refused row"},
	logFlag,
}

func runCommand() *cli.Command {
	return &cli.Command{
		Name:      "run",
		Usage:     "price a snapshot and write its results",
		ArgsUsage: "SNAPSHOT",
		Description: `Reads the snapshot folder SNAPSHOT and writes DIR/AS_OF/, whole or not at all:
report.xlsx, lines, books, underlyings and currencies in the formats asked for,
rejects.csv, warnings.csv and manifest.json.`,
		Flags: append([]cli.Flag{
			&cli.StringFlag{Name: "out", Value: "out", Usage: "folder `DIR` in which the results' folder is made"},
			&cli.StringFlag{Name: "formats", Value: "xlsx,parquet", Usage: "`LIST` of xlsx, parquet and csv"},
			&cli.StringFlag{Name: "memory", Usage: "take no more memory than `SIZE`, as 512MiB; row groups of Parquet files may be smaller for it", DefaultText: "no ceiling"},
			&cli.BoolFlag{Name: "replace", Usage: "put the results in the place of those of an earlier run"},
		}, readFlags...),
		Action: func(c *cli.Context) error {
			o, err := parseOptions(c)
			if err != nil {
				return err
			}
			if o.out = c.String("out"); o.out == "" {
				return usagef("--out needs a folder")
			}
			if o.memory, err = parseSize(c.String("memory")); err != nil {
				return err
			}
			o.replace = c.Bool("replace")
			for f := range strings.SplitSeq(c.String("formats"), ",") {
				f = strings.TrimSpace(f)
				if !slices.Contains([]string{"xlsx", "parquet", "csv"}, f) {
					return usagef("--formats takes a list of xlsx, parquet and csv, not %q", f)
				}
				if !slices.Contains(o.formats, f) {
					o.formats = append(o.formats, f)
				}
			}
			return timed(c.Context, "priced", o, newConsole(c.App.ErrWriter, c.String("log")))
		},
	}
}

func checkCommand() *cli.Command {
	return &cli.Command{
		Name:      "check",
		Usage:     "read, validate and price a snapshot, and write nothing",
		ArgsUsage: "SNAPSHOT",
		Description: `Does all that run does but write, and lists every refused row on standard
output as CSV, in the form of rejects.csv.`,
		Flags: readFlags,
		Action: func(c *cli.Context) error {
			o, err := parseOptions(c)
			if err != nil {
				return err
			}
			o.check = c.App.Writer
			return timed(c.Context, "checked", o, newConsole(c.App.ErrWriter, c.String("log")))
		},
	}
}

// maxWorkers bounds the memory that batches at work take.
const maxWorkers = 256

func parseOptions(c *cli.Context) (*options, error) {
	snapshot, err := oneArgument(c, "the snapshot folder")
	if err != nil {
		return nil, err
	}
	if err := checkLog(c); err != nil {
		return nil, err
	}
	if err := checkAsOf(c); err != nil {
		return nil, err
	}
	o := &options{snapshot: snapshot, asOf: c.String("as-of"), strict: c.Bool("strict"), workers: c.Int("workers")}
	if c.IsSet("workers") && (o.workers < 1 || o.workers > maxWorkers) {
		return nil, usagef("--workers takes a number from 1 to %d, not %d", maxWorkers, o.workers)
	}
	if o.workers == 0 {
		o.workers = min(runtime.GOMAXPROCS(0), maxWorkers)
	}
	return o, nil
}

// checkLog refuses a --log that is none.
func checkLog(c *cli.Context) error {
	if f := c.String("log"); f != "text" && f != "json" {
		return usagef("--log takes text or json, not %q", f)
	}
	return nil
}

// checkAsOf refuses an --as-of that is no date.
func checkAsOf(c *cli.Context) error {
	s := c.String("as-of")
	for _, layout := range []string{time.DateOnly, "2006-01-02T15:04", "2006-01-02T15:04:05", "2006-01-02 15:04", "2006-01-02 15:04:05"} {
		if _, err := time.Parse(layout, s); err == nil || s == "" {
			return nil
		}
	}
	return usagef("--as-of takes a date as YYYY-MM-DD, with THH:MM behind it if need be, not %q", s)
}
