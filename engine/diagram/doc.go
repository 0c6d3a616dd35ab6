// Package diagram keeps the running program's diagrams by their content: one
// computation however many ask, in however many statements.
//
// # Model
//
// A Store finds a diagram by a key made of the coordinates of its sites in
// their order, the solid and the tolerance. Who asks for a diagram that is
// being built waits for it; who asks for measures that are being computed waits
// for those. A Handle remembers the measures of every cell that was asked for,
// so that 672 instants with the same loggers cost one partition. It remembers contacts
// and gaps likewise.
//
// Measures are made in two ways, and how many cells are asked for decides which. The
// last bits of the two may differ; so the measures of each way are remembered apart,
// and an answer has the same bits whatever was asked before.
//
// # From run to run
//
// A Keeper keeps diagrams of KeptFrom sites and more in a folder (package
// catalog/store): what voronoi.New computes, each measure of all cells once it has been
// asked for of all cells, and the tetrahedralisation once one was built. Below that size computing takes no longer than reading.
// A later run with the same key maps these instead of computing them, and gives the
// same bits. Keeping never fails a request: its errors are Troubles. A damaged file is
// not used, and is written again with the next measures of all cells; so is what
// another version of this package or another kind of machine has written. Files beyond
// the limit go, those used least recently first; a file's time of change says when it
// was used.
//
// Everything here is numbers: the store knows no identifiers, no columns and
// writes no notes.
//
// # Memory
//
// The store counts what its diagrams hold and drops those that were used least
// recently when the limit is passed. A handle that was dropped goes on working
// for those who hold it. Contacts of very large diagrams are not remembered but
// passed through.
//
// # Degenerate inputs
//
// No sites, coordinates that are not finite, solids without a volume: the
// errors of package voronoi come back as they are and nothing is remembered.
//
// # Exact and rounded
//
// Keys are cryptographic sums of the bits of the coordinates (-0 counts as 0):
// two diagrams with one key are the same. What was computed is returned as it
// was computed, whoever asks and whenever.
//
// # Limitations
//
// Contacts, gaps and what was measured in regions are not kept when the program ends; nor
// are measures of some cells: only those of all. A kept tetrahedralisation takes about 470
// bytes a site; where it would not fit the limit beside the measures it is built again.
package diagram
