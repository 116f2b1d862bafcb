package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"github.com/urfave/cli/v2"

	"nightbook/reader"
	"nightbook/risk"
	"nightbook/risk/market"
	"nightbook/schema"
	"nightbook/writer"
)

func impliedCommand() *cli.Command {
	return &cli.Command{
		Name:      "implied",
		Usage:     "find the volatilities of option quotes",
		ArgsUsage: "SNAPSHOT",
		Description: `Reads quotes, underlyings and rates of the snapshot folder SNAPSHOT and writes
the quotes with the volatility each implies, a status, and a reason where there
is none: as CSV on standard output, or to FILE, whose name ends in .csv or
.parquet. With from = "quotes" under [vols] of run.toml, a run prices with the
surface of these volatilities.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "out", Usage: "`FILE` to write, .csv or .parquet", DefaultText: "standard output"},
			&cli.StringFlag{Name: "as-of", Usage: "valuation `DATE`, as YYYY-MM-DD or YYYY-MM-DDTHH:MM"},
			&cli.BoolFlag{Name: "replace", Usage: "put FILE in the place of an earlier one"},
			logFlag,
		},
		Action: func(c *cli.Context) error {
			if err := checkLog(c); err != nil {
				return err
			}
			snapshot, err := oneArgument(c, "the snapshot folder")
			if err != nil {
				return err
			}
			if err := checkAsOf(c); err != nil {
				return err
			}
			out, format := c.String("out"), "csv"
			if out != "" {
				if format = strings.TrimPrefix(filepath.Ext(out), "."); format != "csv" && format != "parquet" {
					return usagef("--out takes a file that ends in .csv or .parquet, not %q", out)
				}
			}
			rows, err := imply(c.Context, snapshot, c.String("as-of"))
			if err != nil {
				return err
			}
			write := func(w io.Writer) error { return writeImplied(w, format, rows) }
			if out == "" {
				err = write(c.App.Writer)
			} else {
				err = writer.WriteFile(out, c.Bool("replace"), write)
			}
			if errors.Is(err, writer.ErrExists) {
				return &hinted{err, "give --replace to put the new file in its place"}
			}
			if err != nil {
				return err
			}
			return tellImplied(newConsole(c.App.ErrWriter, c.String("log")), rows)
		},
	}
}

// imply reads a snapshot and inverts its quotes.
func imply(ctx context.Context, snapshot, asOf string) ([]schema.ImpliedRow, error) {
	folder, err := reader.OpenFolder(ctx, snapshot, "underlyings", "rates", "quotes")
	if err != nil {
		return nil, err
	}
	cfg, err := folder.Config(asOf)
	if err != nil {
		return nil, err
	}
	cfg.Vols.FromQuotes = true
	raw, err := folder.Market(cfg)
	if err != nil {
		return nil, err
	}
	raw.Vols = nil
	dicts := schema.NewDicts()
	m, _, err := market.New(cfg, raw, dicts)
	if err != nil {
		return nil, err
	}
	return risk.Imply(ctx, m, dicts, raw.Quotes)
}

func writeImplied(w io.Writer, format string, rows []schema.ImpliedRow) error {
	t, err := writer.NewTable(format, w, schema.ImpliedOut, writer.Options{Workers: 1})
	if err != nil {
		return err
	}
	if err := t.Write(schema.ImpliedFrame(rows)); err != nil {
		return err
	}
	return t.Close()
}

// tellImplied counts the quotes by status; quotes without a volatility are a
// status of the program of their own.
func tellImplied(con *console, rows []schema.ImpliedRow) error {
	count := make([]int, len(schema.QuoteStatuses))
	for i := range rows {
		count[rows[i].Status]++
	}
	var parts []string
	for s, n := range count {
		if n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", n, schema.QuoteStatuses[s]))
		}
	}
	con.say(fmt.Sprintf("%d quotes: %s", len(rows), strings.Join(parts, ", ")), "quotes", len(rows), "ok", count[schema.QuoteOK])
	if count[schema.QuoteOK] < len(rows) {
		return &statusError{exitRejected, nil}
	}
	return nil
}
