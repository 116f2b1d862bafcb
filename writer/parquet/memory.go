package parquet

import "nightbook/schema"

// fixedMemory is what a writer takes beside pages, in bytes: dictionaries, and
// the codecs.
const fixedMemory = 12 << 20

// Memory returns about how many bytes a writer takes at most, if texts are short
// or GroupBytes ends row groups. groupRows 0 is the usual number.
func Memory(columns []schema.Column, groupRows int) int64 {
	if groupRows == 0 {
		groupRows = mostRows
	}
	numbers := 0
	for _, c := range columns {
		if valueWidth(physicalType(c.Type)) > 1 {
			numbers++
		}
	}
	// A block for each page of the row group and for the one that fills; and a
	// few while the row group before is being written.
	blocks := numbers*(groupRows/pageRows+1) + len(columns)
	return fixedMemory + int64(blocks)*blockBytes
}

// GroupBytes returns how many bytes of pages a row group may have for a writer to
// get by with Memory if texts are long: of what is there for pages two thirds, as
// blocks are not full.
func GroupBytes(columns []schema.Column, groupRows int) int64 {
	return (Memory(columns, groupRows) - fixedMemory) * 2 / 3
}

// GroupRows returns how many rows a row group may have for a writer to get by
// with so much memory: the usual number, or it halved until it fits or is a
// page.
func GroupRows(columns []schema.Column, memory int64) int {
	rows := mostRows
	for rows > pageRows && Memory(columns, rows) > memory {
		rows /= 2
	}
	return rows
}
