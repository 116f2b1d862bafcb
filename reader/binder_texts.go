package reader

import (
	"unicode/utf8"
	"weak"

	"nightbook/reader/table"
	"nightbook/schema"
)

// validity is whether all words of a column are valid UTF-8.
type validity struct {
	words weak.Pointer[table.Words]
	all   bool
}

// ids reads line_id.
func (n *Binder) ids(b *schema.Batch) {
	at := n.p.o.at[lineID]
	spelled := n.spelled(at)
	if spelled {
		n.spans(b, at, &b.LineID)
	}
	marked := n.cells.Cells[at] != nil
	for i := range n.cells.N {
		if spelled && !marked {
			id := b.Raw.Data[b.LineID.Start[i]:b.LineID.End[i]]
			if printable(id) && id[0] != ' ' && id[len(id)-1] != ' ' && len(id) <= maxText {
				continue
			}
		}
		id, why := n.cells.name(at, i)
		if why != nil {
			n.wrong(i, lineID, why)
		} else if len(id) == 0 {
			n.wrong(i, lineID, missing)
		}
		if spelled {
			trimSpan(&b.LineID, b.Raw.Data, i, len(id))
			continue
		}
		start := len(b.Raw.Data)
		b.Raw.Data = append(b.Raw.Data, id...)
		b.LineID.AppendSpan(uint32(start), uint32(len(b.Raw.Data)))
	}
}

// trimSpan takes the spaces around text i from its span, which leaves size bytes.
func trimSpan(s *schema.Strings, data []byte, i, size int) {
	start, end := s.Start[i], s.End[i]
	for int(end-start) > size && (data[start] == ' ' || data[start] == '\t') {
		start++
	}
	s.Start[i], s.End[i] = start, start+uint32(size)
}

// spelled reports whether a column is of texts, and has them in its vector.
func (n *Binder) spelled(at int) bool {
	return n.cells.Cols[at].Kind == schema.KindStrings && n.cells.Coded[at].Words == nil
}

// spans appends a column of texts to one of the batch, in one go: its bytes
// follow those that the batch has, where they are not those already.
func (n *Binder) spans(b *schema.Batch, at int, to *schema.Strings) {
	v := &n.cells.Cols[at].Strings
	to.Start, to.End = append(to.Start, v.Start...), append(to.End, v.End...)
	if n.decoder != nil {
		return
	}
	n.follow(b, v.Data, to)
}

// follow puts data behind the bytes of the batch; to has spans of it.
func (n *Binder) follow(b *schema.Batch, data []byte, to *schema.Strings) {
	if base := uint32(len(b.Raw.Data)); base > 0 {
		for i := range to.Start {
			to.Start[i] += base
			to.End[i] += base
		}
	}
	b.Raw.Data = append(b.Raw.Data, data...)
}

// extra carries the house's own columns through as they came. A text that is
// not UTF-8 could not be written again.
func (n *Binder) extra(b *schema.Batch) {
	for k, at := range n.p.o.extra {
		to := &b.Extra[k]
		coded := &n.cells.Coded[at]
		switch {
		case n.spelled(at):
			n.spans(b, at, to)
		case coded.Words != nil && len(coded.Words.Data) <= 16*n.cells.N: // few bytes, if none is wanted twice
			for _, w := range coded.At {
				to.AppendSpan(coded.Words.Start[w], coded.Words.End[w])
			}
			n.follow(b, coded.Words.Data, to)
		default:
			for i := range n.cells.N {
				start := len(b.Raw.Data)
				b.Raw.Data = n.cells.AppendText(b.Raw.Data, at, i)
				to.AppendSpan(uint32(start), uint32(len(b.Raw.Data)))
			}
		}
		to.Data = b.Raw.Data
		if n.cells.Cols[at].Kind != schema.KindStrings || coded.Words != nil && n.allValid(k, coded.Words) {
			continue
		}
		for i := range n.cells.N {
			if !utf8.Valid(to.Bytes(i)) {
				n.wrong(i, positionColumns+k, notUTF8)
			}
		}
	}
	b.LineID.Data = b.Raw.Data
	for k := range b.Extra {
		b.Extra[k].Data = b.Raw.Data // it may have grown
	}
}

// allValid reports whether all words of the house's column k are valid UTF-8.
func (n *Binder) allValid(k int, words *table.Words) bool {
	w := weak.Make(words)
	if v := &n.valid[k]; v.words != w {
		*v = validity{w, true}
		for i := range words.Len() {
			v.all = v.all && utf8.Valid(words.Bytes(i))
		}
	}
	return n.valid[k].all
}
