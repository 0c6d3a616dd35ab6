// Command kernelbench times the tetrahedralisation on a file of raw little-endian
// float64 x, y, z triples and prints one JSON line.
package main
