package main

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strconv"

	"nightbook/schema"
	"nightbook/writer"
	"nightbook/writer/report"
)

// outputs are the files of a run. With options.out == "" there are none: refused
// rows are listed on options.check, and the rest is dropped.
type outputs struct {
	ctx    context.Context // writing ends with it
	o      *options
	cfg    *schema.Config
	dicts  *schema.Dicts
	share  share
	folder *writer.Folder
	frame  schema.Frame

	lines      []*tableFile // one a format
	exercise   []*tableFile
	rejected   *tableFile
	report     *report.Report
	reportFile *writer.File
}

// tableFile is a table on its way to a file.
type tableFile struct {
	writer.Table
	file *writer.File
	rows int64
}

func (t *tableFile) write(f *schema.Frame) error {
	t.rows += int64(f.N)
	return t.Write(f)
}

func (t *tableFile) close() error {
	if err := t.Close(); err != nil || t.file == nil {
		return err
	}
	t.file.SetRows(t.rows)
	return t.file.Close()
}

// abort returns when nothing is written to the file any more.
func (t *tableFile) abort() {
	if a, ok := t.Table.(writer.Aborter); ok {
		a.Abort()
	}
}

func newOutputs(ctx context.Context, o *options, cfg *schema.Config, dicts *schema.Dicts, lines schema.Table, s share) (*outputs, error) {
	out := &outputs{ctx: ctx, o: o, cfg: cfg, dicts: dicts, share: s}
	var err error
	if o.out == "" {
		w, err := writer.NewTable("csv", o.check, schema.RejectsOut, writer.Options{BareText: cfg.CSV.BareText})
		out.rejected = &tableFile{Table: w}
		return out, err
	}
	if err := keepApart(o, cfg); err != nil {
		return nil, err
	}
	out.folder, err = writer.NewFolder(o.out, cfg.AsOf.Day.String(), o.replace)
	if errors.Is(err, writer.ErrExists) {
		return nil, &hinted{err, "the results of an earlier run are kept; give --replace to put these in their place, or another --out"}
	}
	if err != nil {
		return nil, err
	}
	if err := out.open(lines); err != nil {
		out.abort()
		return nil, err
	}
	return out, nil
}

func (out *outputs) open(lines schema.Table) error {
	for _, format := range out.tableFormats() {
		t, err := out.table(lines, format)
		if err != nil {
			return err
		}
		out.lines = append(out.lines, t)
		if t, err = out.table(schema.ExerciseOut, format); err != nil {
			return err
		}
		out.exercise = append(out.exercise, t)
	}
	var err error
	if out.rejected, err = out.table(schema.RejectsOut, "csv"); err != nil {
		return err
	}
	if slices.Contains(out.o.formats, "xlsx") {
		if out.reportFile, err = out.folder.Create("report.xlsx"); err != nil {
			return err
		}
		out.report, err = report.New(stopping{out.ctx, out.reportFile}, out.cfg, lines)
	}
	return err
}

// stopping is a file whose writing ends with the run: what is left to be written
// after the last line may be most of a workbook.
type stopping struct {
	ctx context.Context
	w   io.Writer
}

func (s stopping) Write(p []byte) (int, error) {
	if err := s.ctx.Err(); err != nil {
		return 0, err
	}
	return s.w.Write(p)
}

func (out *outputs) tableFormats() []string {
	return slices.DeleteFunc(slices.Clone(out.o.formats), func(f string) bool { return f == "xlsx" })
}

func (out *outputs) table(t schema.Table, format string) (*tableFile, error) {
	f, err := out.folder.Create(t.Name + "." + format)
	if err != nil {
		return nil, err
	}
	w, err := writer.NewTable(format, stopping{out.ctx, f}, t, writer.Options{
		Compression: out.cfg.Parquet.Compression,
		BareText:    out.cfg.CSV.BareText,
		Version:     version,
		Workers:     out.share.workers,
		GroupRows:   out.share.groupRows,
		GroupBytes:  out.share.groupBytes,
		Metadata: map[string]string{
			"nightbook.version": version, "nightbook.schema_revision": strconv.Itoa(schema.Revision),
			"nightbook.as_of": out.cfg.AsOf.String(), "nightbook.reporting_currency": out.cfg.ReportingCurrency,
			"nightbook.caution": writer.Caution,
		},
	})
	if err != nil {
		return nil, err
	}
	return &tableFile{Table: w, file: f}, nil
}

