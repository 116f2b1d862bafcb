package main

import (
	"slices"

	"github.com/urfave/cli/v2"

	"nightbook/writer"
)

func columnsCommand() *cli.Command {
	return &cli.Command{
		Name:  "columns",
		Usage: "print the data dictionary, or the DDL of the result tables",
		Description: `Prints every column of every input and result table with its type, unit and
meaning, and the closed lists of reject and warning codes. With --format sql it
prints CREATE TABLE statements for the result tables instead.`,
		Flags: []cli.Flag{&cli.StringFlag{Name: "format", Value: "md", Usage: "`FORMAT` md, csv, json or sql"}, logFlag},
		Action: func(c *cli.Context) error {
			if err := checkLog(c); err != nil {
				return err
			}
			if c.NArg() > 0 {
				return usagef("columns takes no argument, but was given %q", c.Args().First())
			}
			if f := c.String("format"); !slices.Contains(writer.DictionaryFormats, f) {
				return usagef("--format takes md, csv, json or sql, not %q", f)
			}
			return writer.Dictionary(c.App.Writer, c.String("format"))
		},
	}
}
