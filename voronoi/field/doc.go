// Package field says what the sites of a diagram let one expect elsewhere: the weights
// of the sites at a place, the weights that the others have at the place of a site, and
// the space in which what is expected is above a threshold. It knows places and weights;
// the values belong to its caller, so that all attributes share one set of weights.
//
// # Model
//
// A [Field] goes over one diagram. [Field.At] gives the weights at a place. They are
// never negative and add up to 1; at the place of a site it has them all. An estimate is
// their mean of the values ([Estimate]), and never leaves the range of these.
//
//   - Sibson (1980, 1981): each site by what the cell of the place, were it one more site,
//     would take from it. With [Field.Prepare] the parts are bounded by the centres of
//     the tetrahedra that the place would change (zone.go); without it, and where the
//     cell leaves the solid or the hull, they are cut out of that cell by the bisectors
//     between its neighbours. None is a difference of two volumes, which would have no
//     digits where the part is small.
//   - Laplace (Belikov et al. 1997; Hiyoshi and Sugihara 1999): by the areas of that
//     cell's faces over the distances.
//   - Linear: barycentric coordinates in the Delaunay tetrahedron.
//   - Nearest: the nearest site alone.
//   - Distance (Shepard 1968): the twelve nearest by an inverse power of the distance;
//     sites as far as the twelfth count too.
//
// In a solid the cells end at its walls. Sibson and Laplace are then defined everywhere
// in it; they are the coordinates of a field that nothing leaves through the walls, and
// flatten a linear field near them. Without a solid they reproduce linear fields, as
// Linear does, and end at the convex hull of the sites. On the hull's faces and edges
// the cell is unbounded, and they are the limit from within (rim.go). Where all sites lie
// in one plane or on one line they are the coordinates in it.
//
// [Field.Without] leaves one site out. A site that goes gives its cell to its
// neighbours, each part to the nearest, so that the parts of its own cell are Sibson's
// weights in the diagram without it (and its faces Laplace's): nothing is built anew.
//
// [Field.LinearAbove] adds closed forms over the tetrahedra. [Field.SibsonAbove] divides
// the solid (the hull of the sites where there is none, or a part) into boxes and decides those in which all sites that can be natural
// neighbours of any place agree: its bounds are certain, its estimate is sampled.
//
// With stretched distances everything is as in the stretched space; volumes are true.
//
// # Laws
//
// The tests refer to these numbers.
//
//  1. Weights add up to 1, and none is negative.
//  2. Without a solid, the mean of the places by their weights is the place (Sibson,
//     Laplace, Linear).
//  3. Without(i) equals At the place of i in a diagram made without it.
//  4. Sibson's weights are what the cells of the neighbours lose when the place becomes
//     a site, over the volume of its cell.
//  5. The integral over the thresholds of the share above them is the mean.
//  6. Lower <= Volume <= Upper, and exact bounds hold for other methods within them.
//  7. Neither threads nor the order of questions changes a bit. (Whether a field was
//     prepared may change the last ones.)
//  8. The parts of law 4 are the same by the tetrahedra as by cutting.
//
// # Degenerate input
//
// Sites in one place are one site. One site has all the weight everywhere in its solid,
// and nobody to be left out for. Sites on common spheres, lattices among them, leave
// neighbours whose faces or parts have no size: these have no weight. Linear takes the
// tetrahedra that package delaunay makes of such sites.
//
// # What is exact and what is rounded
//
// Exact: whether a place lies in the convex hull or on it, the tetrahedron it lies in,
// whether it is a site's. Rounded: the weights, to about 1e-14; near the hull without a
// solid, where cells reach far, to about 1e-10. [Above].Volume of Linear to 1e-12.
//
// # Limitations
//
// A place that its own coordinates' rounding takes off a face of the hull is not on it.
// Of a solid that is not convex each part is measured by the solid's own means where a
// wall cuts the cell in a way that is not convex, which takes ten times as long and more.
// Prepared fields hold the tetrahedralisation: about 500 bytes a site. Bounds
// of SibsonAbove shrink to the cells around the level, not to nothing.
package field
