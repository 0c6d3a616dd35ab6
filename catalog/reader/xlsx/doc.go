// Package xlsx reads the sheets of Office Open XML workbooks.
//
// # Model
//
// A sheet becomes records, one for each of its rows, and these are read by the rules of
// package csv: heading, units row, preamble, types, missing values, times and rows that
// are set aside are the same. Places are told as the workbook counts them: the row in
// Fault.Line, the cell in Fault.Cell.
//
// A workbook is a zip archive of XML files (ECMA-376, part 1). Read are the list of sheets,
// the shared texts, which styles show dates, and the cells. A sheet is chosen by its name or,
// where none is called so, by its number from 1; without a choice it is the first that is
// not hidden.
//
// # Cells
//
// Numbers are the decimals that the file holds. A number that is shown as a date or a time
// counts days since 1900 or 1904, as the workbook says; it is read as a time stamp,
// rounded to milliseconds, since a binary fraction of a day does not hold a second exactly.
// The 29th of February 1900, which the count of 1900 has and the calendar has not, is no
// date: numbers below 61 are fault-free only as numbers or as times of day (below 1). Truth values
// are true and false. Formulas are read as the value that the program which wrote them
// left there. A cell with an error (#N/A, #DIV/0!) is NULL and noted with its place; so
// is a formula without a value. Of merged cells the first holds the value, the others are
// NULL and noted.
//
// # Degenerate inputs
//
// Columns without any value are left out, wherever they stand; rows without any are
// skipped as blank lines are. A sheet without a value is a fault. What the archive
// unpacks to is limited (MaxPart for a file of it), whatever its header says, and so is the
// room for the cells of a sheet: a cell far out makes no row as wide as it is far.
//
// # Limitations
//
// Workbooks with a password, the older binary format (.xls) and .xlsb are refused.
// Colours, comments, drawings and hidden rows are not looked at: hidden rows are read.
package xlsx
