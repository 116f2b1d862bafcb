// Package csv writes frames as comma-separated text: RFC 4180 with LF at the
// ends of lines, a header, UTF-8 without a byte order mark.
//
//   - Numbers are the shortest decimals that read back to the same bits, with an
//     exponent only below 1e-6 and from 1e21 in magnitude.
//   - Dates are YYYY-MM-DD, booleans true and false, null is an empty cell.
//   - In a text, each NUL and each byte that is not UTF-8 is written as \xHH, such
//     as \x00 and \xE9, so that the file is always UTF-8 without NUL, whatever
//     came in. This cannot be told from a text that holds these four characters.
//   - A text is quoted where it holds a comma, a quote, CR or LF.
//   - A text that a spreadsheet would take for a formula, that is one that begins
//     with = + - @ or a tab, CR or LF, gets an apostrophe before it. A text that
//     as a whole is a decimal number, such as -5.25, +4512 or -1,5e-3, is none: it
//     stays as it is. A text that begins with apostrophes and then reads like a
//     formula gets one more, which makes the rule reversible: take one apostrophe
//     off where what follows the apostrophes reads like a formula. Columns of
//     numbers are never touched. Options turns the rule off for all columns or
//     for single ones.
//
// It knows nothing of files: it writes to an io.Writer.
package csv
