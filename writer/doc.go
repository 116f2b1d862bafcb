// Package writer turns results into files: it opens a table of a given format
// (see NewTable), makes a folder of results that appears whole or not at all
// (see Folder), and describes a run in a manifest and the columns in a
// dictionary.
//
// The formats themselves are in the folders below: csv and parquet take frames
// of any table, xlsx writes sheets, report lays out the workbook. None of them
// knows how a number was computed.
package writer
