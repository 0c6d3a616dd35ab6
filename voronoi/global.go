package voronoi

import (
	"context"
	"math"
	"slices"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/index"
)

// The second way to cells: the tetrahedralisation of all sites, whose circumcentres
// are the vertices of the cells. It is built once and kept.

// dual is the tetrahedralisation of the diagram, built when it is first asked for.
func (d *Diagram) dual(ctx context.Context) (*dual, error) {
	d.building.Lock()
	defer d.building.Unlock()
	if d.whole != nil {
		return d.whole, nil
	}
	t, err := d.tetrahedra(ctx)
	if err != nil {
		return nil, err
	}
	var box *enclosure
	if d.isBox && !d.stretched {
		box = &enclosure{d.lo, d.hi, d.origin, d.labels}
	}
	g, err := newDual(ctx, t, d.tree.Point, d.tree.Len(), d.threads, box)
	if err != nil {
		return nil, err
	}
	d.whole = g
	return g, nil
}

// tetrahedra recalls the tetrahedralisation, or builds it.
func (d *Diagram) tetrahedra(ctx context.Context) (*delaunay.T, error) {
	n, sites := d.tree.Len(), flat(d.tree.Points())
	if d.recall != nil {
		if t := d.recall(sites, d.threads); t != nil {
			d.fresh = false
			return t, nil
		}
	}
	options := delaunay.Options{Threads: d.threads, Progress: d.buildProgress()}
	if d.memory > 0 {
		options.Memory = max(1, d.memory-int64(n)*bytesPerVertex)
	}
	d.fresh = true
	return delaunay.BuildFlat(ctx, sites, options)
}

// buildProgress tells of the build as cells that are not done yet.
func (d *Diagram) buildProgress() func(done, total int) {
	if d.progress == nil {
		return nil
	}
	return func(done, total int) { d.progress(0, total) }
}

// Tetrahedra is the Delaunay tetrahedralisation of the sites that take part, built
// when it is first asked for and kept. Its sites are those of the diagram in another
// order, one for each place, moved by Facts().Origin: site tells the diagram's site
// (the representative of its group) of one of them. It fails as delaunay.Build does.
func (d *Diagram) Tetrahedra(ctx context.Context) (t *delaunay.T, site func(i int32) int32, err error) {
	if limit, need := d.memory, d.globalBytes(); limit > 0 && need > limit {
		return nil, nil, &delaunay.MemoryError{Need: need, Limit: limit}
	}
	g, err := d.dual(ctx)
	if err != nil {
		return nil, nil, err
	}
	return g.t, func(i int32) int32 { return d.site[i] }, nil
}

// take makes w ready for the cell and tells whether it was measured face by face; if
// not, b.cell is the polyhedron, finished but for a solid that is not convex. The
// labels of the sums are points, those of b.cell cells.
func (b *builder) take(cell int32, k wants) (summed, bounded bool) {
	w, d := b.walker, b.d
	w.star(w.g.point[cell])
	p := d.tree.Point(cell)
	at := d.place(cell)
	if d.stretched { // the sums of faces hold where these stand upright on the lines between sites
		b.knowNeighbours()
		bounded = b.build(&b.cell, p, at, cell)
		b.known = false
		return false, bounded
	}
	if d.solid == nil {
		if w.sound() {
			w.whole(k)
			return true, true
		}
		b.knowNeighbours()
		bounded = b.build(&b.cell, p, at, cell)
		b.known = false
		return false, bounded
	}
	if w.sound() && b.inSolid(at) {
		w.whole(k)
		return true, true
	}
	if d.isBox && w.clippable() && w.inBox(k) {
		return true, true
	}
	b.knowNeighbours()
	b.build(&b.cell, p, at, cell)
	b.known = false
	return false, true
}

// farShare2 is the square of the ratio of the farthest vertex to the nearest site from
// which a cell is cut plane by plane: its vertices have lost digits.
const farShare2 = 0x1p24

// inSolid tells whether the cell of the star at hand lies in the solid.
func (b *builder) inSolid(at Vec) bool {
	w, d := b.walker, b.d
	if d.isBox {
		lo, hi := w.g.localBox(w.p)
		return w.any == 0 && lo.X <= 0 && lo.Y <= 0 && lo.Z <= 0 && hi.X >= 0 && hi.Y >= 0 && hi.Z >= 0
	}
	return d.holdsBall(at, w.far2)
}

// holdsBall tells whether the solid holds a ball about a place, surely.
func (d *Diagram) holdsBall(at Vec, radius2 float64) bool {
	far := math.Sqrt(radius2) * (1 + 1e-9)
	if lo, hi := sub(d.lo, at), sub(d.hi, at); far > min(-lo.X, -lo.Y, -lo.Z, hi.X, hi.Y, hi.Z) {
		return false
	}
	return d.solid.Distance(at) > far
}

// clippable tells whether the star at hand can be cut by the box face by face.
func (w *walker) clippable() bool {
	lo, hi := w.g.localBox(w.p)
	return w.sound() && (len(w.g.awkward) == 0 || !w.g.awkward[w.p]) && lo.X <= 0 && lo.Y <= 0 && lo.Z <= 0 && hi.X >= 0 && hi.Y >= 0 && hi.Z >= 0
}

// sound tells whether the vertices of the star at hand can be relied on.
func (w *walker) sound() bool {
	return !w.open && w.any&spoilt == 0 && w.far2 <= farShare2*w.near2
}

