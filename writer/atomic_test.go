package writer

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"nightbook/schema"
)

// fill makes a folder of results whose every file but the manifest says what.
func fill(f *Folder, what string) error {
	for i := range 4 {
		file, err := f.Create(fmt.Sprintf("file%d.txt", i))
		if err != nil {
			return err
		}
		for range 50 {
			if _, err := fmt.Fprintln(file, what); err != nil {
				return err
			}
		}
		if err := file.Close(); err != nil {
			return err
		}
	}
	outputs := f.Outputs()
	file, err := f.Create(manifestName)
	if err != nil {
		return err
	}
	if _, err := file.Write(smallManifest(outputs)); err != nil {
		return err
	}
	if err := file.Close(); err != nil {
		return err
	}
	return f.Commit()
}

// smallManifest is as much of a manifest as tells a folder of results.
func smallManifest(outputs []schema.OutputFile) []byte {
	m := manifest{Program: program}
	for _, o := range outputs {
		m.Outputs = append(m.Outputs, manifestFile(o))
	}
	data, err := json.Marshal(&m)
	if err != nil {
		panic(err)
	}
	return data
}

func mustFolder(t *testing.T, out string, replace bool) *Folder {
	t.Helper()
	f, err := NewFolder(out, "day", replace)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Abort() })
	return f
}

