package xlsx

import (
	"errors"

	"nightbook/schema"
)

// Damaged reports whether an error of this package says that the file breaks the
// rules of its format.
func Damaged(err error) bool { return errors.Is(err, errDamaged) }

// LimitTexts bounds the bytes of text in a run of rows by what a ceiling leaves.
func (w *Workbook) LimitTexts(ceiling, bytes int64) {
	w.limits.Under(ceiling, schema.BatchBytes, bytes)
}
