// Package vtu writes cells as an unstructured grid of VTK XML (.vtu; Schroeder, Martin &
// Lorensen, The Visualization Toolkit), which general viewers open: one polyhedron a
// convex piece, with the attributes of the row that it belongs to. It knows nothing of
// queries; it gets pieces and columns.
//
// # Model
//
// A row of the result is a cell, and its pieces are convex polyhedra (voronoi.Piece): one
// in a convex solid, several in one that is not. Each becomes a cell of the file of the type
// VTK_POLYHEDRON; the array "row" numbers the rows from 1, so that the pieces of a cell can
// be put together. Every column of the result is an array of cell data: REAL as Float64,
// INTEGER as Int64, BOOLEAN as UInt8, TEXT and TIMESTAMP as String, an INTERVAL in seconds
// as Float64, a POINT as three components.
//
// A NULL is NaN, for which INTEGER and BOOLEAN columns with a NULL become Float64 (whole
// numbers beyond 2^53 are refused there), and the empty text. Infinity is inf.
//
// Arrays are inline base64 of little-endian numbers, so that the file is valid XML and keeps
// every bit.
//
// # Limitations
//
// Points are not shared among pieces: the corners of neighbours are rounded each for
// itself. Columns of pieces repeat their row's values, so that sums over the cells of the
// file of a volume must be taken over rows. All arrays are held in memory.
package vtu
