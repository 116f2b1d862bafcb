package main

import (
	"cmp"
	"slices"

	"nightbook/reader"
	"nightbook/schema"
)

// gate is what every batch passes on its way out, in file order: it finds
// duplicate line_ids, completes the addresses of refused rows, counts rows and
// collects warnings.
type gate struct {
	positions *reader.Positions
	faults    []schema.Fault
	strict    bool
	ids       reader.LineIDs
	rowsIn    int64
	warnings  map[warningKey]*schema.Note
}

type warningKey struct {
	code    schema.NoteCode
	subject string
}

func newGate(p *reader.Positions, faults []schema.Fault, strict bool) *gate {
	return &gate{positions: p, faults: faults, strict: strict, warnings: map[warningKey]*schema.Note{}}
}

// market passes the refused market rows on to the outputs.
func (g *gate) market(out *outputs) error {
	if len(g.faults) == 0 {
		return nil
	}
	rejects := make([]schema.Reject, len(g.faults))
	for i, f := range g.faults {
		rejects[i] = f.Reject
	}
	if g.strict {
		return strictError(&rejects[0])
	}
	return out.rejects(rejects)
}

// rows passes a priced batch.
func (g *gate) rows(b *schema.Batch) error {
	g.rowsIn += int64(b.N)
	if err := g.positions.CheckNames(); err != nil {
		return err
	}
	for i := range b.N {
		id := b.LineID.Bytes(i)
		if len(id) == 0 || !g.ids.Seen(id) || b.Status[i] == schema.Rejected {
			continue
		}
		b.Status[i] = schema.Rejected
		b.Rejects = append(b.Rejects, schema.Reject{
			Line: b.Line[i], Column: "line_id", Code: schema.DuplicateLineID, Value: string(id), Index: i, Row: b.Row(i),
			Reason: "line_id stands on an earlier row, and that row counts: give this line an id of its own, or take it out",
		})
	}
	slices.SortStableFunc(b.Rejects, func(x, y schema.Reject) int { return cmp.Compare(x.Index, y.Index) })
	for i := range b.Rejects {
		r := &b.Rejects[i]
		if r.File == "" { // refused after reading: the columns bear our names still
			r.File, r.Sheet = b.File, g.positions.Sheet()
			if cell, ok := g.positions.Cell(r.Row, r.Column); ok {
				r.Value = cell
			}
			r.Column = g.positions.Header(r.Column)
		}
	}
	if g.strict && len(b.Rejects) > 0 {
		return strictError(&b.Rejects[0])
	}
	for _, n := range b.Notes {
		if n.File == "" {
			n.File = b.File
		}
		g.warn(n)
	}
	return nil
}

func strictError(r *schema.Reject) error {
	return &hinted{
		r.CellError(),
		"--strict stops at the first refused row; without it, refused rows are kept in rejects.csv and the others are priced",
	}
}

// warn counts a warning together with those of its code and subject.
func (g *gate) warn(n schema.Note) {
	key := warningKey{n.Code, n.Subject}
	if w := g.warnings[key]; w != nil {
		w.Count += n.Count
		return
	}
	g.warnings[key] = &n
}

// notes returns the warnings about lines, like ones counted together.
func (g *gate) notes() []schema.Note {
	var all []schema.Note
	for _, n := range g.warnings {
		all = append(all, *n)
	}
	return all
}

// sortNotes puts warnings in the order in which they are written.
func sortNotes(notes []schema.Note) {
	slices.SortStableFunc(notes, func(a, b schema.Note) int {
		return cmp.Or(cmp.Compare(a.Code, b.Code), cmp.Compare(a.Subject, b.Subject), cmp.Compare(a.Line, b.Line), cmp.Compare(a.Message, b.Message))
	})
}
