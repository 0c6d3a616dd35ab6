// Package voronoi divides space among sites.
package voronoi
