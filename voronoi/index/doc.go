// Package index owns one thing: a k-d tree over points in space, built once and
// read by any number of goroutines.
//
// # Model
//
// The tree halves its points at the median of the widest side of their bounding
// box until at most 8 are left. It is implicit: the points stand in one array in
// the tree's order, node k has the children 2k+1 and 2k+2, and which part of the
// array a node owns follows from the halving alone. Every node keeps the tight
// box of its points.
//
// Points are NUMBERED IN THE TREE'S ORDER: every query answers with such a
// number, and [Tree.Original] leads back to the place in the input. The order
// depends on the coordinates alone (ties of a median are broken by the other
// coordinates and only between equal points by the place in the input), so that
// nothing computed from a tree depends on the order of the input. It is also a
// good order to work in: neighbours in space are near in memory.
//
// # Degenerate input
//
// No point, one point, equal points, points on a line or in a plane are normal
// input. Coordinates must be finite.
//
// # What is exact and what is rounded
//
// Distances are rounded; equal rounded distances are ordered by number. A box is
// passed over only if rounding cannot hide a better point in it. Every product is
// rounded on its own, so that all builds give the same answers.
//
// # Limitations
//
// The tree cannot grow or shrink. Squared distances overflow beyond 1e154.
package index
