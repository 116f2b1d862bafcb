package schema

// Revision is the revision of the output tables. It grows by one with every
// change to the name, type, unit or meaning of a column that is written.
const Revision = 1
