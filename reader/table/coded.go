package table

import "nightbook/schema"

// Words are the different texts of a column. The last of them is the empty text,
// for the cells that are empty. Words never change once a run has been handed on
// with them: who has looked at the texts of the same *Words has seen them all.
type Words struct {
	schema.Strings
}

// NewWords returns texts, of which the last is the empty one, as Words.
func NewWords(texts schema.Strings) *Words { return &Words{texts} }

// Coded is a column of text in which each cell is the place of its text among Words.
type Coded struct {
	Words *Words // nil: the texts stand in the vector
	At    []uint32
}

// Text returns the text in row i of a column of text.
func (r *Rows) Text(col, i int) []byte {
	if c := &r.Coded[col]; c.Words != nil {
		return c.Words.Bytes(int(c.At[i]))
	}
	return r.Cols[col].Strings.Bytes(i)
}

// SpellOut puts the texts of a coded column into the vector: it is coded no more.
func (r *Rows) SpellOut(col int) {
	c := &r.Coded[col]
	if c.Words == nil {
		return
	}
	for _, k := range c.At {
		r.Cols[col].Strings.Append(c.Words.Bytes(int(k)))
	}
	c.Words, c.At = nil, c.At[:0]
}
