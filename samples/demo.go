package samples

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
)

// Options says which demo snapshot to write.
type Options struct {
	Lines int64  // position lines, at least 1
	Seed  uint64 // another seed is another desk

	// American: options on shares and futures are American, and shares pay cash
	// dividends instead of a yield.
	American bool

	Broken int64 // lines in a million that carry one fault each; 0 to 1,000,000; the first line is always whole

	Stop func() error // asked now and then: its error, if any, ends the writing; nil never does
}

// Demo writes the snapshot folder of an invented desk: lines position lines
// and the market data they need. The bytes depend on lines and seed alone.
// Memory does not grow with lines.
func Demo(dir string, lines int64, seed uint64) error {
	return Write(dir, Options{Lines: lines, Seed: seed})
}

// Write is Demo with all its options. Where it fails, it leaves the folder empty.
func Write(dir string, o Options) (err error) {
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
	d.american = o.American
	market := d.marketFiles()
	defer func() {
		if err != nil {
			for _, f := range append(market, file{name: "positions.csv"}, file{name: "run.toml"}, file{name: "README.md"}) {
				os.Remove(filepath.Join(dir, f.name))
			}
		}
	}()
	if err := writeFiles(dir, market); err != nil {
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
	w := bufio.NewWriterSize(stopping{f, o.Stop}, 256<<10)
	t, err := d.writePositions(w, o)
	return t, errors.Join(err, w.Flush(), f.Close())
}

// stopping is a writer that ends where stop has an error.
type stopping struct {
	w    io.Writer
	stop func() error
}

func (s stopping) Write(p []byte) (int, error) {
	if s.stop != nil {
		if err := s.stop(); err != nil {
			return 0, err
		}
	}
	return s.w.Write(p)
}
