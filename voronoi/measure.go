package voronoi

import (
	"context"
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Measure computes the wanted measures of the cells of the given sites; nil
// means all sites. Only what is wanted is computed, cell by cell, and the results
// have the same bits for any number of threads and any order of the sites.
//
// It fails with *NoSuchSiteError, an error of the solid, or the
// error of ctx, which is looked at every 64 cells.
func (d *Diagram) Measure(ctx context.Context, want Measures, sites []int32) (*Cells, error) {
	r, err := d.request(sites)
	if err != nil {
		return nil, err
	}
	out := d.blank(want, r)
	g, err := d.choose(ctx, want, len(r.cells))
	if err != nil {
		return nil, err
	}
	return out, d.fill(ctx, g, r, want, out)
}

// fill measures the cells of a request, with g or one by one.
func (d *Diagram) fill(ctx context.Context, g *dual, r *request, want Measures, out *Cells) (err error) {
	var y *tallies
	n := len(r.cells)
	tell := d.telling(n, 0, n)
	if g != nil && want&tallied != 0 && !d.stretched {
		if y, err = g.tally(ctx, want, d.tallyThreads(), d.telling(n, 0, n-n/restOfSums)); err != nil {
			return err
		}
		tell = d.telling(n, n-n/restOfSums, n)
	}
	if g != nil && (want&^tallied != 0 || d.stretched) {
		g.list()
	}
	return d.forEachTold(ctx, n, tell, func(b *builder, k int) error {
		b.use(g, y)
		rows := r.rows[r.start[k]:r.start[k+1]]
		if err := b.measure(r.cells[k], want, out, rows[0]); err != nil {
			return err
		}
		for _, row := range rows[1:] {
			out.copyRow(row, rows[0])
		}
		return nil
	})
}

// restOfSums: when the sums over the triangles are there, an eighth of the work is left.
const restOfSums = 8

// telling returns what tells of a part of the work on n cells: as done of its steps are
// done, cells from to upto-1 are said to be. It is nil where nobody wants to know.
func (d *Diagram) telling(n, from, upto int) func(done, steps int) {
	if d.progress == nil {
		return nil
	}
	return func(done, steps int) {
		d.progress(from+int(int64(upto-from)*int64(done)/int64(max(1, steps))), n)
	}
}

// blank is the answer to a request before anything of it is measured.
func (d *Diagram) blank(want Measures, r *request) *Cells {
	out := newCells(want, r.sites)
	for row, s := range r.sites {
		if c := d.cell[s]; c >= 0 {
			out.Inside[row] = true
			out.Multiplicity[row] = d.count[c]
		}
	}
	return out
}

func newCells(want Measures, sites []int32) *Cells {
	n := len(sites)
	c := &Cells{Sites: sites, Inside: make([]bool, n), Multiplicity: make([]int32, n)}
	number := func(to *[]float64, m Measures) {
		if want&m != 0 {
			*to = make([]float64, n)
		}
	}
	number(&c.Volume, Volume)
	number(&c.Area, Area)
	number(&c.WallArea, WallArea)
	number(&c.Farthest, Farthest)
	number(&c.NearestFace, NearestFace)
	if want&Faces != 0 {
		c.Faces, c.Edges, c.Vertices = make([]int32, n), make([]int32, n), make([]int32, n)
		c.Shaped = make([]bool, n)
	}
	if want&Neighbours != 0 {
		c.Neighbours = make([]int32, n)
	}
	if want&Bounded != 0 {
		c.Bounded = make([]bool, n)
	}
	if want&Clipped != 0 {
		c.Clipped = make([]bool, n)
	}
	if want&Centroid != 0 {
		c.Centroid, c.HasCentroid = make([]Vec, n), make([]bool, n)
	}
	return c
}

// copyRow gives row to all that row from has.
func (c *Cells) copyRow(to, from int32) {
	again(c.Volume, to, from)
	again(c.Area, to, from)
	again(c.WallArea, to, from)
	again(c.Farthest, to, from)
	again(c.NearestFace, to, from)
	again(c.Faces, to, from)
	again(c.Edges, to, from)
	again(c.Vertices, to, from)
	again(c.Shaped, to, from)
	again(c.Neighbours, to, from)
	again(c.Bounded, to, from)
	again(c.Clipped, to, from)
	again(c.Centroid, to, from)
	again(c.HasCentroid, to, from)
}

func again[T any](column []T, to, from int32) {
	if column != nil {
		column[to] = column[from]
	}
}

// needsCell are the measures that cannot be had without building the cell.
func (d *Diagram) needsCell(want Measures) bool {
	if d.solid != nil {
		return want&^(NearestFace|Bounded) != 0
	}
	return want&^(NearestFace|Clipped|WallArea) != 0
}

// measure fills one row with the measures of one cell.
func (b *builder) measure(cell int32, want Measures, out *Cells, row int32) error {
	if b.walker != nil {
		return b.measureGlobal(cell, want, out, row)
	}
	d := b.d
	p := d.tree.Point(cell)
	if want&NearestFace != 0 {
		if d.stretched {
			out.NearestFace[row] = d.nearestFace(cell, b)
		} else {
			b.used.Reset()
			b.used.Add(cell)
			_, d2, _ := d.tree.NearestWithin(p, math.Inf(1), b.used)
			out.NearestFace[row] = math.Sqrt(d2) / 2
		}
	}
	if want&Bounded != 0 {
		out.Bounded[row] = true // until the cell proves otherwise
	}
	if !d.needsCell(want) {
		return nil
	}
	at := d.place(cell)
	bounded := b.build(&b.cell, p, at, cell)
	switch {
	case !bounded:
		measureUnbounded(&b.cell, want, out, row)
	case d.solid == nil || d.convex:
		measureConvex(&b.cell, at, want, out, row)
	default:
		return b.measureClipped(at, want, out, row)
	}
	return nil
}

// measureUnbounded: what is finite stays finite.
func measureUnbounded(c *polyhedron.Cell, want Measures, out *Cells, row int32) {
	inf := math.Inf(1)
	if want&Bounded != 0 {
		out.Bounded[row] = false
	}
	if want&Volume != 0 {
		out.Volume[row] = inf
	}
	if want&Area != 0 {
		out.Area[row] = inf
	}
	if want&Farthest != 0 {
		out.Farthest[row] = inf
	}
	shape(c, want, out, row)
}

// shape fills the counts from a convex cell.
func shape(c *polyhedron.Cell, want Measures, out *Cells, row int32) {
	if want&Faces != 0 {
		s := c.Shape()
		out.Faces[row], out.Edges[row], out.Vertices[row] = int32(s.Faces()), int32(s.Edges), int32(s.Vertices)
		out.Shaped[row] = true
	}
	if want&Neighbours != 0 {
		n := int32(0)
		for i := range c.NumFaces() {
			if label, _ := c.Face(i); label >= 0 && c.Counts(i) {
				n++
			}
		}
		out.Neighbours[row] = n
	}
}

// measureConvex reads all measures from the finished polyhedron.
func measureConvex(c *polyhedron.Cell, at Vec, want Measures, out *Cells, row int32) {
	shape(c, want, out, row)
	if want&Centroid != 0 {
		volume, first := c.VolumeAndFirst()
		if volume > 0 {
			out.Centroid[row] = Vec{X: at.X + first.X/volume, Y: at.Y + first.Y/volume, Z: at.Z + first.Z/volume}
			out.HasCentroid[row] = true
		}
	}
	if want&Volume != 0 {
		out.Volume[row] = max(0, c.Volume())
	}
	if want&Farthest != 0 {
		out.Farthest[row] = c.Farthest()
	}
	if want&(Area|WallArea|Clipped) == 0 {
		return
	}
	contacts, walls := 0.0, 0.0
	for i := range c.NumFaces() {
		if !c.Counts(i) {
			continue
		}
		if label, _ := c.Face(i); label >= 0 {
			contacts += c.Area(i)
		} else {
			walls += c.Area(i)
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
}

// solidWant translates the measures for a solid that is not convex.
func solidWant(want Measures) solid.Want {
	var w solid.Want
	for _, pair := range [...]struct {
		m Measures
		w solid.Want
	}{
		{Volume, solid.WantVolume},
		{Centroid, solid.WantCentroid},
		{Area, solid.WantContacts | solid.WantWalls},
		{Faces, solid.WantContacts | solid.WantWalls | solid.WantShape},
		{Neighbours, solid.WantContacts},
		{Clipped, solid.WantShape},
		{WallArea, solid.WantWalls},
		{Farthest, solid.WantFarthest},
	} {
		if want&pair.m != 0 {
			w |= pair.w
		}
	}
	return w
}

// measureClipped lets a solid that is not convex measure its part of the cell.
func (b *builder) measureClipped(at Vec, want Measures, out *Cells, row int32) error {
	m := &b.measures
	if err := b.d.solid.Measure(&b.cell, at, solidWant(want), &b.work, m); err != nil {
		return err
	}
	if m.Empty {
		if want&Faces != 0 {
			out.Shaped[row] = true
		}
		return nil
	}
	if m.WallFaces == 0 {
		m.Walls = 0 // what is left is rounding
	}
	contacts, touching := 0.0, int32(0)
	if want&(Area|Faces|Neighbours) != 0 {
		contacts, touching = b.contactsInside(m)
	}
	if want&Volume != 0 {
		out.Volume[row] = max(0, m.Volume)
	}
	if want&Centroid != 0 && m.Volume > 0 {
		v := m.Volume
		out.Centroid[row] = Vec{X: at.X + m.First.X/v, Y: at.Y + m.First.Y/v, Z: at.Z + m.First.Z/v}
		out.HasCentroid[row] = true
	}
	if want&Area != 0 {
		out.Area[row] = contacts + m.Walls
	}
	if want&WallArea != 0 {
		out.WallArea[row] = m.Walls
	}
	if want&Clipped != 0 {
		out.Clipped[row] = m.Clipped
	}
	if want&Farthest != 0 {
		out.Farthest[row] = m.Farthest
	}
	if want&Neighbours != 0 {
		out.Neighbours[row] = touching
	}
	if want&Faces != 0 {
		out.Faces[row] = touching + int32(m.WallFaces)
		if m.Shape != nil {
			s := m.Shape.Shape()
			out.Edges[row], out.Vertices[row] = int32(s.Edges), int32(s.Vertices)
			out.Shaped[row] = true
		}
	}
	return nil
}

// contactsInside is the area of the contacts of b.cell inside the solid and their
// number.
func (b *builder) contactsInside(m *solid.Measures) (area float64, n int32) {
	for i, a := range m.Contacts {
		if b.touches(i, a) {
			area += a
			n++
		}
	}
	return area, n
}

// touches tells whether face i of b.cell, with area a of it inside the solid, is a
// contact: the face is no artefact of rounding, nor is its part inside.
func (b *builder) touches(i int, a float64) bool {
	label, _ := b.cell.Face(i)
	return label >= 0 && label != partLabel && b.cell.Counts(i) && a > crumbShare*b.cell.Surface()
}

// crumbShare of a cell's surface: smaller contacts are none.
const crumbShare = 1e-12
