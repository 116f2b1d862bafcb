package schema

// Type is the type of the values of a column, as an outsider sees it.
type Type uint8

const (
	Text  Type = iota // UTF-8 text
	Float             // IEEE 754 double
	Int               // 64-bit signed integer
	Day               // calendar date, no time
	Bool              // true or false
)

var typeNames = [...]string{"text", "double", "int64", "date", "bool"}

func (t Type) String() string { return typeNames[t] }

// Column is one entry of the data dictionary.
type Column struct {
	Name     string
	Type     Type
	Unit     string // "price currency", "1/year", …; "" where there is none
	Required bool   // inputs: must be present in the file; outputs: never null
	Default  string // inputs: what an empty cell stands for; "" is nothing
	Doc      string // one sentence
}

// Table is a named list of columns: one input file, or one output table.
type Table struct {
	Name    string // the stem of the file
	Doc     string
	Columns []Column
}

// Column returns the column of that name, or nil.
func (t *Table) Column(name string) *Column {
	for i := range t.Columns {
		if t.Columns[i].Name == name {
			return &t.Columns[i]
		}
	}
	return nil
}
