package main

import (
	"bytes"
	"fmt"
	"maps"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"
)

// program returns the program as a file: the test program under another name.
func program(t *testing.T) string {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "nightbook")
	if err := os.Symlink(self, path); err != nil {
		t.Fatal(err)
	}
	return path
}

// filesIn returns the files of a folder of results; nil if there is no such folder.
func filesIn(t *testing.T, dir string) map[string]string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if os.IsNotExist(err) {
		return nil
	}
	if err != nil {
		t.Fatal(err)
	}
	found := map[string]string{}
	for _, e := range entries {
		data, err := os.ReadFile(filepath.Join(dir, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		found[e.Name()] = string(data)
	}
	return found
}

// contest is two snapshots of one day, whose results are known, and a folder for
// which their runs contend.
type contest struct {
	program, out, day string
	snapshots         [2]string
	results           [2]map[string]string
	last              time.Duration // that a run took
}

func newContest(t *testing.T) *contest {
	t.Helper()
	c := &contest{program: program(t), out: filepath.Join(t.TempDir(), "out")}
	for i := range c.snapshots {
		c.snapshots[i] = filepath.Join(t.TempDir(), "demo")
		c.must(t, "demo", c.snapshots[i], "--lines", "800", "--seed", fmt.Sprint(i+1))
		alone := t.TempDir()
		begun := time.Now()
		c.must(t, "run", c.snapshots[i], "--out", alone, "--formats", "xlsx,parquet,csv", "--workers", "2")
		c.last = time.Since(begun)
		entries, err := os.ReadDir(alone)
		if err != nil || len(entries) != 1 {
			t.Fatal(entries, err)
		}
		c.day = entries[0].Name()
		c.results[i] = filesIn(t, filepath.Join(alone, c.day))
	}
	if maps.Equal(c.results[0], c.results[1]) {
		t.Fatal("the two snapshots have the same results")
	}
	return c
}

func (c *contest) must(t *testing.T, args ...string) {
	t.Helper()
	if text, err := exec.Command(c.program, args...).CombinedOutput(); err != nil {
		t.Fatalf("%q: %v\n%s", args, err, text)
	}
}

// start starts a run of a snapshot into the common folder.
func (c *contest) start(t *testing.T, snapshot int) (*exec.Cmd, *bytes.Buffer) {
	t.Helper()
	cmd := exec.Command(c.program, "run", c.snapshots[snapshot], "--out", c.out, "--formats", "xlsx,parquet,csv", "--workers", "2", "--replace")
	said := &bytes.Buffer{}
	cmd.Stderr = said
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	return cmd, said
}

// found returns whose results the folder holds, -1 for none, and fails where it
// holds anything else.
func (c *contest) found(t *testing.T) int {
	t.Helper()
	files := filesIn(t, filepath.Join(c.out, c.day))
	if files == nil {
		return -1
	}
	for i := range c.results {
		if maps.Equal(files, c.results[i]) {
			return i
		}
	}
	t.Fatalf("the folder holds the results of no run: %q", slices.Sorted(maps.Keys(files)))
	return -1
}

// only fails where the folder holds more than the results.
func (c *contest) only(t *testing.T) {
	t.Helper()
	entries, err := os.ReadDir(c.out)
	if err != nil && !os.IsNotExist(err) {
		t.Fatal(err)
	}
	for _, e := range entries {
		if e.Name() != c.day {
			t.Errorf("left behind: %s", e.Name())
		}
	}
}

// A run that is killed leaves the old results, the new ones, or, where there were
// none, nothing; the next run finds its way. Package writer kills itself at
// every step of the renames.
func TestKilled(t *testing.T) {
	c := newContest(t)
	kills := 200
	if testing.Short() {
		kills = 12
	}
	random := rand.New(rand.NewPCG(2026, 12))
	had, outcomes := -1, [3]int{}
	for i := range kills {
		next := i % 2
		cmd, said := c.start(t, next)
		time.Sleep(time.Duration(random.Int64N(int64(c.last * 5 / 4))))
		cmd.Process.Kill()
		cmd.Wait()
		now := c.found(t)
		switch now {
		case had:
			outcomes[0]++
		case next:
			outcomes[1]++
		default:
			t.Fatalf("kill %d: the results of snapshot %d were there and %d was run; now those of %d are: %s", i, had, next, now, said)
		}
		had = now
		switch {
		case i%10 == 9: // a run that is let to its end
			cmd, said := c.start(t, next)
			begun := time.Now()
			if err := cmd.Wait(); err != nil {
				t.Fatalf("the run after kill %d: %v\n%s", i, err, said)
			}
			c.last = time.Since(begun)
			if had = c.found(t); had != next {
				t.Fatalf("the run after kill %d: the results of snapshot %d", i, had)
			}
			c.only(t)
		case i%10 == 4: // and one that begins without results, but with what a kill has left
			if err := os.RemoveAll(filepath.Join(c.out, c.day)); err != nil {
				t.Fatal(err)
			}
			had = -1
		}
	}
	t.Logf("%d kills: %d left what was there, %d the new results", kills, outcomes[0], outcomes[1])
}

// A run that is interrupted ends soon, says so, and leaves nothing half-made,
// while it reads, prices, writes or seals.
func TestInterrupted(t *testing.T) {
	c := newContest(t)
	n := 40
	if testing.Short() {
		n = 6
	}
	var slowest time.Duration
	had := -1
	for i := range n {
		cmd, said := c.start(t, i%2)
		time.Sleep(c.last / 8) // the first moments of a process are not the program's
		time.Sleep(c.last * time.Duration(i) / time.Duration(n))
		cmd.Process.Signal(syscall.SIGINT)
		begun := time.Now()
		cmd.Wait()
		slowest = max(slowest, time.Since(begun))
		now := c.found(t)
		switch code := cmd.ProcessState.ExitCode(); {
		case code == exitDone && now == i%2:
		case code == exitFailed && now == had && strings.Contains(said.String(), "stopped: nothing was written"):
		case code == -1 && now == had: // before it had begun to listen
		default:
			t.Errorf("interrupted at step %d: status %d, results of snapshot %d after those of %d: %s", i, code, now, had, said)
		}
		had = now
		if cmd.ProcessState.ExitCode() >= 0 {
			c.only(t)
		}
	}
	t.Logf("the slowest took %v to end", slowest)
	if slowest > 10*time.Second { // a second on a machine of its own
		t.Errorf("%v until an interrupted run ended", slowest)
	}
}

// A run into a folder that another run is writing is refused, however long that
// one takes, and does it no harm.
func TestSecondRefused(t *testing.T) {
	c := newContest(t)
	for try := 1; ; try++ {
		first, said := c.start(t, 0)
		for begun := time.Now(); !c.writing(t); {
			if time.Since(begun) > time.Minute {
				t.Fatalf("the first run does not begin to write: %s", said)
			}
		}
		first.Process.Signal(syscall.SIGSTOP)
		second, refused := c.start(t, 1)
		second.Wait()
		first.Process.Signal(syscall.SIGCONT)
		first.Wait()
		if code := first.ProcessState.ExitCode(); code != exitDone {
			t.Fatalf("the first run: status %d: %s", code, said)
		}
		code := second.ProcessState.ExitCode()
		if code == exitDone && c.found(t) == 1 && try < 10 { // the first had ended before it was held up
			if err := os.RemoveAll(c.out); err != nil {
				t.Fatal(err)
			}
			continue
		}
		if code != exitFailed || !strings.Contains(refused.String(), "another run is writing it\nhint: wait until that run has ended") {
			t.Errorf("the second run: status %d: %s", code, refused)
		}
		if who := c.found(t); who != 0 {
			t.Errorf("the results are those of snapshot %d", who)
		}
		c.only(t)
		return
	}
}

// writing reports whether a run has begun to write.
func (c *contest) writing(t *testing.T) bool {
	t.Helper()
	parts, err := filepath.Glob(filepath.Join(c.out, ".*part"))
	if err != nil {
		t.Fatal(err)
	}
	return len(parts) > 0
}

// Of two runs into one folder at once, one at least succeeds, and a loser says why.
func TestTwoAtOnce(t *testing.T) {
	c := newContest(t)
	n := 12
	if testing.Short() {
		n = 3
	}
	refused := 0
	for range n {
		a, saidA := c.start(t, 0)
		b, saidB := c.start(t, 1)
		a.Wait()
		b.Wait()
		failed := 0
		for _, x := range []struct {
			cmd  *exec.Cmd
			said *bytes.Buffer
		}{{a, saidA}, {b, saidB}} {
			if code := x.cmd.ProcessState.ExitCode(); code == exitFailed && strings.Contains(x.said.String(), "another run is writing it") {
				failed++
			} else if code != exitDone {
				t.Errorf("status %d: %s", code, x.said)
			}
		}
		if failed == 2 {
			t.Error("both runs failed")
		}
		refused += failed
		if who := c.found(t); who < 0 || failed == 1 && c.winner(a, b) != who {
			t.Errorf("the results are those of snapshot %d", who)
		}
		c.only(t)
	}
	t.Logf("%d of %d were refused", refused, n)
}

// winner returns which of two runs has succeeded.
func (c *contest) winner(a, b *exec.Cmd) int {
	if a.ProcessState.ExitCode() == exitDone {
		return 0
	}
	return 1
}
