// Package polyhedron owns one thing: a bounded convex polyhedron that is cut
// down by half-spaces, one after the other, and measured.
//
// # Model
//
// A [Cell] lives in LOCAL coordinates: the site it belongs to is the origin, so
// that the bisector towards a neighbour at offset n is n·x <= |n|²/2 without any
// cancellation. Its surface is a graph in which every vertex has exactly three
// edges. Half-edge 3v+k is the k-th of the three that leave vertex v, counted
// counter-clockwise as seen from outside, and the whole topology is one array:
// the twin of each half-edge. Every half-edge knows the cut that made the face
// on its left.
//
// [Cell.Clip] gives every edge that crosses the plane its own new vertex, even
// where the plane passes through an old vertex, and joins the new vertices along
// the outside run of every face they lie on. Each new vertex lies on exactly two
// old faces, once as an exit and once as an entry, so that the joins are a
// permutation and its cycles are the new faces. Nothing is merged and nothing is
// guessed: whatever the pattern of signs, right or spoilt by rounding, the
// result is a closed surface made of spheres. (Relatives in print: Sutherland &
// Hodgman 1974 for polygons; Powell & Abel 2015 for graphs whose vertices have
// three edges.)
//
// A [Polygon] is a plane polygon in space that half-spaces cut in the same way
// (Sutherland & Hodgman 1974).
//
// # Degenerate input
//
// Planes through vertices, along edges or in faces, the same plane twice,
// lattices whose planes meet by the dozen in one point: all leave edges of length
// zero and faces of area zero behind, which carry no measure. [Cell.Shape]
// counts faces, edges and vertices without them. A plane that leaves nothing but
// a face, an edge or a vertex empties the cell.
//
// # What is exact and what is rounded
//
// The topology follows from the computed signs without exception. Coordinates
// are rounded: a new vertex is interpolated on its edge. In cells that began in a
// huge box ([Cell.SetFarBox]) it is set from its three planes where that is more
// accurate, or kept in two words a coordinate (Dekker 1971) where it has to be. Every
// product is rounded on its own (no fused multiply-add), so that all builds give the
// same bits.
//
// # Limitations
//
// A Cell and a Polygon are buffers for one goroutine; once warm they allocate
// nothing. Vertex and face numbers change with every cut. Coordinates beyond
// about 1e100 overflow in the moments.
package polyhedron
