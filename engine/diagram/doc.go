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
// Nothing is kept when the program ends.
package diagram
