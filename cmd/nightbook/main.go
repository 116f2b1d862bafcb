// Command nightbook turns a day's position file and market snapshot into the
// risk a desk signs off: see the README of this module, or nightbook --help.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	context.AfterFunc(ctx, stop)                     // a second Ctrl-C ends the program at once
	os.Exit(run(ctx, os.Args, os.Stdout, os.Stderr)) // still listening: a run that is done says so
}
