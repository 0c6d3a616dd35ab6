// Package csv reads delimited text files.
//
// # Model
//
// Files are read as RFC 4180 (Shafranovich, 2005) describes them: a heading,
// then records of as many fields, divided by a delimiter; a field in quotation
// marks may hold delimiters, line breaks and, doubled, quotation marks. Beyond
// it the package takes any single character as the delimiter, CR LF, LF or CR
// as the line break, a byte order mark, and blank lines, which it skips and
// counts. Quotation marks anywhere else are faults.
//
// The file is gone over twice. The first pass decides the type of each column
// from all of its values, the second makes the columns and lists what does not
// fit, so that a fault on the first line and one on the last are treated alike.
//
// Both passes cut the file into chunks that are read side by side. A chunk is taken to
// begin a record behind a line break; the chunk before it tells in the end whether it does,
// and where it began within a quoted field it is read again from where its first record
// begins. Chunks are put together in their order and are of one length for any number of
// threads: nothing that comes of a file depends on how many there are.
//
// # Types
//
// A column is INTEGER where every present value is a 64-bit integer, REAL where
// every one is a number (with Options.DecimalMark; there are no marks between
// thousands), BOOLEAN where true and false (in any case) are all there is,
// TIMESTAMP where the values have the shape that column.ParseTimestamp reads,
// and TEXT otherwise. Blanks around such values do not count; texts keep theirs.
//
// A column that is all but wholly of one of these types is of that type, and the
// values that do not fit are faults: an "err" among a logger's readings must not
// turn them into text in silence. That is so where at most a tenth of the present
// values do not fit, or a single one does not and at least four do. NaN and the
// infinities count as numbers in this and are faults of their own. With more
// misfits the column is TEXT, and Facts.StayedText tells if most were numbers.
//
// Whole numbers that would not survive as numbers keep a column TEXT too: codes
// with leading zeros (007) and numbers beyond 64 bits, unless the column has
// other numbers than whole ones. Facts.StayedText tells of these as well, and of
// texts that the other decimal mark would make numbers. The columns of Options.TextColumns are INTEGER
// only where every value is an integer written plainly, and never at fault.
//
// A TEXT column whose values are times by one of the patterns that are common on
// instruments is reported too, with that pattern.
//
// # Times
//
// Columns of Options.Times are TIMESTAMP, by their pattern and on the clocks of
// their zone; a value of another shape is a fault. Local times that a clock change
// skips are faults. Those that it repeats are decided by the order of the rows of
// their file: first as one sequence, then as one for each value of one of its TEXT
// or INTEGER columns (a logger), strictly in time and, where no column gives that,
// with rows that may repeat an instant. Every such sequence must run through time
// without a step back over the whole file, and within the repeated hour the local
// time must step back exactly once; else the rows stay faults (package timeform).
//
// # Several files
//
// They make one table, in their order. Each has a heading with the same names, in
// any order, and finds its own delimiter where none is said. Types are decided over
// all of them. Headings must agree on units, or Options.Units says what the files
// without one are in.
//
// # Around the records
//
// Options.Preamble makes a column of what stands behind a text in the lines before
// the heading: the rest of the line, without delimiters at its end; or the next
// field, where the text ends a field. A text that stands there twice is a fault.
// Such a column is never at fault: it is of a type where all files have a value of
// that type, else TEXT.
//
// The line under the heading is one of units, and no record, where at least one of
// its fields is a unit that is common on instruments and every field that is not
// empty or a dash stands over numbers or times, is no number, no time and no word
// for a missing value. Facts.UnitsRow tells what was taken.
//
// # NULL
//
// The empty field is NULL, and so are a field of blanks and the texts of
// Options.Missing, in quotation marks or not. A field of just two quotation
// marks is the empty text in a TEXT column and NULL in others; likewise one of
// quoted blanks. A column without any value is REAL, or TEXT if it is one of
// Options.TextColumns. In a file of one column a blank line is skipped like any
// other; a NULL is written there as two quotation marks (in a TEXT column it
// cannot be told from the empty text).
//
// # Degenerate inputs
//
// A file of nothing but blank lines, a heading line that is not there, a heading
// with an empty or a repeated name are faults of the file as a whole. A heading
// alone is a table without rows. Delimiters at the end of the heading, as some
// loggers write them, make no column if no record has anything there. The same
// holds for empty fields that end the records and that the heading has not: the
// first record tells how many there are.
//
// # Limitations
//
// UTF-8, or what reader.Decode turns into it; what begins with the byte order mark of
// UTF-16 is that. A first line such as sep=; tells the delimiter. Numbers with marks between
// thousands stay TEXT, and Facts.StayedText tells. No comments. A date and a time of day
// in two columns stay two columns. Intervals and points are not recognised and stay
// TEXT. An infinity in a numeric column is a fault even where it was written
// by this program.
package csv
