// Package catalog keeps what a user has named: campaigns, tables, solids and
// views.
//
// # Model
//
// All objects share one namespace. An object is found by its key, which the
// caller makes of its name (names without quotation marks are folded to one
// case, so that they compare without it); the name itself is kept for showing.
// Campaigns and tables have a column.Table, solids and views a text in the query
// language, which the catalog does not read.
//
// A catalog is in memory and ends with the program, or in a folder (package
// store), where every change is whole or not at all and other programs' changes
// are seen at the next Get or List. Tables in a folder are mapped when they are
// first asked for.
//
// Objects are immutable. One that was got stays good, whatever becomes of its
// name, until Close.
//
// # Degenerate inputs
//
// Tables without rows or without columns are kept like others. CREATE OR REPLACE
// across kinds is refused: the old object may be meant by someone else.
//
// # Limitations
//
// Each change rewrites the manifest, so its cost grows with the number of objects.
package catalog
