// Package parquet writes frames as an Apache Parquet file.
//
// It works on pages: each column copies its values into the page being filled,
// in the PLAIN layout or as indices into a dictionary, and packs the page when it
// is full, so that of a row group only finished pages are held. Columns are
// encoded in parallel, and a row group is written while the next one fills. The
// file's own structures are those of the Parquet format's Thrift definition.
//
// What stands in a file:
//
//   - Double as DOUBLE, Int as INT64, Day as INT32 with logical type DATE, Bool
//     as BOOLEAN, Text as BYTE_ARRAY with logical type STRING. A column that is
//     never null is REQUIRED, any other OPTIONAL.
//   - Texts go through a dictionary of the row group, in the order in which they
//     first appear; a column of free text in which most values differ, or whose
//     dictionary grows past a limit, goes on as PLAIN.
//   - Numbers and dates go through a dictionary if each of those on the chunk's
//     first page stands there four times or more on average.
//   - A chunk is stored uncompressed if compression does not halve what its first
//     page begins with, and its dictionary: the low bits of computed numbers are
//     noise, and so are indices that follow no pattern. It stays so where later
//     pages could be compressed, as in a file that has all options first and then
//     all stocks: the codec is one for the chunk, and its pages are not kept to
//     be packed again. Texts without codes are always compressed.
//   - Smallest and largest value and number of nulls of each page and chunk, a
//     page index, and a CRC of each page.
//
// Where pages and row groups end depends on the rows alone: the same rows give
// the same bytes whatever the frames they come in and the number of workers.
//
// It knows nothing of files: it writes to an io.Writer, front to back.
package parquet
