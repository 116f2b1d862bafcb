package csv

import "nightbook/schema"

// notedCodes is of how many codes of a column the texts are kept.
const notedCodes = 512

// codeNotes are the texts of codes that a part has met, code k at k%notedCodes.
type codeNotes struct {
	dict  *schema.Dict
	codes []schema.Code
	texts []slot
}

// use empties the notes if they are those of another dictionary. An entry not
// filled is that of code 0, which is the empty text and stands first.
func (n *codeNotes) use(dict *schema.Dict) {
	if n.dict == dict {
		return
	}
	n.dict, n.codes, n.texts = dict, make([]schema.Code, notedCodes), make([]slot, notedCodes)
	n.texts[0].null()
}

// codes formats a column of codes; see column.
func (p *part) codes(c int, dict *schema.Dict, list []schema.Code) (bad int) {
	n := &p.notes[c].codes
	n.use(dict)
	for i, code := range list {
		at := code % notedCodes
		text := &n.texts[at]
		if n.codes[at] != code || text.isLong() {
			p.text(text, dict.Name(code), p.columns[c].guard)
			n.codes[at] = code
		}
		s := &p.cells[i*len(p.columns)+c]
		if s.set(text); s.isNull() && p.columns[c].Required {
			return i
		}
	}
	return -1
}

// prepare makes the texts of the choices of a frame.
func (p *part) prepare(f *schema.Frame) {
	for c := range p.columns {
		v := &f.Cols[c]
		if v.Kind != schema.KindChoices {
			continue
		}
		texts := p.notes[c].choices[:0]
		for _, name := range v.Names {
			var s slot
			p.text(&s, name, p.columns[c].guard)
			texts = append(texts, s)
		}
		p.notes[c].choices = texts
	}
}

// choices formats a column of choices, which are prepared; see column.
func (p *part) choices(c int, names []string, list []schema.Choice) (bad int) {
	texts := p.notes[c].choices
	for i, choice := range list {
		s, text := &p.cells[i*len(p.columns)+c], &texts[choice]
		if text.isLong() {
			p.text(text, names[choice], p.columns[c].guard)
		}
		if s.set(text); s.isNull() && p.columns[c].Required {
			return i
		}
	}
	return -1
}
