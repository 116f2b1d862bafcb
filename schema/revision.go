package schema

// Revision is the revision of the output tables. It grows by one with every
// change to the name, type, unit or meaning of a column that is written.
const Revision = 1

// Caution stands in every report and manifest.
const Caution = "Estimates from models, not advice. To be checked by qualified staff; local regulation prevails."
