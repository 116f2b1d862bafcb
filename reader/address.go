package reader

// Sheet returns the sheet of the positions, "" where the file has none.
func (p *Positions) Sheet() string { return p.o.sheet }

// Header returns what the file calls one of our columns; our own name where the
// file has no such column, "" for "".
func (p *Positions) Header(ours string) string {
	for k, c := range p.o.in.table.Columns {
		if c.Name == ours {
			return p.o.names[k]
		}
	}
	return ours
}
