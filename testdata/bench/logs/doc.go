// Command logs measures queries over a log of ten million rows beside SQLite
// (modernc's translation into Go, one thread) and DuckDB (its Go module, as many
// threads as here).
//
//	go run ./logs -rows 10000000 -runs 5 -threads 2
//
// The three hold the same rows in memory. In every round each query runs once in
// each of them, one after the other, so that a change of the machine's pace meets
// all three; what counts are the ratios of the medians. Answers are compared
// before anything is timed: a query that is answered differently ends the program.
//
// Times are those of a caller in Go: from the text of the query to the last of its
// rows. A query that takes SQLite longer than -patience is stopped in it and shown as
// a lower bound.
//
// # Limitations
//
// DuckDB and SQLite add up plainly, nearcell in double-double; numbers are compared
// to nine digits. None of the three has an index.
package main
