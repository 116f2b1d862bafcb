package parquet

import "errors"

// Damaged reports whether an error of this package says that the file breaks the
// rules of its format.
func Damaged(err error) bool { return errors.Is(err, errDamaged) }