// knowNeighbours tells the builder the sites that the next cell is to be cut by: the
// neighbours of the star at hand, nearest first.
func (b *builder) knowNeighbours() {
	w := b.walker
	b.known, b.onHull = true, w.open
	b.near = b.near[:0]
	for i := range w.faces {
		q, n := w.faces[i].q, w.faces[i].n
		b.near = append(b.near, index.Neighbour{Point: w.g.cell[q], Dist2: dot(n, n)})
	}
	slices.SortFunc(b.near, func(a, c index.Neighbour) int {
		switch {
		case a.Dist2 < c.Dist2:
			return -1
		case a.Dist2 > c.Dist2:
			return 1
		}
		return int(a.Point - c.Point)
	})
}

// tallied are the measures that are read from the sums over the triangles.
const tallied = Volume | Area | WallArea | Clipped | Centroid | Farthest | NearestFace | Bounded

// measureGlobal fills one row as measure does: from the sums over the triangles where
// these are good, else, and for counts, from the faces.
func (b *builder) measureGlobal(cell int32, want Measures, out *Cells, row int32) error {
	if y := b.tallies; y != nil && y.good(b.walker.g.point[cell]) {
		p := b.walker.g.point[cell]
		at := add(b.d.tree.Point(cell), b.d.origin)
		if b.d.solid == nil || b.d.isBox || b.d.holdsBall(at, y.cells[p].far2) {
			y.fill(p, at, want, out, row)
			want &^= tallied
		}
	}
	if want == 0 {
		return nil
	}
	return b.measureFaces(cell, want, out, row)
}

// measureFaces fills one row from the faces of the cell.
func (b *builder) measureFaces(cell int32, want Measures, out *Cells, row int32) error {
	d, w := b.d, b.walker
	if want&Bounded != 0 {
		out.Bounded[row] = true
	}
	k := wants{moments: want&Centroid != 0, shape: want&Faces != 0}
	summed, bounded := b.take(cell, k)
	if want&NearestFace != 0 {
		out.NearestFace[row] = math.Sqrt(w.near2) / 2
		if d.stretched {
			out.NearestFace[row] = d.nearestFace(cell, b)
		}
	}
	at := d.place(cell)
	switch {
	case !bounded:
		measureUnbounded(&b.cell, want, out, row)
	case summed:
		w.sums.fill(at, want, out, row)
		if want&Faces != 0 && !out.Shaped[row] {
			b.shapeAnew(cell, out, row)
		}
	case d.solid == nil || d.convex:
		measureConvex(&b.cell, at, want, out, row)
	default:
		return b.measureClipped(at, want, out, row)
	}
	return nil
}

// shapeAnew counts faces, edges and vertices of a cell with artefacts of rounding on
// the polyhedron. The cell lies in the solid or is cut by a convex one.
func (b *builder) shapeAnew(cell int32, out *Cells, row int32) {
	p := b.d.tree.Point(cell)
	b.knowNeighbours()
	b.build(&b.cell, p, b.d.place(cell), cell)
	b.known = false
	shape(&b.cell, Faces, out, row)
}

// fill writes the measures of a bounded cell.
func (s *cellSums) fill(at Vec, want Measures, out *Cells, row int32) {
	if want&Volume != 0 {
		out.Volume[row] = s.volume()
	}
	if want&Centroid != 0 {
		if c, ok := s.centroid(); ok {
			out.Centroid[row], out.HasCentroid[row] = add(at, c), true
		}
	}
	if want&Farthest != 0 {
		out.Farthest[row] = math.Sqrt(s.far2)
	}
	if want&Faces != 0 {
		out.Faces[row], out.Edges[row], out.Vertices[row], out.Shaped[row] = s.shape()
	}
	if want&(Area|WallArea|Clipped|Neighbours) == 0 {
		return
	}
	contacts, walls, neighbours := 0.0, 0.0, int32(0)
	for i := range s.parts {
		switch p := &s.parts[i]; {
		case !s.counts(p):
		case p.isWall:
			walls += p.area
		default:
			contacts += p.area
			neighbours++
		}
	}
	if want&Area != 0 {
		out.Area[row] = contacts + walls
	}
	if want&WallArea != 0 {
		out.WallArea[row] = walls
	}
	if want&Clipped != 0 {
		out.Clipped[row] = walls > 0
	}
	if want&Neighbours != 0 {
		out.Neighbours[row] = neighbours
	}
}

// sharesGlobal is shares on the tetrahedralisation.
func (b *builder) sharesGlobal(cell int32) ([]share, error) {
	d, w := b.d, b.walker
	summed, bounded := b.take(cell, wants{moments: true, middles: true})
	at := d.place(cell)
	if !summed {
		return b.sharesOf(at, bounded)
	}
	b.list = b.list[:0]
	for i := range w.sums.parts {
		if p := &w.sums.parts[i]; !p.isWall && w.sums.counts(p) {
			b.list = append(b.list, share{w.g.cell[p.q], p.area, add(at, p.middle), 0})
		}
	}
	return b.list, nil
}

// Kept is how many bytes the tetrahedralisation takes that the diagram keeps; 0: none
// was built.
func (d *Diagram) Kept() int64 {
	d.building.Lock()
	defer d.building.Unlock()
	if d.whole == nil {
		return 0
	}
	return d.globalBytes()
}

// CostOfTetrahedra estimates what Tetrahedra takes.
func (d *Diagram) CostOfTetrahedra() Cost {
	n := d.tree.Len()
	return Cost{
		Seconds: (secondsPerBuild + float64(n)*secondsPerDual) / float64(max(1, d.threads)),
		Bytes:   d.globalBytes(),
		Cells:   n,
	}
}
