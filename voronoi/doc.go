// Package voronoi divides space among sites: to each the places nearer to it than
// to any other. It owns the [Diagram], the one door through which cells and
// contacts are asked for. It knows no file, no query and no unit; it answers in
// numbers and typed errors, and leaves the words to its caller.
//
// # Model
//
// A diagram is made of sites and, if wanted, a solid that closes the partition; it
// is immutable and safe for concurrent use. [New] computes no cell, only the index
// and the [Facts]. [Diagram.Measure] computes the wanted measures of the wanted
// cells, [Diagram.Contacts] the faces that cells share, [Diagram.Insert] the cell
// that one more site would get, [Diagram.Tetrahedra] the dual. Nothing else is
// computed, and nothing but the tetrahedralisation is kept.
//
// There are two ways to cells, and [Diagram.Cost] says which is taken.
//
// # One by one
//
// A cell is the intersection of the half-spaces nearer to its site than to each of
// the others. It is cut out of a box one half-space after the other
// (voronoi/polyhedron), in coordinates local to its site, where the bisector
// towards a neighbour at offset n is n·x <= |n|²/2 and nothing cancels. The nearest
// sites cut first. Then a walk through the k-d tree (voronoi/index) offers all sites
// that can still matter: a site cuts a cell if and only if it lies in the open ball
// about one of its vertices that passes through the cell's own site (the empty
// circumballs of Voronoi vertices; "radius of security" in Lévy & Bonneel 2013).
// These balls only shrink, so that the walk ends with every vertex certified. A
// fixed number of neighbours would be no proof, on any data.
//
// # All at once
//
// Where many cells are wanted, the Delaunay tetrahedralisation of all sites is built
// (voronoi/delaunay) and its circumcentres, the Voronoi vertices, are computed once
// each, seen from a corner; in two words a number where the tetrahedron is flat.
//
// Volume, area, centroid and reach of all cells come from one pass over the triangles:
// each is dual to an edge of three cells and adds its part to them (triangles.go), in
// sums whose bits do not depend on the order of the terms (bins.go). No cell is put
// together for that, and tetrahedra are read in the order in which they lie in memory.
// A box cuts the edges short; where they end at a wall, and where its own edges pass
// from cell to cell, the ends add what the walls' parts take (trianglewalls.go). So a
// scanned surface, nearly all of whose cells reach the walls, costs what a cube full of
// sites costs. Each segment on a wall must begin and end, which is checked for every cell.
//
// Counts and contacts want the faces: the loops of circumcentres around the edges at a
// site (the dual: Okabe, Boots, Sugihara & Chiu 2000), cut by a box face by face
// (boxed.go). A cell that fails a check, that is unbounded, reaches 4096 times as far as
// its nearest site, or is cut by another solid than a box or in stretched distances, is
// cut plane by plane as it is one by one, by the neighbours that are known then: nothing
// is searched for. Cells with edges or faces of
// length or area zero are counted on that polyhedron too, so that both ways count alike.
//
// # Which way
//
// The ways differ in the last bits (1e-14 of a measure on ordinary data), so that the
// choice must not depend on threads or history: it follows from the sites, the solid
// and the number of cells asked for. One by one a cell costs 5 µs and 0.1 µs for each
// site held against it, of which 32 cells tell the mean beforehand: about 100 on
// ordinary data, up to all sites on curved surfaces. All at once every site costs about
// 4 µs and every cell 1 µs more. So the break-even lies at about a quarter of the sites,
// on surfaces at one in a hundred or less. Below 500 sites or 32 cells, below dimension 3 and
// where [Options].Memory does not suffice cells are made one by one.
//
// With a solid, a cell is the part of the solid nearer to its site. Convex solids
// cut the polyhedron itself; others measure their part of it (voronoi/solid). A site
// outside the solid by more than the tolerance takes no part. A cell in a solid that
// is not convex can be in several pieces, and its measures are their sums.
//
// Without a solid some cells are unbounded: their volume, area and farthest point
// are +Inf, they have no centroid, and [Cells.Bounded] is false. Their faces,
// neighbours and nearest face are finite, Vertices counts the finite ones, and Edges
// counts edges, rays and lines alike: a half-space has one face and no edge, a wedge
// two faces and one edge. Contacts that run to infinity have the area +Inf.
//
// # What counts as a face
//
// On lattices and other regular layouts more than four sites lie on common spheres,
// and cells touch in edges and vertices. A contact counts if its area exceeds 1e-12
// of the surface of its cell; edges shorter than 1e-9 of their distance from the
// site are no edges. So the cell of a cubic lattice has 6 faces, 12 edges and 8
// vertices although 26 sites touch it. polyhedron.Cell.Counts and Shape have the
// details. Counts satisfy V - E + F = 2.
//
// # Degenerate input
//
// One site has all of the space. Sites on one line have slabs, sites in one plane
// have prisms without end; four or more sites on a sphere meet in one vertex. None
// of these is a special case. Sites with equal coordinates (-0 is 0) share one cell,
// see [Cells.Multiplicity]: how they split it is the caller's business. Coordinates
// must be finite and below 1e150.
//
// # What is exact and what is rounded
//
// Exact: the dimension of the set of sites, which sites coincide, which lie in the
// solid (as far as the solid is exact), whether a cell is unbounded, the shift of
// the coordinates to a near origin (an axis is shifted only if that loses no bit of
// any site). Rounded: coordinates of vertices, and with them all measures, to about
// 1e-14 of the cell's size; whether a contact of about 1e-12 of the surface counts.
// Every product is rounded on its own, so that all builds give the same bits.
//
// # Laws
//
// The tests hold the package to these under the same numbers:
//
//  1. The volumes of the cells add up to the solid, the wall areas to its surface.
//  2. Contacts are symmetric to the last bit, whichever sites are asked for; with
//     the wall area they add up to the surface of the cell.
//  3. Every cell is closed: each edge has two faces, V - E + F = 2, the area vectors
//     of its faces sum to zero.
//  4. A cell is what the half-spaces of all other sites leave, in whatever order.
//  5. Neither the order of the sites nor the number of threads changes a bit; nor does
//     which other cells are asked for, as long as the way is the same.
//  6. A shift that loses no bit of the coordinates shifts the centroids and changes
//     nothing else. Scaling by a power of two scales all measures exactly.
//  7. No site is nearer to a vertex of a cell than the cell's own.
//  8. The cell that Insert gives to a place is the one that a site there has.
//  9. Both ways make the same cells: volumes to 1e-11, the same counts and contacts.
//
// # Limitations
//
// One by one, about a hundred sites have to be looked at for each cell on ordinary data,
// flat sheets included; where sites lie on a curved surface the balls of far vertices
// hold large parts of it. Cells one by one that are much smaller than the box they are
// cut from lose digits to it: 1e-11 at a ratio of 1e5; those made all at once do not.
//
// Solids other than boxes cut cells plane by plane and, where they are not convex, by
// their own means, whichever way was chosen.
//
// The tetrahedralisation with its circumcentres takes about 940 bytes a site and is kept
// as long as the diagram, the sums over its triangles 150 more for each of up to four
// goroutines while a request lasts.
//
// Without a solid, a face of an unbounded cell that lies wholly beyond 2^20 times the
// extent of the sites is not seen, and a bounded cell that reaches farther than 2^90
// times the extent counts as unbounded. Strips of no width between unbounded cells, as
// mirrored sites have them, are told from faces by rounding and can be counted.
//
// The area that is asked for with the tetrahedralisation at hand includes faces that are
// too small to count as contacts, and its last bits are not those of one by one.
//
// The middle of a contact that a non-convex solid cuts is right to about 1e-8 of the
// cell's size; where the face lies partly in walls on both of its sides, it is the
// middle of what the solid leaves on the smaller side.
package voronoi
