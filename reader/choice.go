package reader

import (
	"strings"
	"unsafe"

	"nightbook/schema"
)

// findChoice finds a word in a closed list without making a string of it.
func findChoice(list schema.Choices, word []byte) (schema.Choice, bool) {
	return list.Find(unsafe.String(unsafe.SliceData(word), len(word)))
}

// choiceFinding says what words a column expects.
func choiceFinding(column string) *finding {
	return &finding{schema.BadChoice, "expected one of " + strings.Join(schema.ChoicesOf(column)[1:], ", ")}
}
