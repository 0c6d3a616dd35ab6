package voronoi

import (
	"context"
	"errors"

	"nearcell/voronoi/delaunay"
)

// Cost estimates what Measure takes for n cells (less than 0: all), and says in which
// of the two ways it will make them. It builds a few cells, spread over the diagram, the
// first time it is asked, and counts the sites that had to be held against each; the
// estimate is the same on every run. The constants were measured on one core of a small
// machine.
func (d *Diagram) Cost(want Measures, n int) Cost {
	if n < 0 || n > d.tree.Len() {
		n = d.tree.Len()
	}
	c := Cost{OneByOne: true, Cells: n, Bytes: int64(n) * bytesPerRow(want)}
	if !d.needsCell(want) {
		c.Cells = 0
		c.Seconds = float64(n) * secondsPerLookup / float64(max(1, min(d.threads, n)))
		return c
	}
	d.probe.Do(d.probeCells)
	single, whole := d.seconds(n)
	seconds := single
	c.OneByOne = !d.worthWhole(n)
	if !c.OneByOne {
		seconds = whole
		c.Bytes += d.globalBytes()
	}
	c.Slow = c.OneByOne && d.offered > slowFrom
	if d.solid != nil && !d.convex {
		seconds += secondsPerSolid * float64(n)
	}
	c.Seconds = seconds / float64(max(1, min(d.threads, n)))
	return c
}

// seconds estimates for one thread how long n cells take one by one, and with the
// tetrahedralisation of all sites. It needs the probe.
func (d *Diagram) seconds(n int) (single, whole float64) {
	single = float64(n) * (secondsPerCell + secondsPerSite*d.offered)
	whole = secondsPerBuild + float64(d.tree.Len())*secondsPerVertex + float64(n)*secondsPerStar
	return single, whole
}

// worthWhole is the choice between the two ways. It depends on the sites, the solid
// and the number of cells alone: the last bits of measures may differ between the ways,
// and must not depend on the number of threads or on what was asked before.
//
// One by one a cell takes 5 µs and 0.1 µs for each site held against it: of these there
// are about a hundred on ordinary data and thousands on curved surfaces, as a probe
// tells. All of n sites take about 4 µs each for the tetrahedralisation and the sums over
// its triangles, and a cell 1 µs after that (less for sums, more for counts), so that the
// ways break even at about a quarter of all cells, or at a few thousand of a million on
// surfaces.
func (d *Diagram) worthWhole(n int) bool {
	all := d.tree.Len()
	if all < wholeFrom || d.facts.Dimension < 3 || d.memory > 0 && d.globalBytes() > d.memory {
		return false
	}
	if n < fewCells {
		return false
	}
	d.probe.Do(d.probeCells)
	single, whole := d.seconds(n)
	return whole < single
}

// choose returns the tetrahedralisation if n cells are to be made with it, nil if they
// are to be made one by one.
func (d *Diagram) choose(ctx context.Context, want Measures, n int) (*dual, error) {
	if !d.needsCell(want) || !d.worthWhole(n) {
		return nil, nil
	}
	g, err := d.dual(ctx)
	var memory *delaunay.MemoryError
	if errors.As(err, &memory) {
		return nil, nil // sites that lie so oddly that the estimate was too low
	}
	return g, err
}

// globalBytes is what the tetrahedralisation and all that is made from it take.
func (d *Diagram) globalBytes() int64 {
	n := d.tree.Len()
	return delaunay.Estimate(n) + int64(n)*bytesPerVertex
}

// tallyThreads is how many goroutines may keep tallies.
func (d *Diagram) tallyThreads() int {
	if d.memory <= 0 {
		return d.threads
	}
	n := int64(d.tree.Len())
	return min(d.threads, 1+int(max(0, d.memory-d.globalBytes())/(n*bytesPerTally)))
}

const (
	secondsPerLookup = 1e-6
	secondsPerCell   = 5e-6
	secondsPerSite   = 0.1e-6
	secondsPerSolid  = 20e-6
	secondsPerBuild  = 100e-6
	secondsPerVertex = 4e-6
	secondsPerDual   = 2.8e-6 // the part of it without the sums over the triangles
	secondsPerStar   = 1e-6

	// wholeFrom is the number of sites from which a tetrahedralisation is thought of;
	// fewCells are made one by one whatever they cost.
	wholeFrom = 500
	fewCells  = 32

	// bytesPerVertex: coordinates twice, numbers, and 6.8 circumcentres of 32 bytes, each
	// in four lists; and tallies, which come and go. Further goroutines take tallies of
	// their own only where these fit, too.
	bytesPerVertex = 24 + 24 + 8 + 12 + 217 + 112 + bytesPerTally
	bytesPerTally  = 128 + 24

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
		b.build(&b.cell, p, d.place(i), i)
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
