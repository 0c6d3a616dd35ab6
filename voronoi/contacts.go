package voronoi

import (
	"cmp"
	"context"
	"math"
	"slices"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// share is what a cell knows about one of its contacts.
type share struct {
	other  int32 // cell
	area   float64
	middle Vec
	part   int32 // where contacts are measured in parts
}

// Contacts calls yield once for each of the given sites, in their order (nil: all
// sites in theirs), with the contacts of its cell by the number of the other site.
// The list is valid during the call only. Sites outside the solid have none, sites
// at the same place have the same.
//
// Whether two cells touch, where and how much is read from one of the two, the
// one that comes first in an order of their coordinates. So (a, b) and (b, a) agree
// to the last bit, and do not depend on which sites are asked for.
//
// It holds about 40 bytes for each contact that was asked for. An error of yield
// ends the calls and is returned.
func (d *Diagram) Contacts(ctx context.Context, sites []int32, yield func(site int32, contacts []Contact) error) error {
	return d.contacts(ctx, sites, nil, yield)
}

// contacts is Contacts, or ContactsIn where parts are given.
func (d *Diagram) contacts(ctx context.Context, sites []int32, parts *within, yield func(site int32, contacts []Contact) error) error {
	r, err := d.request(sites)
	if err != nil {
		return err
	}
	list, err := d.contactsOf(ctx, r.cells, parts)
	if err != nil {
		return err
	}
	var contacts []Contact
	for row, s := range r.sites {
		if row%256 == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		contacts = contacts[:0]
		if c := d.cell[s]; c >= 0 {
			k, _ := slices.BinarySearch(r.cells, c)
			contacts = d.describe(contacts, c, list[k])
		}
		if err := yield(s, contacts); err != nil {
			return err
		}
	}
	return nil
}

// describe turns the contacts of a cell into those of its site.
func (d *Diagram) describe(to []Contact, cell int32, from []share) []Contact {
	p := d.spot(cell)
	for _, s := range from {
		to = append(to, Contact{
			Other:    d.site[s.other],
			Area:     s.area,
			Distance: length(sub(d.spot(s.other), p)),
			Middle:   s.middle,
			Part:     s.part,
		})
	}
	slices.SortFunc(to, func(a, b Contact) int { return cmp.Or(cmp.Compare(a.Other, b.Other), cmp.Compare(a.Part, b.Part)) })
	return to
}

// contactsOf finds the contacts of the given cells (ascending). The first pass
// builds these cells and takes from each its contacts with later cells; what it
// says about earlier cells is only a hint to build those, in a second pass, if they
// were not asked for.
func (d *Diagram) contactsOf(ctx context.Context, cells []int32, parts *within) ([][]share, error) {
	later := make([][]share, len(cells))
	hints := make([][]int32, len(cells))
	g, err := d.choose(ctx, Neighbours, len(cells))
	if err != nil {
		return nil, err
	}
	if g != nil {
		g.list()
	}
	err = d.forEach(ctx, len(cells), 0, len(cells), func(b *builder, k int) error {
		b.use(g, nil)
		b.parts = parts
		all, err := b.shares(cells[k])
		if err != nil {
			return err
		}
		later[k] = keep(all, func(s share) bool { return s.other > cells[k] })
		b.eachNeighbour(func(label int32) {
			if label >= 0 && label < cells[k] {
				if _, asked := slices.BinarySearch(cells, label); !asked {
					hints[k] = append(hints[k], label)
				}
			}
		})
		return nil
	})
	if err != nil {
		return nil, err
	}
	earlier := slices.Concat(hints...)
	slices.Sort(earlier)
	earlier = slices.Compact(earlier)
	fromEarlier := make([][]share, len(earlier))
	err = d.forEach(ctx, len(earlier), len(cells), len(cells)+len(earlier), func(b *builder, k int) error {
		b.use(g, nil)
		b.parts = parts
		all, err := b.shares(earlier[k])
		if err != nil {
			return err
		}
		fromEarlier[k] = keep(all, func(s share) bool {
			_, asked := slices.BinarySearch(cells, s.other)
			return asked && s.other > earlier[k]
		})
		return nil
	})
	if err != nil {
		return nil, err
	}
	return merge(cells, later, earlier, fromEarlier), nil
}

// eachNeighbour calls do for the labels of the faces of the cell that shares built, or
// more: for all cells that can touch it.
func (b *builder) eachNeighbour(do func(label int32)) {
	if w := b.walker; w != nil {
		for i := range w.faces {
			do(w.g.cell[w.faces[i].q])
		}
		return
	}
	for i := range b.cell.NumFaces() {
		label, _ := b.cell.Face(i)
		do(label)
	}
}

// keep copies the shares that pass.
func keep(all []share, pass func(share) bool) []share {
	n := 0
	for _, s := range all {
		if pass(s) {
			n++
		}
	}
	kept := make([]share, 0, n)
	for _, s := range all {
		if pass(s) {
			kept = append(kept, s)
		}
	}
	return kept
}

// merge gives each contact to both of its cells.
func merge(cells []int32, later [][]share, earlier []int32, fromEarlier [][]share) [][]share {
	count := make([]int, len(cells))
	visit := func(do func(k int, s share)) {
		give := func(owner int32, s share) {
			if k, asked := slices.BinarySearch(cells, s.other); asked {
				do(k, share{owner, s.area, s.middle, s.part})
			}
		}
		for k, shares := range later {
			for _, s := range shares {
				do(k, s)
				give(cells[k], s)
			}
		}
		for k, shares := range fromEarlier {
			for _, s := range shares {
				give(earlier[k], s)
			}
		}
	}
	total := 0
	visit(func(k int, _ share) { count[k]++; total++ })
	room := make([]share, total)
	out := make([][]share, len(cells))
	for k, n := range count {
		out[k], room = room[:0:n], room[n:]
	}
	visit(func(k int, s share) { out[k] = append(out[k], s) })
	return out
}

// shares builds a cell and lists its contacts, one for each neighbour, in a buffer
// that the next call overwrites.
func (b *builder) shares(cell int32) ([]share, error) {
	if b.parts != nil {
		return b.sharesIn(cell)
	}
	if b.walker != nil {
		return b.sharesGlobal(cell)
	}
	d := b.d
	p := d.tree.Point(cell)
	at := d.place(cell)
	return b.sharesOf(at, b.build(&b.cell, p, at, cell))
}

// sharesOf lists the contacts of b.cell, as far as they lie in b.space.
func (b *builder) sharesOf(at Vec, bounded bool) ([]share, error) {
	b.list = b.list[:0]
	space := b.space()
	if space == nil {
		for i := range b.cell.NumFaces() {
			if label, _ := b.cell.Face(i); label >= 0 && label != partLabel && b.cell.Counts(i) {
				b.list = append(b.list, b.wholeFace(i, label, at, bounded))
			}
		}
		return b.list, nil
	}
	m := &b.measures
	if err := space.Measure(&b.cell, at, solid.WantContacts, &b.work, m); err != nil {
		return nil, err
	}
	if m.Empty {
		return b.list, nil
	}
	b.inside = append(b.inside[:0], m.Contacts...) // clippedMiddle measures again
	for i, area := range b.inside {
		if !b.touches(i, area) {
			continue
		}
		label, _ := b.cell.Face(i)
		whole := b.cell.Area(i)
		s := b.wholeFace(i, label, at, true)
		if math.Abs(area-whole) > 1e-12*whole {
			s.area = area
			middle, err := b.clippedMiddle(i, at, area, s.middle)
			if err != nil {
				return nil, err
			}
			s.middle = middle
		}
		b.list = append(b.list, s)
	}
	return b.list, nil
}

// wholeFace is the contact through face i.
func (b *builder) wholeFace(i int, other int32, at Vec, bounded bool) share {
	if !bounded && b.cell.Reaches(i) {
		n, _ := b.cell.FacePlane(i)
		if b.d.stretched { // the plane does not stand upright on the line between the sites
			n = sub(b.d.place(other), at)
		}
		half := Vec{X: n.X / 2, Y: n.Y / 2, Z: n.Z / 2}
		return share{other, math.Inf(1), add(at, half), 0}
	}
	area, middle := b.cell.FaceMiddle(i)
	return share{other, area, add(at, middle), 0}
}

// slabLabel marks the face that splits a slab off: a wall that no solid has.
var slabLabel = polyhedron.Wall(1 << 30)

// clippedMiddle is the centroid of the part of face i inside the solid, whose area
// is given; whole is the centroid of the whole face. It is read from the first
// moments of thin slabs along the face: their centroids, moved into the face's
// plane, lie within the thickness of the one sought, and slabs of two thicknesses
// cancel that first order. What is left is about 1e-8 of the cell's size.
//
// A face can lie partly in a wall, with the solid on one side only. A contact needs
// it on both: the slabs stand on the side where they have the contact's area. A region has
// contacts at its end on the side of the cell alone: there, what walls have of the face is
// taken out.
func (b *builder) clippedMiddle(i int, at Vec, area float64, whole Vec) (Vec, error) {
	inner, innerArea, err := b.slabMiddle(i, at, false)
	if err != nil {
		return Vec{}, err
	}
	outer, outerArea, err := b.slabMiddle(i, at, true)
	if err != nil {
		return Vec{}, err
	}
	if r, ok := b.region.(faceWalls); ok {
		if walls, moment := r.FaceWalls(&b.cell, at, i, &b.work); walls > 1e-9*innerArea {
			rest := innerArea - walls
			if rest > 0 && math.Abs(rest-area) < math.Abs(outerArea-area) && math.Abs(rest-area) < math.Abs(innerArea-area) {
				middle := func(x, m float64) float64 { return (float64(x*innerArea) - m) / rest }
				return add(at, Vec{X: middle(inner.X, moment.X), Y: middle(inner.Y, moment.Y), Z: middle(inner.Z, moment.Z)}), nil
			}
		}
	}
	if math.Abs(innerArea-area) > math.Abs(outerArea-area) {
		inner, innerArea = outer, outerArea
	}
	if innerArea <= 0 {
		return whole, nil // thinner than rounding: the face is a sliver
	}
	return add(at, inner), nil
}

// faceWalls is a region that knows what walls have of a face of a cell.
type faceWalls interface {
	FaceWalls(c *polyhedron.Cell, site Vec, face int, w *solid.Work) (area float64, moment Vec)
}

// slabMiddle is the centroid and the area of what the solid leaves of face i, seen
// from one of its sides, in local coordinates.
func (b *builder) slabMiddle(i int, at Vec, beyond bool) (middle Vec, area float64, err error) {
	n, dist := b.cell.FacePlane(i)
	size := length(n)
	unit := Vec{X: n.X / size, Y: n.Y / size, Z: n.Z / size}
	level := dist / size
	thickness := 1e-5 * b.cell.Farthest()
	var middles [2]Vec
	var areas [2]float64
	for k := range middles {
		t := thickness * float64(k+1)
		b.slab.CopyFrom(&b.cell)
		b.slab.Clip(Vec{X: -unit.X, Y: -unit.Y, Z: -unit.Z}, t-level, slabLabel)
		place := at
		if beyond {
			place = add(at, Vec{X: float64(t * unit.X), Y: float64(t * unit.Y), Z: float64(t * unit.Z)})
		}
		m := &b.slabOut
		if err := b.space().Measure(&b.slab, place, solid.WantCentroid, &b.work, m); err != nil {
			return Vec{}, 0, err
		}
		if !(m.Volume > 0) {
			return Vec{}, 0, nil
		}
		c := Vec{X: m.First.X / m.Volume, Y: m.First.Y / m.Volume, Z: m.First.Z / m.Volume}
		off := level - dot(unit, c)
		middles[k] = Vec{X: c.X + float64(off*unit.X), Y: c.Y + float64(off*unit.Y), Z: c.Z + float64(off*unit.Z)}
		areas[k] = m.Volume / t
	}
	a, c := middles[0], middles[1]
	return Vec{X: 2*a.X - c.X, Y: 2*a.Y - c.Y, Z: 2*a.Z - c.Z}, 2*areas[0] - areas[1], nil
}
