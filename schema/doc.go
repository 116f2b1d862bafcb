// Package schema holds the words of the program: the names, types and units of
// every column read or written, the kinds of instrument, the structs of slices
// that travel from the readers through the risk core to the writers, and the
// closed lists of reject and warning codes.
//
// It knows no file format and no formula, and imports none of the other
// packages of this module.
package schema
