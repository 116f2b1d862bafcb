package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/rogpeppe/go-internal/testscript"
)

// scriptCommands are what the scripts can say beyond testscript's own words.
var scriptCommands = map[string]func(ts *testscript.TestScript, neg bool, args []string){
	"status":     scriptStatus,
	"samefolder": scriptSameFolder,
	"only":       scriptOnly,
	"cpfolder":   scriptCopyFolder,
	"ownbooks":   scriptOwnBooks,
}

// scriptStatus runs a command that must end with a status: status N COMMAND ….
func scriptStatus(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N command…")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		exit, ok := err.(*exec.ExitError)
		if !ok {
			ts.Fatalf("%v", err)
		}
		got = exit.ExitCode()
	}
	if got != want {
		ts.Fatalf("status %d, want %d", got, want)
	}
}

// files returns the files below a folder, by path from it.
func files(ts *testscript.TestScript, dir string) map[string][]byte {
	found := map[string][]byte{}
	ts.Check(filepath.WalkDir(dir, func(path string, d os.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		name, err := filepath.Rel(dir, path)
		if err != nil {
			return err
		}
		found[name], err = os.ReadFile(path)
		return err
	}))
	return found
}

// scriptSameFolder compares two folders byte by byte: samefolder A B.
func scriptSameFolder(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 2 {
		ts.Fatalf("usage: samefolder a b")
	}
	a, b := files(ts, ts.MkAbs(args[0])), files(ts, ts.MkAbs(args[1]))
	if len(a) == 0 || len(a) != len(b) {
		ts.Fatalf("%d files in %s, %d in %s", len(a), args[0], len(b), args[1])
	}
	for name, data := range a {
		if !bytes.Equal(data, b[name]) {
			ts.Fatalf("%s differs between %s and %s", name, args[0], args[1])
		}
	}
}

// scriptOnly checks what a folder holds, hidden files included: only DIR NAME ….
func scriptOnly(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 1 {
		ts.Fatalf("usage: only dir name…")
	}
	entries, err := os.ReadDir(ts.MkAbs(args[0]))
	ts.Check(err)
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	slices.Sort(names)
	if want := slices.Sorted(slices.Values(args[1:])); !slices.Equal(names, want) {
		ts.Fatalf("%s holds %q, want %q", args[0], names, want)
	}
}

// scriptCopyFolder copies the files of a folder: cpfolder FROM TO.
func scriptCopyFolder(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 2 {
		ts.Fatalf("usage: cpfolder from to")
	}
	ts.Check(os.CopyFS(ts.MkAbs(args[1]), os.DirFS(ts.MkAbs(args[0]))))
}

// scriptOwnBooks gives each line of a position file a book of its own: ownbooks FILE.
func scriptOwnBooks(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: ownbooks file")
	}
	lines := strings.Split(ts.ReadFile(args[0]), "\n")
	for i, line := range lines[1:] {
		if id, rest, ok := strings.Cut(line, ","); ok {
			_, rest, _ = strings.Cut(rest, ",")
			lines[1+i] = id + ",B" + strconv.Itoa(i) + "," + rest
		}
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), []byte(strings.Join(lines, "\n")), 0o666))
}
