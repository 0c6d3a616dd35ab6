// Package delaunay makes the Delaunay tetrahedralisation of sites in space: the
// tetrahedra between sites whose circumspheres contain no other site. It owns the
// build, its data structure, the search in it and its changes.
//
//	t, err := delaunay.Build(ctx, sites, delaunay.Options{})
//	for i := range t.NumTets() {
//		corners := t.Tet(i)              // four sites
//		j, k := t.Neighbor(i, 0)         // over the face opposite corners[0]
//	}
//
// # Model
//
// Sites are numbered as given. A tetrahedron has four corners, and a neighbour
// opposite each; a real tetrahedron is positive, det(b-a, c-a, d-a) > 0. Outside the
// convex hull lie ghosts, one a facet of the hull, which have the vertex at infinity
// (Ghost) as a corner, so that every face has two sides and nothing is a special case.
// Real tetrahedra have the numbers 0 to NumTets()-1, ghosts the ones behind.
//
// The build inserts one site after another (Bowyer 1981, Watson 1981): it walks to a
// tetrahedron whose sphere contains the site, collects all of these, which are
// connected, and replaces them by the star of the site. The order is random in rounds,
// each eight times as large as the one before, and along a Hilbert curve within a round
// (Amenta, Choi and Rote 2003), for lattices along a Z-order curve. Every tetrahedron keeps its circumcentre and two bounds
// on the squared radius; most questions "inside?" are one distance and two comparisons.
//
// Several threads share the space in slabs and insert only sites whose tetrahedra lie
// wholly in their own slab; the rest is tried again across the other axes. There are no
// locks, and no thread reads what another may write.
//
// # Degenerate input
//
// Sites in one place become one vertex, named by the lowest site (Representative,
// Repeats). Fewer than four sites, sites on a line or in a plane give no tetrahedra and
// a lower Dimension, with NearestSite, Insert and Remove at work all the same.
// Cospherical sites (lattices) have several Delaunay tetrahedralisations; the one here
// is that of Devillers and Teillaud (2011), as if the squared length of every site were
// raised by an infinitesimal, larger for lexicographically larger sites. It depends on
// the coordinates alone: not on the order of the sites, nor on the number of threads,
// nor on whether sites were there from the start or inserted and removed; and no
// tetrahedron is flat. Denormal and huge coordinates are ordinary; one that is not
// finite is a *CoordinateError.
//
// # What is exact and what is rounded
//
// The coordinates are taken as the float64 values that they are: 0.1 is the float64
// nearest to a tenth, not a tenth. All decisions are exact for these values, under
// every build level. A floating-point filter answers first. Where it cannot, and the
// sites are multiples of one power of two, within 2^58 of it apart (integers always
// are, numbers read from decimals nearly always), integers answer: the true determinant
// is known to be small when the filter fails, so that it is enough to know it modulo
// 2^64, or modulo 2^128 for instance where the whole extent is under 2^19 units;
// otherwise 320 bits hold it. Five corners of a box with axis-parallel edges are
// recognised as cospherical before that, whatever the step of their lattice. For all
// other sites package predicate answers by expansions. Nothing is snapped or moved.
//
// Circumsphere is rounded, and for nearly flat tetrahedra far off.
//
// # Cost
//
// About 2 µs a site on one thread, 1.2 µs on two; n log n for the sort, linear for the
// rest, as long as the sites are spread in space or over surfaces. On two skew curves
// there are n²/4 tetrahedra, and nothing helps. Memory is 64 bytes a tetrahedron and 40
// a site: with the 7.2 tetrahedra a site that are reserved about 500 bytes, and 16 more
// while the sites are sorted; Estimate says it before the build, and Options.Memory
// sets a limit.
//
// # Laws
//
// The tests know these by number: 1 Validate passes; 2 no site inside a sphere, one set
// whatever the order of the sites; 3 one set whatever the order of insertion; 4 inserting
// and removing leads to the same set as building; 5 arrays and back is the same and
// damage is noticed; 6 nearest site and location agree with brute force; 7 one set
// whatever the number of threads.
//
// # Limitations
//
// No weights, no constraints (faces that must be there), no periodic space. Numbers of
// tetrahedra depend on the number of threads until Renumber, and change with every
// Insert and Remove. A change takes the caller's own exclusion. Below dimension 3
// NearestSite looks at all sites and every change builds anew. At most 134 million
// sites.
package delaunay
