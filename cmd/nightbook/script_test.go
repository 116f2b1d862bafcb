package main

import (
	"context"
	"fmt"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain lets the scripts call the real main.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"nightbook": main,
		"peak":      peak,
	})
}

// peak is nightbook, but ends with status 9 if the most memory it ever had
// resident is above MOST MiB.
func peak() {
	code := run(context.Background(), os.Args, os.Stdout, os.Stderr)
	status, err := os.ReadFile("/proc/self/status")
	_, after, ok := strings.Cut(string(status), "VmHWM:")
	var kib int64
	if _, bad := fmt.Sscan(after, &kib); err != nil || !ok || bad != nil {
		panic("the peak cannot be read")
	}
	if most, err := strconv.ParseInt(os.Getenv("MOST"), 10, 64); err != nil || kib > most<<10 {
		fmt.Fprintf(os.Stderr, "%d KiB resident\n", kib)
		code = 9
	}
	os.Exit(code)
}

// TestScripts drives the program as its users do.
func TestScripts(t *testing.T) {
	samples, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata/script",
		RequireExplicitExec: true,
		Cmds:                scriptCommands,
		Setup: func(e *testscript.Env) error {
			e.Setenv("SAMPLES", samples+"/../../samples")
			return nil
		},
	})
}
