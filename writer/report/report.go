package report

import (
	"fmt"
	"io"

	"nightbook/schema"
	"nightbook/writer/xlsx"
)

// Report is a workbook in the making. It is for one goroutine at a time.
type Report struct {
	book *xlsx.Book
	cfg  *schema.Config
	look styles

	lines, exercise, rejects             *xlsx.Table
	lineColumns                          int // of the lines table, on the sheet or not
	linesSeen, exerciseSeen, rejectsSeen int64
	maxLines                             int
	shut                                 bool
}

// New starts the workbook of a run whose lines have the columns of a table.
func New(w io.Writer, cfg *schema.Config, lines schema.Table) (*Report, error) {
	book, err := xlsx.NewBook(w, sheetNames(), xlsx.Properties{
		Title:   "Risk of " + cfg.AsOf.String(),
		Program: "nightbook",
		Made:    cfg.AsOf.Day.String() + "T00:00:00Z",
	})
	if err != nil {
		return nil, err
	}
	r := &Report{book: book, cfg: cfg, lineColumns: len(lines.Columns), maxLines: max(0, cfg.Workbook.MaxLines)}
	if err := r.start(lines); err != nil {
		r.Abort()
		return nil, err
	}
	return r, nil
}

func (r *Report) start(lines schema.Table) error {
	var err error
	if r.look, err = newStyles(r.book); err != nil {
		return err
	}
	if r.lines, err = r.book.NewTable(r.book.Sheet("Lines"), lines, tableHead); err != nil {
		return err
	}
	if r.exercise, err = r.book.NewTable(r.book.Sheet("Exercise"), schema.ExerciseOut, tableHead); err != nil {
		return err
	}
	r.rejects, err = r.book.NewTable(r.book.Sheet("Rejects"), schema.RejectsOut, tableHead)
	return err
}

// Lines adds rows of the lines table. Beyond the limit of the configuration,
// and beyond what a sheet can hold, they are counted only.
func (r *Report) Lines(f *schema.Frame) error {
	r.linesSeen += int64(f.N)
	return r.lines.Write(f, min(f.N, r.maxLines-r.lines.Written(), r.lines.Room()))
}

// Rejects adds rows of the rejects table.
func (r *Report) Rejects(f *schema.Frame) error {
	r.rejectsSeen += int64(f.N)
	return r.rejects.Write(f, min(f.N, r.rejects.Room()))
}

// Finish makes the other sheets and writes the workbook.
func (r *Report) Finish(s *schema.Summary) error {
	for _, sheet := range sheets {
		if err := sheet.fill(r, s); err != nil {
			return fmt.Errorf("sheet %s: %w", sheet.name, err)
		}
	}
	err := r.book.Close()
	r.Abort()
	return err
}

// Abort lets go of an unfinished workbook. After Finish it does nothing.
func (r *Report) Abort() {
	if !r.shut {
		r.shut = true
		r.book.Abort() // nothing of it is a file
	}
}
