package main

import (
	"errors"
	"fmt"
	"io"
	"log/slog"
	"math"
	"path/filepath"
	"strings"
	"text/tabwriter"
	"time"
	"unicode/utf8"

	"nightbook/risk/vec"
	"nightbook/schema"
)

// console speaks to the person, or machine, at standard error.
//
// The rules: data goes to files or standard output, never here. One problem, one
// line that begins with "nightbook: ", its remedy on a line of its own. The
// summary of a run comes last. A progress bar is drawn on a terminal only. With
// --log json every message is one JSON object a line, and there is no bar.
type console struct {
	w    io.Writer
	json *slog.Logger // nil: text
}

func newConsole(w io.Writer, format string) *console {
	c := &console{w: w}
	if format == "json" {
		c.json = slog.New(slog.NewJSONHandler(w, nil))
	}
	return c
}

// hinted is an error with a remedy.
type hinted struct {
	err  error
	hint string
}

func (h *hinted) Error() string { return h.err.Error() }
func (h *hinted) Unwrap() error { return h.err }

// problem tells of an error that ends the program.
func (c *console) problem(err error, status int) {
	var h *hinted
	hint := remedyFor(err)
	if errors.As(err, &h) {
		hint = h.hint
	}
	if c.json != nil {
		args := []any{"status", status}
		if hint != "" {
			args = append(args, "hint", hint)
		}
		c.json.Error(err.Error(), args...)
		return
	}
	fmt.Fprintf(c.w, "nightbook: %v\n", err)
	if hint != "" {
		fmt.Fprintf(c.w, "hint: %s\n", hint)
	}
}

// say tells of something done; args are the same for machines.
func (c *console) say(text string, args ...any) {
	if c.json != nil {
		c.json.Info(text, args...)
		return
	}
	fmt.Fprintln(c.w, text)
}

// finished tells how a run went. dir is "" where nothing was written.
func (c *console) finished(verb string, s *schema.Summary, dir string, took time.Duration) {
	rate := float64(s.RowsIn) / max(took.Seconds(), 1e-9)
	if c.json != nil {
		c.json.Info(verb, "as_of", s.Config.AsOf.String(), "rows_in", s.RowsIn, "priced", s.Total.Priced, "expired", s.Total.Expired,
			"rejected", s.Rejects, "market_rows_rejected", s.Faults, "warnings", len(s.Notes), "value_base", s.Total.Measures[schema.Value],
			"reporting_currency", s.Config.ReportingCurrency, "folder", dir, "seconds", took.Seconds(), "rows_per_second", rate, "kernel", vec.Tier())
		return
	}
	fmt.Fprintf(c.w, "%s %s: %s rows in = %s priced + %s expired + %s rejected", verb, s.Config.AsOf,
		grouped(float64(s.RowsIn), 0), grouped(float64(s.Total.Priced), 0), grouped(float64(s.Total.Expired), 0), grouped(float64(s.Rejects), 0))
	if s.Faults > 0 {
		fmt.Fprintf(c.w, "; rejected market rows: %s", grouped(float64(s.Faults), 0))
	}
	fmt.Fprintf(c.w, "\n")
	for _, n := range s.RejectCount {
		fmt.Fprintf(c.w, "  rejected, %s: %d\n", n.Code, n.Count)
	}
	if n := len(s.Notes); n > 0 {
		fmt.Fprintf(c.w, "  warnings: %d\n", n)
	}
	c.books(s)
	if dir != "" {
		fmt.Fprintf(c.w, "results in %s\n", filepath.ToSlash(dir))
	}
	fmt.Fprintf(c.w, "%.2f s, %s rows a second (%s)\n", took.Seconds(), grouped(rate, 0), vec.Tier())
}

// mostBooks is how many top-level books are told of.
const mostBooks = 30

// books prints value and sensitivities of the top-level books.
func (c *console) books(s *schema.Summary) {
	if len(s.Books) == 0 {
		return
	}
	names := len("total")
	for i := range s.Books {
		names = max(names, utf8.RuneCountInString(s.Books[i].Book))
	}
	w := tabwriter.NewWriter(c.w, 0, 0, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintf(w, "%-*s\tlines\t%s\t\n", names, "in "+s.Config.ReportingCurrency, strings.Join(schema.MeasureNames[:], "\t"))
	row := func(name string, t *schema.Totals) {
		fmt.Fprintf(w, "%-*s\t%s\t", names, name, grouped(float64(t.Lines), 0))
		for _, x := range t.Measures {
			fmt.Fprintf(w, "%s\t", grouped(x, 0))
		}
		fmt.Fprintln(w)
	}
	top, more := 0, 0
	for i := range s.Books {
		b := &s.Books[i]
		switch {
		case b.Level > 0:
		case top < mostBooks:
			row(b.Book, &b.Totals)
			top++
		default:
			more++
		}
	}
	row("total", &s.Total)
	w.Flush()
	if more > 0 {
		fmt.Fprintf(c.w, "  and %s top-level books more: see books\n", grouped(float64(more), 0))
	}
}

// grouped writes x with the given decimals and a comma between thousands; beyond
// 2^53 it has no digits to fill them, and is written with an exponent.
func grouped(x float64, decimals int) string {
	if math.Abs(x) > 1<<53 {
		return fmt.Sprintf("%.5e", x)
	}
	text := fmt.Sprintf("%.*f", decimals, x)
	sign := ""
	if strings.HasPrefix(text, "-") {
		sign, text = "-", text[1:]
		if strings.Trim(text, "0.") == "" {
			sign = "" // no minus before a rounded zero
		}
	}
	whole, fraction, _ := strings.Cut(text, ".")
	for i := len(whole) - 3; i > 0; i -= 3 {
		whole = whole[:i] + "," + whole[i:]
	}
	if fraction != "" {
		fraction = "." + fraction
	}
	return sign + whole + fraction
}
