// Package solid owns the regions of space that close a partition: which side of the
// surface a point lies on, and what part of a cell lies inside.
//
// # Model
//
// A [Solid] is bounded and immutable. A [Box] is a cuboid with the axes' directions, a
// [Prism] a floor plan between two heights. A plan is an outline minus holes; it need
// not be convex. Rings are cleaned when the solid is made: corners are welded and made
// nodes of the sides they lie on, the edges of outline and holes are added up as
// directed edges, and those that cancel are gone. So a hole that stands in a corner of
// the outline, shares a side with it or with another hole, or cuts the plan in two
// simply takes its area away. A sweep over the plan with exact predicates then checks
// that every ring winds once around what it encloses, that holes lie in the outline and
// apart from one another, and cuts the inside into trapezoids.
//
// [Solid.Measure] measures the part of one convex cell inside the solid, in coordinates
// local to the cell's site. Cells that no wall touches, and cells that meet only walls
// in convex position, need nothing more than the cell itself; others are cut by the
// trapezoids. All terms are positive, and the planes between trapezoids are the same to
// the last bit on both sides, so that volumes add up to the solid whatever the rounding.
//
// Areas are another matter: a face that lies in a wall, or in a plane between two
// trapezoids, is a null set for any decomposition, and regular layouts of sites put
// faces exactly there. Such a face counts as a contact only where the solid is on both
// of its sides, and a wall belongs to the cell that has the solid on its inner side.
//
// Box and Prism are [Divided]: they hand out their convex parts, the walls at a place and
// their corners, for those who look for places and not for measures.
//
// Walls are numbered along the outline, counter-clockwise from its smallest corner (by
// x, then y), then along the holes; floor and ceiling come last.
//
// # Laws
//
// The tests refer to these numbers.
//
//  1. Volume and first moment of a cell in the solid equal the sum over any convex
//     decomposition, and over signed slabs below the edges of the plan.
//  2. Over the cells of a partition they add up to the solid.
//  3. Contacts are symmetric.
//  4. Wall areas add up to the surface.
//  5. A third of the sum of area times distance, over contacts and walls, is the volume.
//  6. The farthest point is the farthest corner of the pieces.
//  7. Faces in the planes of walls are contacts only with the solid on both sides.
//  8. No place is farther than the farthest point.
//  9. A shift that keeps every coordinate's digits keeps every measure.
//  10. Asking for less changes no number.
//
// # Degenerate input
//
// Repeated corners, corners on straight sides, rings either way round and heights in
// either order are accepted. Rings with fewer than three distinct corners, without
// area, with spikes, crossing or overlapping themselves or one another, holes outside
// the outline, boxes without extent and coordinates that are not finite or beyond 1e50
// are refused with an [Error] that names ring, side and place in numbers.
//
// A cell may reach beyond the solid, lie wholly outside or only touch it, have its site
// on the surface or outside, and share planes with any wall. A cell that only touches
// the solid is Empty.
//
// # What is exact and what is rounded
//
// [Solid.Side] with tolerance 0 is exact for the cleaned plan; cleaning moves no corner
// by more than four units in the last place of the plan's largest coordinate. Whether a
// plan is valid, convex or in several pieces is decided by exact predicates. Planes are
// placed by differences to the cell's site, so that large coordinates lose nothing that
// they had. Volumes and first moments are good to about 1e-15 of the cell's size, areas
// to about 1e-12; where a wall leans by 1e-9 or so against another plane, areas are good
// to 1e-8.
//
// A face counts as lying in a wall within 1e-10 of the solid's size, or 64 units in the
// last place of its largest coordinate, if that is more, but never more than a
// thousandth of the height or of the plan's area divided by its boundary.
//
// # Limitations
//
// Only upright walls, one floor and one ceiling. Features of a plan that are thinner
// than the distance above have their volume, but their walls and contacts are not to be
// relied on. Every edge of the plan is looked at for every cell: plans of many thousand
// edges are slow. A Work serves one goroutine.
package solid
