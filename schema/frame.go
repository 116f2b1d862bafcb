package schema

// Frame is a run of rows in columns: the form in which every reader hands on
// what a file holds, and every writer takes what is to be written.
// Row i of every vector belongs to the same row.
type Frame struct {
	N    int
	Cols []Vector
}

// Vector is one column of a Frame. Kind says which of the slices is in use.
type Vector struct {
	Kind Kind

	Strings Strings   // KindStrings: "" is null
	Codes   []Code    // KindCodes: 0 is null
	Dict    *Dict     // the names behind Codes
	Choices []Choice  // KindChoices: 0 is null
	Names   []string  // the names behind Choices
	Floats  []float64 // KindFloats: NaN is null
	Ints    []int64   // KindInts: NoInt is null
	Dates   []Date    // KindDates: NoDate is null
	Bools   []bool    // KindBools: never null
}

// Kind says how a Vector stores its values.
type Kind uint8

const (
	KindStrings Kind = iota
	KindCodes
	KindChoices
	KindFloats
	KindInts
	KindDates
	KindBools
)

// NoInt is the null of an integer vector.
const NoInt = -1 << 63

// Type returns the outward type of the vector's values.
func (v *Vector) Type() Type {
	switch v.Kind {
	case KindFloats:
		return Float
	case KindInts:
		return Int
	case KindDates:
		return Day
	case KindBools:
		return Bool
	}
	return Text
}

// Text returns row i of a text vector (KindStrings, KindCodes, KindChoices);
// "" is null. The result of KindStrings aliases the vector's bytes until its
// next Reset: clone it to keep it.
func (v *Vector) Text(i int) string {
	switch v.Kind {
	case KindStrings:
		return v.Strings.At(i)
	case KindCodes:
		return v.Dict.Name(v.Codes[i])
	case KindChoices:
		return v.Names[v.Choices[i]]
	}
	panic("schema: Text of a vector that holds no text")
}
