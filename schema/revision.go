package schema

// Revision is the revision of the output tables. It grows by one with every
// column that is written: new, gone, or of another name, type, unit or meaning.
const Revision = 2

// Caution stands in every report and manifest.
const Caution = "Estimates from models, not advice. To be checked by qualified staff; local regulation prevails."
