package main

import (
	"os/exec"
	"strings"
	"testing"
)

// mounted runs the program with results on a file system of its own, mounted with
// the given options, and returns what it said, its status, and what is left there.
func mounted(t *testing.T, options string, args ...string) (said, status, left string) {
	t.Helper()
	const script = `mount -t tmpfs -o "$1" tmpfs "$2" || exit 99
dir=$2; shift 2
"$@" --out "$dir" 2>&1; echo "status $?"; ls -A "$dir"`
	dir := t.TempDir()
	cmd := exec.Command("unshare", append([]string{"-rm", "sh", "-c", script, "sh", options, dir, program(t)}, args...)...)
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	said, rest, _ := strings.Cut(string(out), "status ")
	status, left, _ = strings.Cut(rest, "\n")
	return said, status, strings.TrimSpace(left)
}

func canMount() bool {
	return exec.Command("unshare", "-rm", "mount", "-t", "tmpfs", "tmpfs", "/mnt").Run() == nil
}

// Files that may not grow, at whichever length, fail the run with the reason, and
// nothing of it is left. This needs no rights.
func TestFileTooLarge(t *testing.T) {
	nightbook := program(t)
	for _, blocks := range []string{"0", "1", "20", "60", "120"} { // of 512 bytes
		out := t.TempDir()
		cmd := exec.Command("sh", "-c", `ulimit -f "$1"; exec "$2" run ../../samples/alder-index-desk --formats xlsx,parquet,csv --out "$3"`, "sh", blocks, nightbook, out)
		said, _ := cmd.CombinedOutput()
		if code := cmd.ProcessState.ExitCode(); code != exitFailed || !strings.Contains(string(said), "file too large") || len(filesIn(t, out)) > 0 {
			t.Errorf("files of %s blocks: status %d, %s", blocks, code, said)
		}
	}
}

// A disk that is full, at whichever moment, fails the run with its reason and
// leaves nothing of it; one that has room enough does not.
func TestFullDisk(t *testing.T) {
	if !canMount() {
		t.Skip("a file system cannot be mounted here")
	}
	run := []string{"run", "../../samples/alder-index-desk", "--formats", "xlsx,parquet,csv"}
	for _, size := range []string{"4k", "16k", "48k", "96k", "160k"} {
		said, status, left := mounted(t, "size="+size, run...)
		if status != "1" || !strings.Contains(said, "no space left on device") || left != "" {
			t.Errorf("a disk of %s: status %s, left %q: %s", size, status, left, said)
		}
	}
	if said, status, left := mounted(t, "size=16m", run...); status != "3" || left != "2026-06-19" {
		t.Errorf("a disk of 16 MiB: status %s, left %q: %s", status, left, said)
	}
}

// A folder that cannot be written is told of, and no time is spent on pricing.
func TestReadOnly(t *testing.T) {
	if !canMount() {
		t.Skip("a file system cannot be mounted here")
	}
	said, status, left := mounted(t, "ro", "run", "../../samples/alder-index-desk")
	if status != "1" || !strings.Contains(said, "read-only file system") || strings.Contains(said, "priced") || left != "" {
		t.Errorf("status %s, left %q: %s", status, left, said)
	}
}
