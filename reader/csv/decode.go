package csv

import (
	"encoding/binary"
	"fmt"
	"math/bits"

	"nightbook/reader/table"
	"nightbook/schema"
)

// Decoder splits the records of blocks into columns. Each goroutine needs its own.
type Decoder struct {
	delimiter byte
	limits    schema.Limits
	maxField  uint32 // bytes
	columns   []column
	fields    []span
	memory    []uint32 // of all columns' spans
}

// column is where the spans of a column are written.
type column struct{ start, end []uint32 }

type span struct{ start, end uint32 }

// cacheLine is one line of the cache, in spans. The columns of a block stand
// that much further apart than they are long: blocks of 4096 rows would else
// put row i of every column into the same few lines of the cache.
const cacheLine = 16

// Decode splits b into the columns of the header. The rows are spans of b.Data,
// to which the texts of fields with doubled quotation marks are appended: they
// are valid until b is used again.
func (d *Decoder) Decode(b *Block, into *table.Rows) {
	into.Reset(len(d.columns))
	n := len(b.Records)
	into.N = n
	stride := n + cacheLine
	if need := 2 * stride * len(d.columns); len(d.memory) < need {
		d.memory = make([]uint32, need+need/4)
	}
	for i := range d.columns {
		at := 2 * stride * i
		d.columns[i] = column{d.memory[at : at+n : at+n], d.memory[at+stride : at+stride+n : at+stride+n]}
		v := &into.Cols[i]
		v.Kind = schema.KindStrings
		v.Strings.Start, v.Strings.End = d.columns[i].start, d.columns[i].end
	}
	for i, rec := range b.Records {
		into.Line = append(into.Line, rec.Line)
		into.Raw.AppendSpan(rec.Start, rec.End)
		if reason := d.row(b, rec, i); reason != "" {
			for c := range d.columns {
				d.columns[c].start[i], d.columns[c].end[i] = 0, 0
			}
			into.Bad = append(into.Bad, table.Bad{Row: i, Reason: reason + spanning(rec)})
		}
	}
	into.Raw.Data = b.Data // only now: it may have grown
	for i := range into.Cols {
		into.Cols[i].Strings.Data = b.Data
	}
}

// spanning says of a bad record how many lines are in it: most often, one
// quotation mark too many has swallowed them.
func spanning(rec Record) string {
	if rec.Lines < 2 {
		return ""
	}
	return fmt.Sprintf("; a quotation mark opens in it that is closed only on line %d, so that %d lines are refused as one: if it stands there by mistake, take it out",
		rec.Line+int64(rec.Lines)-1, rec.Lines)
}

// row splits one record and returns what is wrong with it, or "".
func (d *Decoder) row(b *Block, rec Record, i int) string {
	if rec.Fault != NoFault {
		return rec.Fault.String()
	}
	fields := 0
	if rec.Quoted || rec.End-rec.Start > d.maxField {
		d.fields = splitQuoted(d.fields[:0], b, rec, d.delimiter)
		for c, f := range d.fields {
			if f.end-f.start > d.maxField {
				return d.limits.Exceeded(schema.FieldBytes).Error()
			}
			if c < len(d.columns) {
				d.columns[c].start[i], d.columns[c].end[i] = f.start, f.end
			}
		}
		fields = len(d.fields)
	} else {
		fields = d.splitPlain(b.Data, rec.Start, rec.End, i)
	}
	if fields != len(d.columns) {
		return FieldCount(fields, len(d.columns))
	}
	return ""
}

const (
	ones  = 0x0101010101010101
	lows  = 0x7f7f7f7f7f7f7f7f
	width = 8
)

// splitPlain splits a record without quotation marks, eight bytes at a time,
// and returns its number of fields.
func (d *Decoder) splitPlain(data []byte, start, end uint32, i int) int {
	field, fields := start, 0
	pattern := uint64(d.delimiter) * ones
	columns := d.columns
	for at := start; at < end; at += width {
		var word uint64
		if int(at)+width <= len(data) {
			word = binary.LittleEndian.Uint64(data[at:])
		} else {
			var last [width]byte
			copy(last[:], data[at:])
			word = binary.LittleEndian.Uint64(last[:])
		}
		// The high bit of each byte that is the delimiter; exact, with no
		// carry from byte to byte.
		x := word ^ pattern
		found := ^((x&lows + lows) | x | lows)
		if left := end - at; left < width {
			found &= 1<<(8*left) - 1
		}
		for ; found != 0; found &= found - 1 {
			here := at + uint32(bits.TrailingZeros64(found)>>3)
			if fields < len(columns) {
				columns[fields].start[i], columns[fields].end[i] = field, here
			}
			fields++
			field = here + 1
		}
	}
	if fields < len(columns) {
		columns[fields].start[i], columns[fields].end[i] = field, end
	}
	return fields + 1
}

// splitQuoted appends the fields of a record whose quoting is in order. The
// text of a field with doubled quotation marks is appended to the block.
func splitQuoted(fields []span, b *Block, rec Record, delimiter byte) []span {
	at, end := int(rec.Start), int(rec.End)
	for {
		if at < end && b.Data[at] == '"' {
			after, _ := closing(b.Data[:end], at+1)
			fields = append(fields, undoubled(b, at+1, after-1))
			at = after
		} else {
			from := at
			for at < end && b.Data[at] != delimiter {
				at++
			}
			fields = append(fields, span{uint32(from), uint32(at)})
		}
		if at >= end {
			return fields
		}
		at++ // the delimiter
	}
}

// undoubled returns the text b.Data[from:to] with each pair of quotation marks
// made one: in place if there is none.
func undoubled(b *Block, from, to int) span {
	start := len(b.Data)
	clean := true
	for at := from; at < to; at++ {
		if b.Data[at] != '"' {
			continue
		}
		clean = false
		b.Data = append(b.Data, b.Data[from:at+1]...)
		at++
		from = at + 1
	}
	if clean {
		return span{uint32(from), uint32(to)}
	}
	b.Data = append(b.Data, b.Data[from:to]...)
	return span{uint32(start), uint32(len(b.Data))}
}
