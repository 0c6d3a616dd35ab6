// Package present writes results: tables for people, CSV, JSON, Parquet and
// spreadsheets for files and other programs. It knows nothing of queries; it gets a schema and batches.
//
// Tables round to significant digits, since people read them. CSV, JSON and
// Parquet keep every bit: a number that is read back is the same number. A sheet of
// a spreadsheet keeps numbers, too, but not every time: see xlsxWriter.
//
// # Limitations
//
// A table needs all its rows before it can set its widths, so it keeps at most
// MaxTableRows of them and says how many more there were.
package present
