// Package csv takes text files with delimited fields apart: RFC 4180 with any
// one-byte delimiter, LF or CRLF line ends, in UTF-8, UTF-16 or Windows-1252.
//
// The work is cut in two. A Scanner runs through the file in order and cuts it
// into blocks at record boundaries, keeping the line on which every record
// starts. A Decoder splits the records of a block into fields; blocks are
// independent, so several may be decoded at once. A field without quotes is a
// span of the block: nothing is copied and nothing allocated for it.
//
// A record that breaks the rules of quoting, or has not the number of fields of
// the header, is handed on as a bad row, and reading goes on at the next line.
//
// The package gives names to columns and a place to rows. It knows nothing of
// what the columns mean, and turns no text into a number.
package csv
