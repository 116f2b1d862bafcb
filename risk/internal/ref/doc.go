// Package ref holds tables of high-precision values for the tests of the risk
// packages: functions of package vec, and European options with all their
// sensitivities.
//
// The tables are computed with mpmath at 50 digits and more by functions.py and
// bsm.py, which share no code and no method with the Go packages: Φ is erfc, and
// every sensitivity is its textbook formula. check.sh computes them afresh and
// compares. Only tests import this package.
package ref
