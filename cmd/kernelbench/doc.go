// Command kernelbench times the tetrahedralisation and prints one JSON line, so that
// it can be measured beside other programs on the same bytes:
//
//	kernelbench FILE [-threads n] [-profile OUT] [-cells OUT [-measures]]
//
// FILE holds raw little-endian float64 triples x, y, z. The line has the fields
//
//	lib, mode       this program and "seq" or "parallel"
//	threads         goroutines that insert sites
//	points          sites in the file
//	vertices        distinct sites
//	tets            real tetrahedra
//	seconds         wall time of the build alone, without reading
//	cpu_seconds     processor time of the build, all threads
//	rss_start       resident bytes before the file is read
//	peak_rss        most resident bytes, the sites included
//	fingerprint     of the set of tetrahedra, from coordinates alone
//
// With -cells the cells are measured too, cut by the bounding box of the sites: their
// volumes go to a file, one little-endian float64 a site in the order of the sites, NaN
// for a site in the place of an earlier one. -measures computes areas and centroids
// with them. The line then has three more fields:
//
//	cells_seconds      wall time of the cells alone, after the build
//	cells_cpu_seconds  processor time of them
//	cells_total        sum of the volumes: that of the box
//
// The fingerprint is that of delaunay.T.Fingerprint: where no five sites are
// cospherical every exact program must come to the same.
//
// # Limitations
//
// Processor time and memory are 0 where the operating system is not Linux.
package main
