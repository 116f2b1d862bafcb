package risk

import (
	"cmp"
	"slices"

	"nightbook/schema"
)

// noteKey names a warning within a batch.
type noteKey struct {
	code    schema.NoteCode
	subject schema.Code
}

// rowNote is a warning about a row, which may be refused yet.
type rowNote struct {
	noteKey
	row int32
}

// note takes down a warning about row i; flushNotes writes them to the batch.
func (w *Worker) note(i int, code schema.NoteCode, subject schema.Code) {
	w.taken = append(w.taken, rowNote{noteKey{code, subject}, int32(i)})
}

// flushNotes counts the worker's warnings about rows that were priced, and moves
// them to the batch, in a fixed order.
func (e *Engine) flushNotes(b *schema.Batch, w *Worker) {
	var last noteKey
	var n *schema.Note // that of last
	for _, t := range w.taken {
		if b.Status[t.row] == schema.Rejected {
			continue
		}
		if n == nil || t.noteKey != last {
			last, n = t.noteKey, w.notes[t.noteKey]
		}
		if n == nil {
			n = &schema.Note{Code: t.code, Line: b.Line[t.row]}
			w.notes[t.noteKey] = n
		}
		n.Line = min(n.Line, b.Line[t.row])
		n.Count++
	}
	w.taken = w.taken[:0]
	for key, n := range w.notes {
		switch key.code {
		case schema.CurveFlatEnd:
			n.Subject = e.dicts.Curves.Name(key.subject)
			n.Message = "expiries lie beyond the nodes of curve " + n.Subject + ": the end rate was used"
		case schema.SurfaceFlatEnd:
			n.Subject = e.dicts.Underlyings.Name(key.subject)
			n.Message = "expiries lie beyond the surface of " + n.Subject + ": the end slice was used"
		case schema.VolFallback:
			n.Subject = e.dicts.Underlyings.Name(key.subject)
			n.Message = n.Subject + " has no surface: its flat volatility was used"
		case schema.DividendsLarge:
			n.Subject = e.dicts.Underlyings.Name(key.subject)
			n.Message = "the cash dividends of " + n.Subject + " before an expiry are worth more than 40 % of its price: check dividends; a piecewise price stays at 0 or above, and its forward does not"
		case schema.PriceUncertain:
			n.Subject = e.dicts.Underlyings.Name(key.subject)
			n.Message = "finite differences did not meet the tolerance for options on " + n.Subject + ": price_error says how far off their prices may be"
		}
		b.Notes = append(b.Notes, *n)
	}
	clear(w.notes)
	slices.SortFunc(b.Notes, func(x, y schema.Note) int {
		return cmp.Or(cmp.Compare(x.Code, y.Code), cmp.Compare(x.Subject, y.Subject))
	})
}
