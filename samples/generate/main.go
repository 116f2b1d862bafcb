// Command generate writes the generated files of the committed snapshots anew:
//
//	go run ./samples/generate samples
package main

import (
	"fmt"
	"os"

	"nightbook/samples"
)

func main() {
	if len(os.Args) != 2 {
		fmt.Fprintln(os.Stderr, "usage: generate SAMPLES_FOLDER")
		os.Exit(2)
	}
	if err := samples.Regenerate(os.Args[1]); err != nil {
		fmt.Fprintln(os.Stderr, "generate:", err)
		os.Exit(1)
	}
}
