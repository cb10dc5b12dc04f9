// Package readers turns a file, text or workbook, into a Table whose cells know
// where they came from.
//
// It decides what the file is by its bytes, finds the table in it, and says what
// it took for granted: Reading lists each interpretation, each row that is no
// measurement and each row whose fields do not match the header. A file that can
// be read in two ways is refused with an *Error that names the option which
// settles it. Nothing is converted, filled or dropped without its address being
// kept.
//
// The package knows cells, not their meaning: which number is doubtful is for the
// rules to say.
package readers
