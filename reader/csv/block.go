package csv

// Block is a run of records of a file, not yet split into fields. Its memory
// is used again by the next call of Scanner.Next.
type Block struct {
	Data    []byte
	Records []Record
}

// Record is one record of a Block: Data[Start:End] without its line end.
type Record struct {
	Start, End uint32
	Line       int64 // of the file, on which the record starts; the first is 1
	Quoted     bool  // holds a quotation mark
	Fault      Fault
	Lines      uint32 // that it takes up
}

// Fault says how a record breaks the rules of quoting.
type Fault uint8

// The faults of a record.
const (
	NoFault Fault = iota
	StrayQuote
	TextAfterQuote
)

var faultReasons = [...]string{
	StrayQuote:     `a quotation mark stands inside a field that does not begin with one: put the field in quotation marks and double those inside it`,
	TextAfterQuote: `text follows a closing quotation mark: double the quotation marks inside the field`,
}

func (f Fault) String() string { return faultReasons[f] }