// batch writes a compacted batch, its refused rows, and its options to exercise.
func (out *outputs) batch(b *schema.Batch, early []schema.ExerciseRow) error {
	if err := out.rejects(b.Rejects); err != nil || out.folder == nil {
		return err
	}
	b.Frame(out.dicts, &out.frame)
	for _, t := range out.lines {
		if err := t.write(&out.frame); err != nil {
			return err
		}
	}
	if out.report != nil {
		if err := out.report.Lines(&out.frame); err != nil {
			return err
		}
	}
	if len(early) == 0 {
		return nil
	}
	f := schema.ExerciseFrame(b, out.dicts, early)
	for _, t := range out.exercise {
		if err := t.write(f); err != nil {
			return err
		}
	}
	if out.report != nil {
		return out.report.Exercise(f)
	}
	return nil
}

// rejects writes refused rows.
func (out *outputs) rejects(rejects []schema.Reject) error {
	if len(rejects) == 0 {
		return nil
	}
	f := schema.RejectsFrame(rejects)
	if err := out.rejected.write(f); err != nil {
		return err
	}
	if out.report != nil {
		return out.report.Rejects(f)
	}
	return nil
}

// finish writes what is known only at the end, and makes the folder appear.
func (out *outputs) finish(s *schema.Summary) error {
	if out.folder == nil {
		return out.closeLines()
	}
	// The lines go to the disk meanwhile, which takes longest.
	closed := make(chan error, 1)
	go func() { closed <- guarded(out.closeLines) }()
	err := out.sums(s)
	if err := cmp.Or(<-closed, err); err != nil {
		return err
	}
	return out.commit(s)
}

// closeLines closes the tables that came line by line.
func (out *outputs) closeLines() error {
	for _, t := range slices.Concat(out.lines, out.exercise, []*tableFile{out.rejected}) {
		if err := t.close(); err != nil {
			return err
		}
	}
	return nil
}

// sums writes the tables of the whole, and the workbook.
func (out *outputs) sums(s *schema.Summary) error {
	whole := func(t schema.Table, format string, f *schema.Frame) error {
		w, err := out.table(t, format)
		if err != nil {
			return err
		}
		if err := w.write(f); err != nil {
			w.abort()
			return err
		}
		return w.close()
	}
	for _, format := range out.tableFormats() {
		if err := whole(schema.BooksOut, format, s.BooksFrame()); err != nil {
			return err
		}
		if err := whole(schema.UnderlyingsOut, format, s.UnderlyingsFrame()); err != nil {
			return err
		}
		if err := whole(schema.CurrenciesOut, format, s.CurrenciesFrame()); err != nil {
			return err
		}
		s.LinesFiles = append(s.LinesFiles, schema.Lines.Name+"."+format)
	}
	if err := whole(schema.WarningsOut, "csv", schema.NotesFrame(s.Notes)); err != nil {
		return err
	}
	if out.report == nil {
		return nil
	}
	if err := out.report.Finish(s); err != nil {
		return err
	}
	return out.reportFile.Close()
}

func (out *outputs) commit(s *schema.Summary) error {
	if err := out.ctx.Err(); err != nil {
		return err
	}
	manifest, err := writer.Manifest(s, out.folder.Outputs())
	if err != nil {
		return err
	}
	f, err := out.folder.Create("manifest.json")
	if err != nil {
		return err
	}
	if _, err := f.Write(manifest); err != nil {
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	return out.folder.Commit()
}

// abort removes what is unfinished; after finish it does nothing.
func (out *outputs) abort() {
	if out.report != nil {
		out.report.Abort()
	}
	for _, t := range slices.Concat(out.lines, out.exercise, []*tableFile{out.rejected}) {
		if t != nil {
			t.abort()
		}
	}
	if out.folder != nil {
		out.folder.Abort()
	}
}

// resultFolder is where a run's results stand, "" where it writes none.
func (o *options) resultFolder(cfg *schema.Config) string {
	if o.out == "" {
		return ""
	}
	return filepath.Join(o.out, cfg.AsOf.Day.String())
}

// keepApart refuses results that would take the place of what is read.
func keepApart(o *options, cfg *schema.Config) error {
	result, err := os.Stat(o.resultFolder(cfg))
	if err != nil {
		return nil // there is nothing to take the place of
	}
	dir, err := filepath.Abs(o.snapshot)
	for ; err == nil; dir = filepath.Dir(dir) {
		if info, err := os.Stat(dir); err == nil && os.SameFile(info, result) {
			return fmt.Errorf("the results would take the place of the snapshot %s: give another --out", o.snapshot)
		}
		if dir == filepath.Dir(dir) {
			return nil
		}
	}
	return err
}
