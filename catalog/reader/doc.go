// Package reader is the one interface behind which every file format is read.
// The formats are rooms below this one (reader/csv, …).
//
// # Model
//
// A reader takes a Source, the whole file in memory, and Options, and gives a
// Result: a table and the Facts of its reading. It gives facts and never text
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
// The whole file is held in memory while it is read.
package reader
