// Package section cuts a partition by a plane: of each cell that the plane passes
// through, what of it lies in the plane and in the solid.
//
// # Model
//
// A [Plane] has a point and a normal; the side that the normal points to is called above.
// [Cut] gives a [Section]: a polygon, or several, for each cut cell, the outline of the
// solid in the plane, and the axes U and V in which a drawing can be made: [Section.Flat]
// turns a place of the plane into two coordinates, so that the corners of a ring run
// counter-clockwise about what they enclose, seen from above.
//
// A cell is convex, and the plane meets it in a convex polygon. What of that lies in the
// solid is found in the plane: the triangles of the solid's surface meet the plane in
// directed segments with the solid on their left, and the bands between the ends of these
// are cut into trapezoids. A polygon of a cell is cut by each trapezoid that it meets.
// Pieces of one cell that share a side are put together to an outline with holes; sides
// that cancel are gone, as are the ends of the bands.
//
// # Degenerate input
//
// A plane can lie in faces of cells: the levels of a regular layout are halfway between
// its sites. And it can lie in walls: a floor is at a height that people name. Both are
// decided in the same way: the section is what it becomes when the plane is moved a
// hair's breadth up. So a face between two cells counts to the one above. Where that
// leaves nothing, at ceilings, it is what the plane moved a hair's breadth down gives; each place
// of the plane counts once. Whether a face lies in the plane is decided from the places
// of the two sites, alike for both of them, and within 1e-12 of the extent.
//
// A plane that only touches a cell in a corner or an edge does not cut it. Sites that coincide have
// one cut, under the number of the first of them.
//
// Without a solid, the cut of an unbounded cell may have no end: then Open is set, the area is
// +Inf, and there is no polygon.
//
// # What is exact and what is rounded
//
// Coordinates are relative to the foot of the diagram's origin in the plane and good to
// about 1e-15 of the extent. Areas are sums of the pieces, compensated, and add up to the
// area of the solid's section to 1e-12. Corners of outlines nearer to one another than
// 1e-10 of the extent are one. Along an axis, all corners of a plane have its coordinate
// to the last bit. Any number of threads gives the same bits.
//
// # Laws
//
//  1. The areas of the cells add up to that of the solid's section, whatever the plane.
//  2. The areas of all heights, integrated, are the volume of each cell.
//  3. The outline of a cell has the cell's area.
//  4. A place of the plane that is clearly nearest to a site lies in that site's polygons and in no other.
//  5. A plane turned over gives the same section, but for faces in it.
//
// # Limitations
//
// Each cell is made on its own, and all are looked at, also those far from the plane.
// A surface of many triangles that the plane cuts a thousand times makes thousands of
// trapezoids, which every cut cell is held against by their boxes. Solids must give their surface as
// triangles.
package section
