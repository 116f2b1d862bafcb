package main

import (
	"fmt"

	"github.com/urfave/cli/v2"

	"nightbook/samples"
)

func demoCommand() *cli.Command {
	return &cli.Command{
		Name:      "demo",
		Usage:     "write the snapshot of an invented desk, of any size",
		ArgsUsage: "DIR",
		Description: `Writes a snapshot folder DIR with N position lines. The same arguments give the
same bytes on every machine. Desks, books and underlyings are invented.`,
		Flags: []cli.Flag{
			&cli.Int64Flag{Name: "lines", Value: 10_000, Usage: "`N` position lines"},
			&cli.Uint64Flag{Name: "seed", Value: 1, Usage: "seed `S` of the invention"},
			&cli.BoolFlag{Name: "american", Usage: "options on shares and futures are American, and shares pay cash dividends"},
			logFlag,
		},
		Action: func(c *cli.Context) error {
			if err := checkLog(c); err != nil {
				return err
			}
			dir, err := oneArgument(c, "the folder to make")
			if err != nil {
				return err
			}
			lines := c.Int64("lines")
			if lines < 1 {
				return usagef("--lines takes a number from 1, not %d", lines)
			}
			if err := samples.Write(dir, samples.Options{Lines: lines, Seed: c.Uint64("seed"), American: c.Bool("american"), Stop: c.Context.Err}); err != nil {
				return err
			}
			newConsole(c.App.ErrWriter, c.String("log")).say(fmt.Sprintf("wrote %s lines to %s", grouped(float64(lines), 0), dir), "lines", lines, "folder", dir)
			return nil
		},
	}
}
