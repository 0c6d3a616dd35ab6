// Package coverage tells where nobody measured: the places that are farther from
// every site than the places around them.
//
// # Model
//
// The distance from a place to the nearest site is a landscape over the solid. [Gaps]
// finds its peaks, each the centre of a sphere that holds no site and cannot be made
// larger by moving it a little without leaving the solid. The highest is the centre of
// the largest empty sphere with its centre in the solid, and its radius the covering
// radius of the sites: no place is farther from a site (Toussaint 1983 in the plane;
// Okabe, Boots, Sugihara & Chiu 2000).
//
// Only the centre has to lie in the solid, not the sphere; and a site counts as near
// even where a wall stands between.
//
// # Where peaks can be
//
// Within the cell of a site p the landscape is |x - p|. Its square is strictly convex: on
// any segment it is greatest at an end and nowhere else. So a peak in the cell lies in the
// middle of no segment of cell and solid: it is a corner of the polyhedra that cell and
// solid have in common. Every such corner is of one of four kinds:
//
//  1. a vertex of the diagram inside the solid ([Inside]),
//  2. an edge of a cell that passes through a wall ([Wall]),
//  3. a face between two cells that an edge of the solid passes through ([Edge]),
//  4. a corner of the solid ([Corner]).
//
// They are found all at once: each cell is cut by the solid, where that is not convex
// by each of its convex parts ([solid.Divided]), and the corners of the pieces are
// looked at. The cuts between parts add corners that are none; the next step does away
// with them. Of a solid that knows its surface only ([solid.Faceted]) the corners of its
// walls in the cell are looked at, and the vertices of the cell in the solid.
// Vertices of the diagram alone would not do: in rooms most of the large
// gaps are on walls.
//
// # Which of them are peaks
//
// Let p1 … pk be the sites nearest to a place x. In the direction u the distance changes
// at first by the least of the (x-pi)·u. If that is 0 it still grows, by t²/2r at the
// distance t. So x is a peak if and only if every direction u that leads into the solid
// has some (x-pi)·u < 0. The directions into the solid are those into one of the convex
// parts that x belongs to, each of them a cone bounded by walls and cuts; that of a
// re-entrant corner is the union of several. For one cone the condition says that the
// unit vectors from x to the sites, together with the outward normals of the planes
// that x lies on, surround the origin on all sides. Without a solid it says that x lies
// strictly inside the convex hull of its nearest sites. On the surface of that hull it is
// none: the middle of four sites at the corners of a square is lower than the places
// above and below it.
//
// Where a solid has no parts, the directions u with no (x-pi)·u < 0 are a convex cone. If
// one of them leads into the solid, then either one lies in the surface, in one of the
// sectors that the facets at x make, or all of them lead into the solid, and any will do
// to ask for its side.
//
// Peaks are isolated: between two of them the distance dips.
//
// # Degenerate input
//
// On lattices many sites are nearest to a place, many cells share it, and it can lie
// on several walls by chance; there is one gap, whichever way it is found. Where sites
// stand on a sphere but for the rounding of their coordinates, the diagram has a
// cluster of vertices in place of one, and it may be that none of them is surrounded
// by its own four sites. So sites count as equally near within a scale, from 1e-14 of the
// distance up to 1e-8, as long as the distance falls off all around by more than that
// before it rises again. Gaps nearer to one another than 1e-4 of their radius are one,
// the highest of them.
//
// Sites that coincide count once, sites left out by the diagram not at all. One site, or
// sites on a line or in a plane, have gaps in a solid and none without. Without a solid
// there are no gaps outside the hull of the sites, where the distance grows without end,
// nor any where no vertex of the diagram is surrounded.
//
// # What is exact and what is rounded
//
// Radius is the distance from At, as it is written there, to the nearest site, found by
// looking and not by the construction. At is right to about 1e-15 of the radius divided
// by the flatness of the peak. Coordinates of gaps on walls along the axes, and of those
// in corners, are exactly those of the solid. Which places are gaps is decided to
// rounding: a peak above which the distance does not dip by 1e-14 of it on the way to
// higher places is none. The order, by falling radius, then x, y, z, and every bit of
// the answer are the same for any number of threads and any order of the sites.
//
// # Laws
//
// The tests hold the package to these:
//
//  1. No search finds a place farther from every site than the first gap, in rooms
//     that are not convex too.
//  2. Every gap is higher than all places around it.
//  3. Of all places where three walls or bisectors meet, those that are peaks by the
//     slopes around them are gaps, and no others.
//  4. A site in the place of a gap makes it go and no other grow.
//  5. The first radius is the largest voronoi.Farthest of all cells.
//
// # Parts and stretched distances
//
// Options.Within has gaps, places, spacing and redundancy of a part of the solid: all sites
// divide the space, and what is told is of the part. With stretched distances gaps and
// places are the peaks of these and cells are theirs; all lengths that are told are true.
// Ellipsoids, and clearances without a list of places, need plain distances
// ([ErrStretched]).
//
// # Limitations
//
// All cells are looked at, even if only the largest gaps are wanted, and nothing is kept.
// In a solid of many convex parts each cell is held against each part's box. Walls that
// meet at less than about 1e-6 are taken for one; what a gap makes of features of the
// solid thinner than 1e-8 of its radius is not to be relied on. A solid must be convex,
// know convex parts of itself or know its surface.
package coverage
