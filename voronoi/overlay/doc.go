// Package overlay lays two partitions of space over one another: which cells of one share
// space with which cells of the other, and how much.
//
// # Model
//
// [Pieces] walks the cells of the first diagram. Each is a convex polyhedron; it is cut by
// the cells of the second one that it meets, and these are found by flooding: one of them
// holds a point inside the polyhedron, and from there every face that the cut leaves leads
// to the next. The flood finds all of them, since the polyhedron is convex: whatever meets
// its interior is connected through faces that do (Farrell and Maddison 2011, for meshes).
// A piece is cut by the bisectors between a site of the second diagram and its neighbours.
// The plane between two sites is the same to the last bit from both sides, so that pieces
// fit together and nothing is lost between them.
//
// A solid that is not convex is taken into account last: a piece is a convex polyhedron,
// and the solid says what of it lies inside, as it does of a cell. The two diagrams may end
// at different solids; pieces then lie in both.
//
// # Laws
//
//  1. The pieces of a cell of the first diagram add up to its volume, where the second
//     one's solid holds it.
//  2. The pieces of a cell of the second diagram add up to its volume, likewise.
//  3. A diagram over itself has the cells themselves and nothing else.
//  4. Exchanging the diagrams exchanges the pieces.
//
// # Degenerate input
//
// Sites that both diagrams have, lattices laid over themselves, and cells whose faces lie
// in one plane are normal: a plane that comes no nearer to cutting a polyhedron than
// rounding does not cut it. Sites in one place share one cell; pieces name the first. Sites
// that lie outside their solid have none. One site has all of the space.
//
// # Exact and rounded
//
// Volumes are rounded, to about 1e-15 of the cell. A piece below 1e-12 of the smaller of
// the two cells is an artefact of rounding, or as good as one, and is left out. The pieces
// and every bit of their volumes are the same for any number of goroutines.
//
// # Limitations
//
// Both diagrams need a solid: without one, rims reach to infinity, and so do their pieces.
// What two different solids share of which neither is convex nor knows convex parts of itself
// (solid.Divided) is arranged anew for each call. All pieces are held in memory, 24 bytes
// each.
package overlay
