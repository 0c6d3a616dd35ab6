// Package mesh owns solids bounded by triangles: meshes from files, and whatever solids
// give when one is taken from another or added to it.
//
// # Model
//
// A [Mesh] is a set of triangles, counter-clockwise seen from outside, over whose edges
// the directed uses cancel. That is all that is asked of them: shells may lie apart, touch
// in faces, edges and corners, and have voids in them. Triangles that hang together and
// lie in one plane are one wall, so that it does not show how a wall was triangulated.
//
// [New] tests triangles in this order. Equal corners are one; corners within
// [Options].Weld of each other are one if that is asked for. Triangles with two equal
// corners go. Over every edge the uses one way and the other must cancel: this is
// necessary and sufficient for the sums below, where "the area vectors add up to zero" is
// only necessary. Triangles must not cross one another or cover one another. A component
// with a negative volume is a void if it lies in a shell, else it is inside out and turned;
// if the whole is negative, the whole is turned. A positive one in another is refused.
//
// # Measures
//
// The column of a triangle is the space below it. Almost everywhere, the indicator of the
// solid is the sum over the triangles of the indicators of their columns, with the sign of
// the way that they look, up or down; upright triangles have none. So volume and first
// moment of a cell in the solid are sums over convex pieces, cell by column, and nothing
// has to be known about how cell and surface intersect. The upright planes through an
// edge are the same to the last bit for the triangles on both of its sides. Cells that no
// triangle comes near are in or out as a whole.
//
// Areas live on null sets, where "almost everywhere" does not help: regular layouts put
// faces of cells exactly into walls and under edges of triangles. So a face near the
// surface is measured on either side, moved by two small steps; the walls in its plane, which
// have the solid on one side only, are taken from either; what is left is the contact. A
// wall in the plane of a face belongs to the cell that has the solid, which is found out by
// moving the wall inwards; steps of two sizes make the error of the first order cancel.
//
// The farthest place is a corner of a wall in the cell, or a vertex of the cell that the
// solid reaches.
//
// # Combining
//
// [Combine] and [Join] cut the triangles of each solid where those of the others meet
// them, and keep the pieces that have the combination on one side. A piece is judged at
// its middle: how often does each surface wind around the places in front of it and behind
// it? Corners that edges and triangles make with one another are exact ratios, equal
// planes are found equal, and every decision is exact, so that any number of faces may
// coincide and edges pass through corners. At last corners are rounded, once, and corners
// in the middle of another piece's side join it, so that the result is closed. A
// combination remembers what it was made of; combining it again begins there.
//
// [NewRegion] makes what a part shares with a solid in the same way, and knows of each piece
// of the surface whether the solid ends there or the part alone: the latter is no wall.
//
// Faces that coincide but for rounding, as after a rotation, leave films of the solid or of
// nothing between them, 1e-16 thick. They are found, and are no walls.
// Far from the origin, where corners are rounded by more than that, the surface may lie in
// folds there, three times in one place; the area of the middle one is taken off.
//
// # Laws
//
// The tests hold the package to these:
//
//  1. The mesh of a box is the box, that of a prism the prism, in all measures.
//  2. Volumes of cells add up to the solid (1e-12), walls to its surface (1e-8), contacts
//     are symmetric.
//  3. Refined triangles, rotation and a shift to large coordinates change nothing.
//  4. A mesh without one of its triangles is refused; turned inside out it is turned back.
//  5. a MINUS b and a PLUS b have the volume, the surface, the pieces and the voids that
//     they have by hand, and volume(a) = volume(a MINUS b) + volume of what a and b share.
//
// # What is exact and what is rounded
//
// [Mesh.Side] with tolerance 0 is exact for the triangles as they are; those of
// combinations have rounded corners where surfaces crossed. Volumes are good to about
// 1e-15 of the solid, areas to 1e-12 of it, and to 1e-8 where a face lies in a wall.
// A face counts as lying in a wall within 1e-10 of the solid's size or 64 units in the
// last place of its largest coordinate, if that is more.
//
// # Limitations
//
// Walls in one plane that do not hang together are several. Features thinner than eight
// times the distance above have their volume, but their walls and contacts are not to be
// relied on. Which way triangles around an edge with more than two of them belong together
// is told by angles in float64. A stretched combination is stretched after its corners were
// rounded. Combining costs one look at every triangle and exact arithmetic for those that
// meet: thousands of crossings a second.
package mesh
