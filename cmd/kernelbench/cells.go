package main

import (
	"context"
	"encoding/binary"
	"math"
	"os"
	"time"

	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// cellTimes are the fields that -cells adds to the line.
type cellTimes struct {
	seconds, cpu float64
	total        float64
}

// writeCells measures all cells cut by the bounding box of the sites, and writes their
// volumes, a float64 a site; NaN for a site in the place of an earlier one. Areas and
// centroids are computed too where all is set, so that they can be timed.
func writeCells(name string, t *delaunay.T, threads int, all bool) (c cellTimes, err error) {
	lo, hi := bounds(t)
	want := voronoi.Volume
	if all {
		want |= voronoi.Area | voronoi.Centroid
	}
	before, start := usage(), time.Now()
	cells, err := voronoi.CellsInBox(context.Background(), t, lo, hi, want, threads)
	if err != nil {
		return c, err
	}
	c.seconds, c.cpu = time.Since(start).Seconds(), usage().cpu-before.cpu
	var total voronoi.Sum
	out := make([]byte, 0, 8*len(cells.Volume))
	for i, v := range cells.Volume {
		if !cells.Inside[i] {
			v = math.NaN()
		} else {
			total.Add(v)
		}
		out = binary.LittleEndian.AppendUint64(out, math.Float64bits(v))
	}
	c.total = total.Value()
	return c, os.WriteFile(name, out, 0o666)
}

// bounds is the bounding box of the sites.
func bounds(t *delaunay.T) (lo, hi voronoi.Vec) {
	inf := math.Inf(1)
	lo, hi = voronoi.Vec{X: inf, Y: inf, Z: inf}, voronoi.Vec{X: -inf, Y: -inf, Z: -inf}
	for i := range t.NumSites() {
		p := t.Site(i)
		lo = voronoi.Vec{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
		hi = voronoi.Vec{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
	}
	return lo, hi
}
