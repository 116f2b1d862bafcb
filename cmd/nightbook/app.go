package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/urfave/cli/v2"
)

// version is the program's own; a change of it may change what is written.
const version = "0.1.0"

// The exit statuses, as the help lists them.
const (
	exitDone     = 0
	exitFailed   = 1
	exitUsage    = 2
	exitRejected = 3
)

// statusError is an error, or a fact worth a status of its own (err nil).
type statusError struct {
	status int
	err    error
}

func (e *statusError) Error() string {
	if e.err == nil {
		return fmt.Sprintf("exit status %d", e.status)
	}
	return e.err.Error()
}

func (e *statusError) Unwrap() error { return e.err }

func usagef(format string, args ...any) error {
	return &statusError{exitUsage, fmt.Errorf(format, args...)}
}

// run is the whole program but for the process around it.
func run(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	app := newApp(stdout, stderr)
	err := app.RunContext(ctx, flagsFirst(app, args))
	if err == nil {
		return exitDone
	}
	if errors.Is(err, context.Canceled) {
		err = errors.New("stopped: nothing was written")
	}
	var s *statusError
	if !errors.As(err, &s) {
		s = &statusError{exitFailed, err}
	}
	if s.err != nil {
		newConsole(stderr, logFormat(args)).problem(s.err, s.status)
	}
	return s.status
}

func newApp(stdout, stderr io.Writer) *cli.App {
	wrongUsage := func(_ *cli.Context, err error, _ bool) error { return &statusError{exitUsage, err} }
	commands := []*cli.Command{runCommand(), checkCommand(), impliedCommand(), columnsCommand(), demoCommand()}
	for _, c := range commands {
		c.OnUsageError, c.HideHelpCommand = wrongUsage, true
	}
	return &cli.App{
		Name:            "nightbook",
		Usage:           "price a desk's positions, add up its books, and write the day's risk",
		Version:         version,
		HideHelpCommand: true,
		Description: `nightbook reads a snapshot folder (positions and market data as CSV, Parquet or
workbooks), prices every line with its sensitivities, and writes a workbook
and columnar files. A refused row is kept with its address and a reason;
nothing is ever silently left out.

Exit status: 0 done · 1 failed · 2 wrong usage · 3 done, with rejected rows.
4 is kept for breached limits, which this version does not check.

The values are estimates from models, not advice; they are to be checked by
qualified staff, and local regulation prevails.`,
		Writer:         stdout,
		ErrWriter:      stderr,
		ExitErrHandler: func(*cli.Context, error) {},
		OnUsageError:   wrongUsage,
		Commands:       commands,
		Action: func(c *cli.Context) error {
			if c.Args().Present() {
				return usagef("there is no command %q; the commands are run, check, implied, columns and demo", c.Args().First())
			}
			return cli.ShowAppHelp(c)
		},
	}
}

// flagsFirst moves a command's flags before its arguments, so that they may
// stand on either side.
func flagsFirst(app *cli.App, args []string) []string {
	if len(args) < 2 {
		return args
	}
	at := slices.IndexFunc(app.Commands, func(c *cli.Command) bool { return c.Name == args[1] })
	if at < 0 {
		return args
	}
	takesValue := map[string]bool{}
	for _, f := range app.Commands[at].Flags {
		_, isBool := f.(*cli.BoolFlag)
		for _, name := range f.Names() {
			takesValue[name] = !isBool
		}
	}
	flags, rest := slices.Clone(args[:2]), []string(nil)
	for i := 2; i < len(args); i++ {
		a := args[i]
		if a == "--" {
			rest = append(rest, args[i:]...)
			break
		}
		if len(a) < 2 || a[0] != '-' {
			rest = append(rest, a)
			continue
		}
		flags = append(flags, a)
		if takesValue[strings.TrimLeft(a, "-")] && i+1 < len(args) {
			i++
			flags = append(flags, args[i])
		}
	}
	return append(flags, rest...)
}

// oneArgument returns the only argument of a command.
func oneArgument(c *cli.Context, what string) (string, error) {
	if n := c.NArg(); n != 1 {
		return "", usagef("%s takes one argument, %s, not %d; see nightbook %s --help", c.Command.Name, what, n, c.Command.Name)
	}
	return c.Args().First(), nil
}

var logFlag = &cli.StringFlag{Name: "log", Value: "text", Usage: "how to speak on standard error: `FORMAT` text or json"}

// logFormat finds the value of --log without parsing the rest, so that errors
// of usage can be told in it.
func logFormat(args []string) string {
	for i, a := range args {
		if a == "--log=json" || a == "-log=json" || (a == "--log" || a == "-log") && i+1 < len(args) && args[i+1] == "json" {
			return "json"
		}
	}
	return "text"
}
