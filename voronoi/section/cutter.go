package section

import (
	"math"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
)

// cutter cuts one cell after the other. It is the scratch of one goroutine.
type cutter struct {
	*job
	cell  polyhedron.Cell
	found []Piece

	polygon []Vec2
	open    bool
	pieces  [][]Vec2 // the polygon in the solid
	sides   []seen   // from where each of them is seen
	scratch [2][]Vec2
	clipped [2][]Vec2
}

// seen tells from which side of the plane a piece is seen.
type seen int8

const (
	through seen = iota // it goes through: either
	above
	below
)

// cutLabel marks the face in the plane. No diagram has so many sites.
const cutLabel int32 = math.MaxInt32

// cut adds what the plane cuts out of the cell of a site.
func (k *cutter) cut(site int32) error {
	p := k.d.Place(site)
	if err := k.d.Insert(p, &k.cell); err != nil || k.cell.Empty() {
		return err
	}
	from := sub(p, k.frame.foot)
	height := dot(k.frame.n, from)
	least, most := math.Inf(1), math.Inf(-1)
	for _, v := range k.cell.Vertices() {
		h := height + dot(k.frame.n, v)
		least, most = min(least, h), max(most, h)
	}
	if least > k.tol || most < -k.tol {
		return nil
	}
	k.open = false
	side, face := k.faceInPlane(p, height, most)
	if face < 0 {
		if least >= -k.tol || most <= k.tol {
			return nil // it is only touched
		}
		k.cell.Clip(k.frame.n, -height, cutLabel)
		if face = k.cutFace(); face < 0 {
			return nil
		}
	}
	k.project(face, from, side)
	k.inSolid(side)
	k.count(site)
	return nil
}

// cutFace is the face that the plane has made: the largest, the others are crumbs.
func (k *cutter) cutFace() int {
	best, most := -1, 0.0
	for i := range k.cell.NumFaces() {
		if label, _ := k.cell.Face(i); label == cutLabel {
			if a := k.cell.Area(i); a > most {
				best, most = i, a
			}
		}
	}
	return best
}

// faceInPlane finds a face of the cell that lies in the plane, -1 without one, and the
// side of the plane that the cell is on. A face between two cells is judged from their
// sites, so that both judge alike.
func (k *cutter) faceInPlane(p Vec, height, most float64) (seen, int) {
	for i := range k.cell.NumFaces() {
		label, loop := k.cell.Face(i)
		if label == polyhedron.Open || !k.cell.Counts(i) {
			continue
		}
		if label >= 0 {
			if !k.bisects(p, k.d.Place(label)) {
				continue
			}
			k.inFaces.Store(true)
			if height > 0 {
				return above, i
			}
			return below, i
		}
		flat := true
		for _, v := range loop {
			flat = flat && math.Abs(height+dot(k.frame.n, k.cell.Vertex(int(v)))) <= k.tol
		}
		if flat {
			if most > k.tol {
				return above, i
			}
			return below, i
		}
	}
	return through, -1
}

// parallel is the sine below which a face is parallel to the plane.
const parallel = 1e-11

// bisects tells whether the plane is the one between two sites. It is the same for both orders.
func (k *cutter) bisects(a, b Vec) bool {
	s := k.d.Stretch()
	n := sub(b, a)
	n = Vec{X: float64(n.X * float64(s.X*s.X)), Y: float64(n.Y * float64(s.Y*s.Y)), Z: float64(n.Z * float64(s.Z*s.Z))}
	middle := scale(0.5, add(sub(a, k.frame.foot), sub(b, k.frame.foot)))
	return length(cross(n, k.frame.n)) <= parallel*length(n) && math.Abs(dot(k.frame.n, middle)) <= k.tol
}

// project makes the polygon of a face, counter-clockwise seen from above.
func (k *cutter) project(face int, from Vec, side seen) {
	_, loop := k.cell.Face(face)
	k.polygon = k.polygon[:0]
	for _, v := range loop {
		k.polygon = append(k.polygon, k.frame.flat(add(from, k.cell.Vertex(int(v)))))
	}
	if area(k.polygon) < 0 {
		slices.Reverse(k.polygon)
	}
	for i := range k.cell.NumFaces() {
		label, others := k.cell.Face(i)
		if label != polyhedron.Open {
			continue
		}
		n, d := k.cell.FacePlane(i)
		for _, v := range loop {
			if math.Abs(dot(n, k.cell.Vertex(int(v)))-d) <= 1e-9*math.Abs(d) || slices.Contains(others, v) {
				k.open = true
			}
		}
	}
}

// inSolid cuts the polygon by the solid.
func (k *cutter) inSolid(side seen) {
	k.pieces, k.sides = k.pieces[:0], k.sides[:0]
	take := func(p []Vec2, s seen) {
		if len(p) >= 3 && area(p) > 0 {
			k.pieces, k.sides = append(k.pieces, slices.Clone(p)), append(k.sides, s)
		}
	}
	if k.convex {
		// A face between two cells counts to the one above; only walls are left below.
		if side == below && !k.atWall() {
			return
		}
		take(k.polygon, side)
		return
	}
	if side != below {
		for i := range k.space.above {
			take(k.space.above[i].clip(k.polygon, &k.scratch), above)
		}
	}
	if side != above {
		for i := range k.space.only {
			take(k.space.only[i].clip(k.polygon, &k.scratch), below)
		}
	}
}

// atWall tells whether the plane lies in a wall that ends the convex solid above.
func (k *cutter) atWall() bool { return k.space != nil && len(k.space.only) > 0 }

// count adds the pieces, in each part or in the whole.
func (k *cutter) count(site int32) {
	if len(k.parts) == 0 {
		k.add(site, -1, k.pieces)
		return
	}
	k.open = false
	for i, part := range k.parts {
		var in [][]Vec2
		for n, p := range k.pieces {
			list := part.above
			if k.sides[n] == below {
				list = part.below
			}
			for t := range list {
				if c := list[t].clip(p, &k.clipped); len(c) >= 3 && area(c) > 0 {
					in = append(in, slices.Clone(c))
				}
			}
		}
		k.add(site, int32(i), in)
	}
}

func (k *cutter) add(site, part int32, pieces [][]Vec2) {
	if len(pieces) == 0 {
		return
	}
	p := Piece{Site: site, Part: part}
	if k.open {
		p.Open, p.Area = true, math.Inf(1)
		k.found = append(k.found, p)
		return
	}
	var sum voronoi.Sum
	for _, c := range pieces {
		sum.Add(area(c))
	}
	if p.Area = sum.Value(); !(p.Area > 0) {
		return
	}
	if k.wanted {
		p.Polygons = k.raise(outline(pieces, weldWithin*k.size))
	}
	k.found = append(k.found, p)
}
