package schema

import (
	"errors"
	"fmt"
	"strings"
)

// Reject is a refused row: where it stands, what is wrong with it, and the row
// as it came.
type Reject struct {
	File   string // name in the snapshot folder
	Sheet  string // workbooks only
	Line   int64  // 1-based line of the file or row of the sheet or Parquet row; 0 is the file as a whole
	Column string // as the file names it; "" is the row as a whole
	Code   RejectCode
	Value  string // the cell as it came
	Reason string // what was expected and what to do
	Row    string // the row as it came
	Index  int    // the row's place in its batch
}

// Note is a warning. Notes with the same Code and Subject are counted together.
type Note struct {
	Code    NoteCode
	Subject string // the book, underlying, curve or file it speaks of
	Message string
	File    string
	Line    int64 // the first line concerned; 0 where it is not about a line
	Count   int64
}

// CellError is a fault in a file: the error form of a Reject, for faults that
// stop the run.
type CellError struct {
	File, Sheet   string
	Line          int64
	Column, Value string
	Code          RejectCode
	Err           error
}

// CellError returns the refused row as an error.
func (r *Reject) CellError() *CellError {
	return &CellError{File: r.File, Sheet: r.Sheet, Line: r.Line, Column: r.Column, Value: r.Value, Code: r.Code, Err: errors.New(r.Reason)}
}

// Error says where, what, and what was expected.
func (e *CellError) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Sheet != "" {
		fmt.Fprintf(&b, ", sheet %s", e.Sheet)
	}
	if e.Line > 0 {
		fmt.Fprintf(&b, ", line %d", e.Line)
	}
	if e.Column != "" {
		fmt.Fprintf(&b, ", column %s", e.Column)
	}
	if e.Value != "" {
		fmt.Fprintf(&b, ", value %q", e.Value)
	}
	fmt.Fprintf(&b, ": %v", e.Err)
	return b.String()
}

// Unwrap returns the cause.
func (e *CellError) Unwrap() error { return e.Err }
