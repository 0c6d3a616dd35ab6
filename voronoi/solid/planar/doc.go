// Package planar owns Delaunay triangulations in the plane, with or without sides that
// must be in them.
//
// # Model
//
// [Delaunay] takes points from left to right, joins each to what it sees of the hull of
// those before, and turns diagonals until every circle through the corners of a triangle
// is empty (Lawson 1977). [Constrain] turns diagonals until given segments are sides
// (Sloan 1993); what it gives is not Delaunay near them.
//
// # Degenerate input
//
// Points on lattices and on circles have several Delaunay triangulations; which one comes
// out depends on the points alone. Points on one line have no triangles. Points must
// differ, and no segment may pass through a point or cross another.
//
// # What is exact and what is rounded
//
// All decisions are exact. No coordinate is computed.
//
// # Limitations
//
// Points that come in a bad order for a sweep, such as those on a long parabola, take
// quadratic time.
package planar
