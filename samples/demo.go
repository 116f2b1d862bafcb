package samples

import (
	"bufio"
	"errors"
	"fmt"
	"os"
	"path/filepath"
)

// Options says which demo snapshot to write.
type Options struct {
	Lines  int64  // position lines, at least 1
	Seed   uint64 // another seed is another desk
	Broken int64  // lines in a million that carry one fault each; 0 to 1,000,000; the first line is always whole
}

// Demo writes the snapshot folder of an invented desk: lines position lines
// and the market data they need. The bytes depend on lines and seed alone.
// Memory does not grow with lines.
func Demo(dir string, lines int64, seed uint64) error {
	return Write(dir, Options{Lines: lines, Seed: seed})
}

// Write is Demo with all its options.
func Write(dir string, o Options) error {
	if o.Lines < 1 {
		return fmt.Errorf("a demo snapshot needs at least 1 line, not %d", o.Lines)
	}
	if o.Broken < 0 || o.Broken > perMillion {
		return fmt.Errorf("broken lines are counted per million: %d is not between 0 and %d", o.Broken, perMillion)
	}
	if err := emptyDir(dir); err != nil {
		return err
	}
	d := newDesk(o.Seed)
	if err := writeFiles(dir, d.marketFiles()); err != nil {
		return err
	}
	tally, err := writePositionsFile(filepath.Join(dir, "positions.csv"), d, o)
	if err != nil {
		return fmt.Errorf("writing the snapshot: %w", err)
	}
	return writeFiles(dir, []file{
		{"run.toml", []byte(demoRun)},
		{"README.md", demoReadme(d, o, tally)},
	})
}

func writePositionsFile(path string, d *desk, o Options) (tally, error) {
	f, err := os.Create(path)
	if err != nil {
		return tally{}, err
	}
	w := bufio.NewWriterSize(f, 256<<10)
	t, err := d.writePositions(w, o)
	return t, errors.Join(err, w.Flush(), f.Close())
}
