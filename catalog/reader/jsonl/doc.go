// Package jsonl reads objects of JSON: one a line (JSON lines), one after the other, or in
// one list that is the whole file.
//
// # Model
//
// Every object is a row, every key a column, in the order in which keys first appear. An
// object within an object becomes columns named by both keys: a.b. A key may hold its unit
// as headings do: temp [°C]. The texts of RFC 8259 (Bray, 2017) are read strictly: no
// comments, no trailing commas, no NaN.
//
// # Types
//
// They are the values' own: true and false make BOOLEAN, numbers INTEGER where all are whole
// numbers written as such (no point, no exponent) within 64 bits, else REAL, rounded
// once to the nearest; strings are TEXT, or TIMESTAMP where all of a column have the shape of an
// ISO 8601 time stamp. A column whose values are of several kinds is of the kind that
// most have, and the others are faults; the strings of Options.Missing and null are NULL and of no kind.
// Whole numbers beyond 64 bits are faults in a column of whole numbers.
//
// A missing key is NULL and counted (Facts.Columns). A key that stands twice in one object
// is a fault: which one counts is nowhere said. A list within an object is a fault;
// an empty list or object too.
//
// # Degenerate inputs
//
// Nesting deeper than 64 objects is a fault. An empty file is one; an empty list is one too,
// since it names no columns.
//
// # Limitations
//
// Lists of lists (a row as a list of values) are not read. The objects are held as records
// beside the bytes of the file while it is read.
package jsonl
