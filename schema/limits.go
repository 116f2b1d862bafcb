package schema

import "fmt"

// Limit is one of the bounds that reading a snapshot is held to, so that no
// file, made in error or in malice, can fill the machine. [limits] of run.toml
// moves them.
type Limit uint8

// The limits. LimitDocs documents each.
const (
	FieldBytes Limit = iota
	RowBytes
	BatchBytes
	Columns
	Rows
	Books
	Underlyings
	Strategies
	MarketRows
	Parts
	UnpackedBytes
	UnpackedRatio
	WindowBytes
	Sheets
	HeldBytes
	MetadataBytes
	PageBytes
	DictionaryValues
	limitCount
)

// LimitDoc is what a limit is called and what it bounds.
type LimitDoc struct {
	Key                  string // under [limits]
	Default, Least, Most int64
	Bounds               string
	what                 string // of the message: what there is more of than the limit allows
}

// LimitDocs are the limits, in the order of their constants.
var LimitDocs = [limitCount]LimitDoc{
	FieldBytes:       {"field_bytes", 64 << 10, 256, 16 << 20, "bytes of a field; a row with a longer one is refused", "a field has more bytes"},
	RowBytes:         {"row_bytes", 1 << 20, 1 << 10, 64 << 20, "bytes of a row of a text file, or a sixteenth of those of a row in a workbook's own markup", "the row that starts here has more bytes"},
	BatchBytes:       {"batch_bytes", 64 << 20, 1 << 20, 512 << 20, "bytes of text in 4,096 rows of a Parquet file", "the texts of 4,096 rows have more bytes"},
	Columns:          {"columns", 2048, 1, 4096, "columns of a table", "it has more columns"},
	Rows:             {"rows", 1e9, 1, 1e12, "rows of the positions", "it has more rows"},
	Books:            {"books", 20_000, 1, 1e8, "different books in the positions, and rows of the table of books, each of which takes some kilobytes of memory", "its rows name more books"},
	Underlyings:      {"underlyings", 100_000, 1, 1e8, "different underlyings in the positions that the market does not have", "its rows name more underlyings that the market does not have"},
	Strategies:       {"strategies", 1e6, 1, 1e9, "different strategies in the positions", "its rows name more strategies"},
	MarketRows:       {"market_rows", 1e7, 1, 1e9, "rows of any other table, all held in memory", "it has more rows"},
	Parts:            {"parts", 10_000, 1, 1e6, "files of a folder of Parquet files", "it holds more files"},
	UnpackedBytes:    {"unpacked_bytes", 64 << 30, 1 << 20, 1 << 50, "bytes that a file unpacks to", "it unpacks to more bytes"},
	UnpackedRatio:    {"unpacked_ratio", 1000, 1, 1e9, "times its size that a file unpacks to, where that is more than 100 MiB", "it unpacks to more times its size"},
	WindowBytes:      {"window_bytes", 256 << 20, 1 << 20, 2 << 30, "bytes of memory that a zstd frame may ask for", "it asks for more bytes of memory"},
	Sheets:           {"sheets", 1000, 1, 1e6, "sheets of a workbook", "it has more sheets"},
	HeldBytes:        {"held_bytes", 256 << 20, 1 << 20, 64 << 30, "bytes of a part of a workbook that is held in memory, such as its shared texts", "a part of it unpacks to more bytes"},
	MetadataBytes:    {"metadata_bytes", 64 << 20, 1 << 10, 1 << 30, "bytes of the footer of a Parquet file", "its footer has more bytes"},
	PageBytes:        {"page_bytes", 256 << 20, 1 << 20, 1 << 30, "bytes of a page or dictionary of a Parquet file, packed or unpacked", "a page has more bytes"},
	DictionaryValues: {"dictionary_values", 4 << 20, 1, 256 << 20, "values of a dictionary of a Parquet file", "a dictionary has more values"},
}

// ratioFrom is from how many unpacked bytes on a ratio is worth a thought.
const ratioFrom = 100 << 20

// Limits are the values of the limits; 0 stands for the default. Behind them
// stand a ceiling on the memory of the run, 0 for none, and which limits are lower
// for it, a bit each.
type Limits [limitCount + 2]int64

const (
	ceiling = limitCount + iota
	lowered
)

// Under lowers a limit to what a ceiling on the memory of the run leaves, or to
// its least value.
func (l *Limits) Under(bytes int64, k Limit, value int64) {
	if value = max(value, LimitDocs[k].Least); value < l.Of(k) {
		l[k] = value
		l[lowered] |= 1 << k
	}
	l[ceiling] = bytes
}

// Ceiling returns the ceiling on the memory of the run, 0 for none.
func (l *Limits) Ceiling() int64 { return l[ceiling] }

// Of returns the value of a limit.
func (l *Limits) Of(k Limit) int64 {
	if l[k] > 0 {
		return l[k]
	}
	return LimitDocs[k].Default
}

// Exceeded is the error of a file that is beyond a limit.
func (l *Limits) Exceeded(k Limit) error {
	e := &LimitError{Limit: k, Value: l.Of(k)}
	if l[lowered]&(1<<k) != 0 {
		e.Ceiling = l[ceiling]
	}
	return e
}

// Unpacked holds a file that has been unpacked to so many bytes, out of so many
// packed ones, to the two limits on that.
func (l *Limits) Unpacked(bytes, packed int64) error {
	if bytes > l.Of(UnpackedBytes) {
		return l.Exceeded(UnpackedBytes)
	}
	return l.Grown(bytes, packed)
}

// Grown holds so many bytes, out of so many packed ones, to the limit on their
// ratio alone.
func (l *Limits) Grown(bytes, packed int64) error {
	if bytes > ratioFrom && bytes/l.Of(UnpackedRatio) > packed {
		return l.Exceeded(UnpackedRatio)
	}
	return nil
}

// LimitError says that a file is beyond a limit, and how to move that.
type LimitError struct {
	Limit   Limit
	Value   int64
	Ceiling int64 // on the memory of the run, which has lowered the limit; 0: none has
}

func (e *LimitError) Error() string {
	d := &LimitDocs[e.Limit]
	if e.Ceiling > 0 {
		return fmt.Sprintf("%s than --memory leaves room for, %d under a ceiling of %d MiB: give --memory more", d.what, e.Value, e.Ceiling>>20)
	}
	return fmt.Sprintf("%s than %s = %d allows: if the file is what it should be, give a larger %s under [limits] of run.toml, %d at most", d.what, d.Key, e.Value, d.Key, d.Most)
}
