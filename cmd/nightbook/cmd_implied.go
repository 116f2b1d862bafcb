package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
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
			found, err := imply(c.Context, snapshot, c.String("as-of"), out)
			if err != nil {
				return err
			}
			write := func(w io.Writer) error { return found.write(w, format) }
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
			return found.tell(newConsole(c.App.ErrWriter, c.String("log")))
		},
	}
}

// implied is what came of the quotes.
type implied struct {
	rows []schema.ImpliedRow

	// Rows of the other tables: what a quote lacks for them is answered with the
	// quote, but a table that lost a row may be one that no quote stumbles over.
	refused []schema.Reject

	bareText bool
}

// imply reads a snapshot and inverts its quotes.
func imply(ctx context.Context, snapshot, asOf, out string) (*implied, error) {
	folder, err := reader.OpenFolder(ctx, snapshot, "underlyings", "rates", "quotes")
	if err != nil {
		return nil, err
	}
	if err := keepInputs(folder, snapshot, out); err != nil {
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
	found := &implied{bareText: cfg.CSV.BareText}
	for _, f := range raw.Faults {
		if f.Table != "quotes" { // each of those is answered
			found.refused = append(found.refused, f.Reject)
		}
	}
	found.rows, err = risk.Imply(ctx, m, dicts, raw.Quotes)
	return found, err
}

// keepInputs refuses to write over what is read.
func keepInputs(folder *reader.Folder, snapshot, out string) error {
	result, err := os.Stat(out)
	if err != nil {
		return nil // there is nothing to write over
	}
	names := []string{"run.toml"}
	for i := range schema.Inputs {
		if name := folder.FileOf(schema.Inputs[i].Name); name != "" {
			names = append(names, name)
		}
	}
	for _, name := range names {
		if info, err := os.Stat(filepath.Join(snapshot, name)); err == nil && os.SameFile(info, result) {
			return fmt.Errorf("%s is read by this command, and is not replaced by it: give another --out", out)
		}
	}
	return nil
}

func (found *implied) write(w io.Writer, format string) error {
	t, err := writer.NewTable(format, w, schema.ImpliedOut, writer.Options{Workers: 1, BareText: found.bareText})
	if err != nil {
		return err
	}
	if err := t.Write(schema.ImpliedFrame(found.rows)); err != nil {
		return err
	}
	return t.Close()
}

// mostRefused is how many refused rows are told one by one: there is no file of
// them to look into.
const mostRefused = 20

// tell counts the quotes by status, and tells of the refused rows of other
// tables. Either is a status of the program of its own.
func (found *implied) tell(con *console) error {
	rows, refused := found.rows, found.refused
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
	for i := range refused[:min(len(refused), mostRefused)] {
		r := &refused[i]
		con.say("rejected, "+r.CellError().Error(), "file", r.File, "sheet", r.Sheet, "line", r.Line, "column", r.Column, "code", r.Code, "value", r.Value)
	}
	if more := len(refused) - mostRefused; more > 0 {
		con.say(fmt.Sprintf("and %d market rows more", more), "more", more)
	}
	text := fmt.Sprintf("%d quotes: %s", len(rows), strings.Join(parts, ", "))
	if len(rows) == 0 {
		text = "0 quotes"
	}
	if len(refused) > 0 {
		text += fmt.Sprintf("; rejected market rows: %d", len(refused))
	}
	con.say(text, "quotes", len(rows), "ok", count[schema.QuoteOK], "market_rows_rejected", len(refused))
	if count[schema.QuoteOK] < len(rows) || len(refused) > 0 {
		return &statusError{exitRejected, nil}
	}
	return nil
}
