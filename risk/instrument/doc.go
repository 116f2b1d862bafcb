// Package instrument prices runs of like lines, one file an instrument: it
// knows which model a product takes, what the product does as a day passes, and
// which inputs it needs. It knows nothing of books, files or markets.
package instrument
