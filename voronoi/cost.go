package voronoi

// Cost estimates what Measure takes for n cells (less than 0: all). It builds a few
// cells, spread over the diagram, the first time it is asked, and counts the sites
// that had to be held against each; the estimate is the same on every run. The
// constants were measured on one core of a small machine.
func (d *Diagram) Cost(want Measures, n int) Cost {
	if n < 0 || n > d.tree.Len() {
		n = d.tree.Len()
	}
	c := Cost{OneByOne: true, Cells: n, Bytes: int64(n) * bytesPerRow(want)}
	perCell := secondsPerLookup
	if d.needsCell(want) {
		d.probe.Do(d.probeCells)
		perCell = secondsPerCell + secondsPerSite*d.offered
		c.Slow = d.offered > slowFrom
		if d.solid != nil && !d.convex {
			perCell += secondsPerSolid
		}
	} else {
		c.Cells = 0
	}
	c.Seconds = float64(n) * perCell / float64(max(1, min(d.threads, n)))
	return c
}

const (
	secondsPerLookup = 1e-6
	secondsPerCell   = 5e-6
	secondsPerSite   = 0.1e-6
	secondsPerSolid  = 20e-6

	// slowFrom is the number of sites held against a cell from which a diagram is
	// slow. Uniform, clustered, flat and regular sets have 70 to 130.
	slowFrom = 500

	// probeCount cells are built for the estimate, fewer if they offer more than
	// probeMost sites together.
	probeCount = 32
	probeMost  = 200_000
)

// probeCells sets offered: the mean number of sites held against a cell.
func (d *Diagram) probeCells() {
	n := d.tree.Len()
	if n == 0 {
		return
	}
	b := d.builder()
	defer d.free(b)
	b.offered = 0
	built := 0
	for k := 0; k < probeCount && b.offered < probeMost; k++ {
		// Steps of a golden section of the tree's order come near every part of it
		// early, should the work end the loop.
		i := int32(uint64(k) * 2654435769 % probeSpan * uint64(n) / probeSpan)
		p := d.tree.Point(i)
		b.build(&b.cell, p, add(p, d.origin), i)
		built++
	}
	d.offered = float64(b.offered) / float64(built)
}

const probeSpan = 1 << 20

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
