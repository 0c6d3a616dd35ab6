package voronoi

import "math"

// Cost estimates what Measure takes for n cells (less than 0: all). The constants
// were measured on one core of a small machine; what takes ten times longer there
// takes ten times longer here.
func (d *Diagram) Cost(want Measures, n int) Cost {
	if n < 0 || n > d.tree.Len() {
		n = d.tree.Len()
	}
	c := Cost{OneByOne: true, Cells: n, Bytes: int64(n) * bytesPerRow(want)}
	if !d.needsCell(want) {
		c.Cells = 0
		c.Seconds = float64(n) * 1e-6 / float64(d.threads)
		return c
	}
	perCell := secondsPerCell
	if d.facts.Flat {
		// The ball of a vertex far from the sheet holds a part of it that grows
		// with the sheet.
		perCell += secondsPerSheetSite * math.Sqrt(float64(d.tree.Len()))
	}
	if d.solid != nil && !d.convex {
		perCell += secondsPerSolid
	}
	c.Seconds = float64(n) * perCell / float64(max(1, min(d.threads, n)))
	return c
}

const (
	secondsPerCell      = 20e-6
	secondsPerSheetSite = 3e-6
	secondsPerSolid     = 20e-6
)

func bytesPerRow(want Measures) int64 {
	bytes := int64(9)
	for _, pair := range [...]struct {
		m Measures
		b int64
	}{
		{Volume, 8}, {Area, 8}, {Faces, 13}, {Neighbours, 4}, {Bounded, 1}, {Clipped, 1},
		{WallArea, 8}, {Centroid, 25}, {Farthest, 8}, {NearestFace, 8},
	} {
		if want&pair.m != 0 {
			bytes += pair.b
		}
	}
	return bytes
}
