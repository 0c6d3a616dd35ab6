// Package reader is the one interface behind which every file format is read.
// The formats are rooms below this one (reader/csv, …).
//
// # Model
//
// A reader takes one Source or several, each a whole file in memory, and Options,
// and gives a Result: one table and the Facts of its reading. It gives facts and never text
// for users: what was naive, refused, left as text or not found in the heading
// is listed in Facts, and what is wrong with the file in Faults, each with its
// line, column and field. Whoever talks to the user words them.
//
// # Nothing in silence
//
// A file with a single fault gives no table at all, unless Options.Refused
// takes the faulty lines; then they are handed over, counted, and left out.
//
// # Limitations
//
// All files of a table are held in memory while they are read.
package reader