// state says what OUT/day holds: "" for nothing, else what its files say. It
// fails the test if the folder is not whole.
func state(t *testing.T, out string) string {
	t.Helper()
	entries, err := os.ReadDir(filepath.Join(out, "day"))
	if errors.Is(err, os.ErrNotExist) {
		return ""
	}
	if err != nil {
		t.Fatal(err)
	}
	if len(entries) != 5 {
		t.Fatalf("%d files, want 5", len(entries))
	}
	what := ""
	for _, e := range entries {
		if e.Name() == manifestName {
			continue
		}
		data, err := os.ReadFile(filepath.Join(out, "day", e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		first, _, _ := strings.Cut(string(data), "\n")
		if string(data) != strings.Repeat(first+"\n", 50) || what != "" && first != what {
			t.Fatalf("%s is not whole", e.Name())
		}
		what = first
	}
	return what
}

// entries lists OUT, hidden names included.
func entries(t *testing.T, out string) []string {
	t.Helper()
	list, err := os.ReadDir(out)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range list {
		names = append(names, e.Name())
	}
	return names
}

func wantEntries(t *testing.T, out string, want ...string) {
	t.Helper()
	if got := entries(t, out); !slices.Equal(got, want) {
		t.Errorf("%s holds %q, want %q", out, got, want)
	}
}

func TestCommitAndReplace(t *testing.T) {
	out := filepath.Join(t.TempDir(), "a", "b") // made if need be
	f := mustFolder(t, out, false)
	if state(t, out) != "" {
		t.Error("the folder is there before the commit")
	}
	if err := fill(f, "one"); err != nil {
		t.Fatal(err)
	}
	if got := state(t, out); got != "one" {
		t.Errorf("after the commit: %q", got)
	}
	wantEntries(t, out, "day")

	if _, err := NewFolder(out, "day", false); !errors.Is(err, ErrExists) {
		t.Errorf("existing folder: %v", err)
	}
	wantEntries(t, out, "day")
	if err := fill(mustFolder(t, out, true), "two"); err != nil {
		t.Fatal(err)
	}
	if got := state(t, out); got != "two" {
		t.Errorf("after the replacement: %q", got)
	}
	wantEntries(t, out, "day")
}

func TestReplaceByTwoRenames(t *testing.T) {
	out := t.TempDir()
	if err := fill(mustFolder(t, out, false), "one"); err != nil {
		t.Fatal(err)
	}
	f := mustFolder(t, out, true)
	f.exchange = func(string, string) (bool, error) { return false, nil }
	if err := fill(f, "two"); err != nil {
		t.Fatal(err)
	}
	if got := state(t, out); got != "two" {
		t.Errorf("after the replacement: %q", got)
	}
	wantEntries(t, out, "day")
}

// A run killed between the two renames leaves the old results under a hidden
// name; the next run must put them back.
func TestOldResultsComeBack(t *testing.T) {
	out := t.TempDir()
	if err := fill(mustFolder(t, out, false), "one"); err != nil {
		t.Fatal(err)
	}
	if err := os.Rename(filepath.Join(out, "day"), filepath.Join(out, ".day"+oldSuffix)); err != nil {
		t.Fatal(err)
	}
	f := mustFolder(t, out, true)
	if got := state(t, out); got != "one" {
		t.Errorf("old results: %q", got)
	}
	f.Abort()
	wantEntries(t, out, "day")
}

func TestAbort(t *testing.T) {
	out := t.TempDir()
	f := mustFolder(t, out, false)
	open, err := f.Create("open.txt")
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Commit(); err == nil {
		t.Error("a folder with an open file was committed")
	}
	for range 2 {
		if err := f.Abort(); err != nil {
			t.Error(err)
		}
	}
	wantEntries(t, out)
	if _, err := open.Write([]byte("x")); err == nil {
		t.Error("a file of an aborted folder can be written")
	}
	if _, err := f.Create("late.txt"); err == nil {
		t.Error("an aborted folder takes files")
	}

	f = mustFolder(t, out, false)
	if err := fill(f, "one"); err != nil {
		t.Fatal(err)
	}
	if err := f.Abort(); err != nil {
		t.Error(err)
	}
	if got := state(t, out); got != "one" {
		t.Errorf("Abort after Commit: %q", got)
	}
}

// The folder may have been made by somebody else while the run was at work.
func TestExistsAtCommit(t *testing.T) {
	results := func(p string) error {
		return errors.Join(os.Mkdir(p, 0o777), os.WriteFile(filepath.Join(p, manifestName), smallManifest(nil), 0o666))
	}
	for _, c := range []struct {
		make    func(string) error
		replace bool
		want    error
	}{
		{func(p string) error { return os.Mkdir(p, 0o777) }, false, ErrNotResults}, // a plain rename would take its place
		{func(p string) error { return os.Mkdir(p, 0o777) }, true, ErrNotResults},
		{func(p string) error { return os.WriteFile(p, nil, 0o666) }, true, ErrNotResults},
		{results, false, ErrExists},
	} {
		out := t.TempDir()
		f := mustFolder(t, out, c.replace)
		if err := c.make(filepath.Join(out, "day")); err != nil {
			t.Fatal(err)
		}
		if err := fill(f, "one"); !errors.Is(err, c.want) {
			t.Errorf("commit over an existing name: %v", err)
		}
		if err := renameNew(f.hidden(partSuffix), f.path()); !errors.Is(err, ErrExists) {
			t.Errorf("rename over an existing name: %v", err)
		}
		if err := f.Abort(); err != nil {
			t.Error(err)
		}
		wantEntries(t, out, "day")
	}
}

func TestReplaceRefusesWhatIsNoFolder(t *testing.T) {
	out := t.TempDir()
	elsewhere := t.TempDir()
	if err := os.Symlink(elsewhere, filepath.Join(out, "day")); err != nil {
		t.Fatal(err)
	}
	if _, err := NewFolder(out, "day", true); !errors.Is(err, ErrNotResults) {
		t.Errorf("a link in the place of the folder: %v", err)
	}
	wantEntries(t, out, "day")
}

// Nothing but a folder of results may be replaced, nor does it count as one.
func TestOnlyResultsAreReplaced(t *testing.T) {
	listed := smallManifest([]schema.OutputFile{{Name: "a.csv"}, {Name: "sub"}})
	for _, c := range []struct {
		what  string
		files map[string]string // a name that ends in / is a folder
		want  [2]error          // without replace and with
	}{
		{"results", map[string]string{manifestName: string(listed), "a.csv": ""}, [2]error{ErrExists, nil}},
		{"an empty folder", nil, [2]error{ErrNotResults, ErrNotResults}},
		{"a snapshot", map[string]string{"positions.csv": "line_id\n"}, [2]error{ErrNotResults, ErrNotResults}},
		{"a private file", map[string]string{manifestName: string(listed), "b.csv": ""}, [2]error{ErrNotResults, ErrNotResults}},
		{"a folder under a listed name", map[string]string{manifestName: string(listed), "sub/": ""}, [2]error{ErrNotResults, ErrNotResults}},
		{"a folder for a manifest", map[string]string{manifestName + "/": ""}, [2]error{ErrNotResults, ErrNotResults}},
		{"another program's manifest", map[string]string{manifestName: `{"program":"other"}`}, [2]error{ErrNotResults, ErrNotResults}},
		{"no JSON", map[string]string{manifestName: "nightbook"}, [2]error{ErrNotResults, ErrNotResults}},
	} {
		out := t.TempDir()
		day := filepath.Join(out, "day")
		if err := os.Mkdir(day, 0o777); err != nil {
			t.Fatal(err)
		}
		for name, text := range c.files {
			var err error
			if folder, ok := strings.CutSuffix(name, "/"); ok {
				err = os.Mkdir(filepath.Join(day, folder), 0o777)
			} else {
				err = os.WriteFile(filepath.Join(day, name), []byte(text), 0o666)
			}
			if err != nil {
				t.Fatal(err)
			}
		}
		for i, replace := range []bool{false, true} {
			f, err := NewFolder(out, "day", replace)
			if !errors.Is(err, c.want[i]) {
				t.Errorf("%s, replace %v: %v, want %v", c.what, replace, err, c.want[i])
			}
			if err == nil {
				f.Abort()
			}
			wantEntries(t, out, "day")
			if got := entries(t, day); len(got) != len(c.files) {
				t.Errorf("%s, replace %v: %q is left", c.what, replace, got)
			}
		}
	}
}

func TestNames(t *testing.T) {
	out := t.TempDir()
	bad := []string{"", ".", "..", "a/b", "/a", "../a", `a\b`, ".hidden", "C:a", "a\x00b"}
	for _, name := range bad {
		if _, err := NewFolder(out, name, false); err == nil {
			t.Errorf("folder %q was started", name)
		}
	}
	f := mustFolder(t, out, false)
	for _, name := range bad {
		if _, err := f.Create(name); err == nil {
			t.Errorf("file %q was made", name)
		}
	}
	if _, err := f.Create("a.csv"); err != nil {
		t.Error(err)
	}
	if _, err := f.Create("a.csv"); err == nil {
		t.Error("a file was made twice")
	}
	target := filepath.Join(t.TempDir(), "target")
	if err := os.Symlink(target, filepath.Join(f.hidden(partSuffix), "link.csv")); err != nil {
		t.Fatal(err)
	}
	if _, err := f.Create("link.csv"); err == nil {
		t.Error("a link was followed")
	}
	if _, err := os.Lstat(target); err == nil {
		t.Error("the target of a link was made")
	}
}

func TestOutputs(t *testing.T) {
	f := mustFolder(t, t.TempDir(), false)
	for _, name := range []string{"b.csv", "a.csv"} {
		file, err := f.Create(name)
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprint(file, "hello ")
		fmt.Fprint(file, name)
		file.SetRows(7)
		if err := file.Close(); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := f.Create("open.csv"); err != nil {
		t.Fatal(err)
	}
	out := f.Outputs()
	if len(out) != 2 || out[0].Name != "a.csv" || out[1].Name != "b.csv" {
		t.Fatalf("outputs %v", out)
	}
	sum := sha256.Sum256([]byte("hello a.csv"))
	if out[0].SHA256 != hex.EncodeToString(sum[:]) || out[0].Bytes != 11 || out[0].Rows != 7 {
		t.Errorf("output %+v", out[0])
	}
}

func TestBusy(t *testing.T) {
	out := t.TempDir()
	first := mustFolder(t, out, false)
	if _, err := NewFolder(out, "day", false); !errors.Is(err, ErrBusy) {
		t.Errorf("second run: %v", err)
	}
	other, err := NewFolder(out, "other", false) // another folder is no matter
	if err != nil {
		t.Fatal(err)
	}
	if err := other.Abort(); err != nil {
		t.Error(err)
	}
	if err := fill(first, "one"); err != nil {
		t.Error(err)
	}
	wantEntries(t, out, "day")
}

// Only names of this folder's own may be cleared away.
func TestOthersAreLeftAlone(t *testing.T) {
	out := t.TempDir()
	others := []string{".day.nightbook-part2", ".day2" + partSuffix, ".day2" + lockSuffix, "day" + partSuffix}
	for _, name := range others {
		if err := os.Mkdir(filepath.Join(out, name), 0o777); err != nil {
			t.Fatal(err)
		}
	}
	if err := fill(mustFolder(t, out, false), "one"); err != nil {
		t.Fatal(err)
	}
	want := append([]string{"day"}, others...)
	slices.Sort(want)
	wantEntries(t, out, want...)
}

const (
	childVariable  = "WRITER_TEST_CHILD_OUT"
	renameVariable = "WRITER_TEST_CHILD_TWO_RENAMES"
)

// TestMain lets the test program be its own child, which writes the same folder
// over and over until it is killed.
func TestMain(m *testing.M) {
	out := os.Getenv(childVariable)
	if out == "" {
		os.Exit(m.Run())
	}
	for i := 0; ; i++ {
		f, err := NewFolder(out, "day", true)
		if err == nil {
			if os.Getenv(renameVariable) != "" {
				f.exchange = func(string, string) (bool, error) { return false, nil }
			}
			err = fill(f, fmt.Sprint("run ", i))
		}
		if err != nil {
			fmt.Println("child:", err)
			os.Exit(1)
		}
		fmt.Println("done", i)
	}
}

// killed starts a child on OUT, waits until it has finished a run or, with
// fresh, only until it has begun, kills it at a random moment, and returns what
// it printed.
func killed(t *testing.T, out string, random *rand.Rand, fresh, twoRenames bool) []string {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	child := exec.Command(self)
	child.Env = append(os.Environ(), childVariable+"="+out)
	if twoRenames {
		child.Env = append(child.Env, renameVariable+"=1")
	}
	stdout, err := child.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := child.Start(); err != nil {
		t.Fatal(err)
	}
	lines := bufio.NewScanner(stdout)
	var printed []string
	if fresh {
		for begun := false; !begun; { // until the hidden folder or its lock is there
			list, _ := os.ReadDir(out)
			begun = len(list) > 0
		}
	} else if lines.Scan() {
		printed = append(printed, lines.Text())
	}
	time.Sleep(time.Duration(random.IntN(4000)) * time.Microsecond)
	if err := child.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	for lines.Scan() {
		printed = append(printed, lines.Text())
	}
	child.Wait() // it was killed
	for _, line := range printed {
		if !strings.HasPrefix(line, "done") {
			t.Error(line)
		}
	}
	return printed
}

// Whenever a run is killed, there are whole old results, whole new ones or, at
// the first run, none; and the next run finds its way.
func TestKilled(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	t.Run("replacing", func(t *testing.T) {
		out := t.TempDir()
		for range 30 {
			if printed := killed(t, out, random, false, false); len(printed) == 0 {
				t.Error("the child did not come through after a kill")
			}
			if state(t, out) == "" {
				t.Error("results that were there are gone")
			}
			for _, name := range entries(t, out) {
				if name != "day" && name != ".day"+partSuffix && name != ".day"+lockSuffix {
					t.Errorf("left behind: %s", name)
				}
			}
		}
		finishUp(t, out)
	})
	t.Run("by two renames", func(t *testing.T) {
		out := t.TempDir()
		for range 30 {
			if printed := killed(t, out, random, false, true); len(printed) == 0 {
				t.Error("the child did not come through after a kill")
			}
			// Between the two renames the old results bear the hidden name.
			if _, err := os.Stat(filepath.Join(out, ".day"+oldSuffix)); state(t, out) == "" && err != nil {
				t.Error("results that were there are gone")
			}
		}
		finishUp(t, out)
	})
	t.Run("first run", func(t *testing.T) {
		whole := 0
		for range 30 {
			out := t.TempDir()
			killed(t, out, random, true, false)
			if state(t, out) != "" {
				whole++
			}
			finishUp(t, out)
		}
		t.Logf("%d of 30 had results", whole)
	})
}

// finishUp checks that a run after a kill does what it should and leaves
// nothing else behind.
func finishUp(t *testing.T, out string) {
	t.Helper()
	if err := fill(mustFolder(t, out, true), "last"); err != nil {
		t.Fatal(err)
	}
	if got := state(t, out); got != "last" {
		t.Errorf("the run after a kill: %q", got)
	}
	wantEntries(t, out, "day")
}
