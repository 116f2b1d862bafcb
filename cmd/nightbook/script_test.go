package main

import (
	"os"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain lets the scripts call the real main.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"nightbook": main,
	})
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
