// Package report makes one HTML file of what a script prints: titles and texts,
// tables, pictures, verdicts, notes, failures and what all of it rests on.
//
// # Model
//
// A [Report] is filled in the order of the script, a block at a time, and written
// once at the end, since the verdicts stand first and are known last. Blocks are
// kept as the markup that they become. The order of the file is: the title, what the
// whole comes to, the verdicts, the blocks in the order of the script, provenance.
//
// The file is whole by itself: its style is in it, it has no script, and a content
// security policy forbids the browser every request. Its markup is well-formed XML,
// so that programs can read it back, and follows the reader's choice of a light or a
// dark page; on paper it is light, and the sheet's size is the printer's (A4, Letter).
//
// Everything that comes from a user passes html/template, which escapes by context: a
// <script> in a file of readings stays text. Pictures are the one exception; they come
// from this program, and [Report.Picture] lets nothing through but the elements and
// attributes of a still picture.
//
// # Degenerate input
//
// A report without a title is called by its script, one without blocks says so.
// Characters that no XML may hold become blanks or the replacement character. A result
// without columns is its number of rows.
//
// # What is exact and what is rounded
//
// Numbers are those of printed tables, rounded to SET DIGITS; whoever computes with
// them saves the rows instead. There is no time stamp and no path of the machine that
// the script did not name: the same script over the same inputs gives the same bytes.
//
// # Limitations
//
// The blocks are held in memory until the end. A table keeps as many rows as it is
// told to and says how many more there were.
package report
