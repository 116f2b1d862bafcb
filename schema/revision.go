package schema

// Revision names the set of columns, units and conventions of the result
// tables. It changes when a column changes its name, type, unit or meaning.
const Revision = "1"

// Caution stands in every report and manifest.
const Caution = "Estimates from models, not advice. To be checked by qualified staff; local regulation prevails."
