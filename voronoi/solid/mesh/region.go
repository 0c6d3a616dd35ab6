package mesh

import (
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Region is the space that a part shares with a solid. Cells of the solid are measured in
// it: its walls are those of the solid, as far as they bound it. The rest of its surface,
// where the part ends in the middle of the solid, is seams: no walls. A face of a cell in
// the plane of a seam is a contact of the cell that has the region on its side.
//
// All of its surface bounds places, as that of any mesh does: [Region.WallsIn],
// [Region.SectorsAt], [Region.WallsAt] and [Region.Corners] know no difference.
type Region struct{ *Mesh }

// NewRegion makes the region of a part in a solid; nil is all of space. Where the two share
// nothing, the error is an *[Error] with the fault NothingLeft.
func NewRegion(body, part solid.Solid) (*Region, error) {
	all := &assembly{}
	of, bounds := (*expression)(nil), &expression{leaf: -1, op: Minus}
	if body != nil {
		e, err := all.take(body)
		if err != nil {
			return nil, err
		}
		of, bounds = e, e
	}
	e, err := all.take(part)
	if err != nil {
		return nil, err
	}
	if of == nil {
		of, bounds.a, bounds.b = e, e, e // of nothing
	} else {
		of = &expression{leaf: -1, op: Both, a: of, b: e}
	}
	m, err := combine(all.leaves, of, bounds, "region", 0)
	if err != nil {
		return nil, err
	}
	return &Region{m}, nil
}

// isSeam tells whether a triangle is no wall but the end of a region.
func (m *Mesh) isSeam(t int32) bool { return m.seam != nil && m.seam[t] }

var _ solid.Faceted = (*Region)(nil)

// FaceWalls is the area, and the first moment about the site, of the walls that lie in the
// plane of a face of the cell and have the region on the cell's side.
func (r *Region) FaceWalls(c *polyhedron.Cell, site Vec, face int, scratch *solid.Work) (area float64, moment Vec) {
	w := workOf(scratch)
	w.m, w.c, w.site, w.want = r.Mesh, c, site, solid.WantWalls
	w.open()
	w.findTouches()
	var a, x, y, z sum
	for _, h := range w.touches {
		if h.flush != int32(face) || r.isSeam(h.t) || dot(w.faces[face].n, r.n[h.t]) < 0 {
			continue
		}
		w.poly.Set(w.local(h.t))
		if w.clipped(h.flush) == 0 {
			continue
		}
		p := w.poly.Corner(0)
		for k := 2; k < w.poly.Len(); k++ {
			q, s := w.poly.Corner(k-1), w.poly.Corner(k)
			part := length(cross(sub(q, p), sub(s, p))) / 2
			middle := scale(1.0/3, add(p, add(q, s)))
			a.add(part)
			x.add(part * middle.X)
			y.add(part * middle.Y)
			z.add(part * middle.Z)
		}
	}
	return a.value(), Vec{X: x.value(), Y: y.value(), Z: z.value()}
}
