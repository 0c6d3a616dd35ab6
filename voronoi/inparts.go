package voronoi

import (
	"context"
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Cells can be measured in parts of the solid: all sites divide the solid, and of each
// cell counts what lies in a part. The finished cell is cut by the convex pieces of the
// part, and each of these is measured as a cell is; or, of a part without convex pieces,
// the cell is measured in what part and solid share (mesh.Region). The ends of a part are no walls:
// the surface of a cell inside a part is that of the cell, contacts and walls of the
// solid, as far as it lies in the part, so that all measures of parts that are apart add
// up to those of their union.
//
// A face of a cell that lies in the plane of a part counts to the part that is on the
// cell's side of it.

// PartMeasures is what is measured of a cell in one part. What was not asked for is 0.
type PartMeasures struct {
	Part        int32
	Neighbours  int32 // cells that it touches inside the part
	Faces       int32 // contacts and walls inside the part
	Clipped     bool  // a wall of the solid bounds it inside the part
	Volume      float64
	Area        float64 // of the cell's surface inside the part
	WallArea    float64
	Centroid    Vec
	Farthest    float64 // from the site
	NearestFace float64 // as of the whole cell
}

// MeasureIn measures what of the cells of the given sites (nil: all) lies in parts of the
// solid. Entry i of the answer belongs to the site i of those asked for: the parts that
// its cell reaches into with a volume, ascending. Parts may overlap one another. Those that
// are solid.Divided may reach out of the solid; of any other, what is given is the region
// of the solid that it is (mesh.NewRegion). A part may be nil, and is nowhere then. All measures but the counts of edges and vertices can be had. The
// rest is as in Measure.
func (d *Diagram) MeasureIn(ctx context.Context, want Measures, sites []int32, parts []solid.Solid) ([][]PartMeasures, error) {
	r, err := d.request(sites)
	if err != nil {
		return nil, err
	}
	want |= Volume
	g, err := d.choose(ctx, want, len(r.cells))
	if err != nil {
		return nil, err
	}
	if g != nil {
		g.list()
	}
	boxes := partBoxes(parts)
	out := make([][]PartMeasures, len(r.sites))
	err = d.forEach(ctx, len(r.cells), 0, len(r.cells), func(b *builder, k int) error {
		b.use(g, nil)
		list, err := b.measureIn(r.cells[k], want, parts, boxes)
		for _, row := range r.rows[r.start[k]:r.start[k+1]] {
			out[row] = list
		}
		return err
	})
	return out, err
}

// box is what holds a part.
type box struct{ lo, hi Vec }

func partBoxes(parts []solid.Solid) []box {
	boxes := make([]box, len(parts))
	for i, p := range parts {
		if p == nil {
			continue // an empty box
		}
		boxes[i].lo, boxes[i].hi = p.Bounds()
	}
	return boxes
}

// meets tells whether two boxes share more than their surfaces, one of them local to a
// place.
func (x box) meets(at, lo, hi Vec) bool {
	return x.lo.X-at.X < hi.X && lo.X < x.hi.X-at.X && x.lo.Y-at.Y < hi.Y && lo.Y < x.hi.Y-at.Y && x.lo.Z-at.Z < hi.Z && lo.Z < x.hi.Z-at.Z
}

// buildWhole makes b.full the finished cell, cut by a convex solid or by the bounding box
// of another.
func (b *builder) buildWhole(cell int32) {
	p := b.d.tree.Point(cell)
	if w := b.walker; w != nil {
		w.star(w.g.point[cell])
		b.knowNeighbours()
	}
	b.build(&b.full, p, b.d.place(cell), cell)
	b.known = false
}

// partLabel marks faces that a part ends at. It is that of a neighbour, since solids take
// the others for walls of theirs, and of one that no diagram has.
const partLabel int32 = math.MaxInt32

// eachPiece calls do for what of b.full lies in each convex piece of a part: b.cell, to be
// measured in b.space. A part without convex pieces is that space.
func (b *builder) eachPiece(of solid.Solid, at Vec, do func() error) error {
	part, divided := of.(solid.Divided)
	if !divided {
		b.region = of
		defer func() { b.region = nil }()
		b.aboutRegion(of, at)
		if b.cell.Empty() {
			return nil
		}
		return do()
	}
	lo, hi := b.full.Bounds()
	tol := flatShare * b.full.Farthest()
	for i := range part.NumParts() {
		var x box
		if x.lo, x.hi = part.PartBounds(i); !x.meets(at, lo, hi) {
			continue
		}
		b.cell.CopyFrom(&b.full)
		b.planes = part.PartPlanes(i, at, b.planes[:0])
		for _, p := range b.planes {
			if b.clipFlat(p, tol); b.cell.Empty() {
				break
			}
		}
		if b.cell.Empty() {
			continue
		}
		if err := do(); err != nil {
			return err
		}
	}
	return nil
}

// space is what cells in work are measured in; nil where they are cut by it already.
func (b *builder) space() solid.Solid {
	if b.region != nil {
		return b.region
	}
	if b.d.convex {
		return nil
	}
	return b.d.solid
}

// aboutRegion makes b.cell what b.full has of a box around a region, clear of its surface.
func (b *builder) aboutRegion(region solid.Solid, at Vec) {
	lo, hi := region.Bounds()
	margin := 0.0625 * length(sub(hi, lo))
	lo, hi = sub(lo, at), sub(hi, at)
	b.cell.CopyFrom(&b.full)
	for _, p := range [6]solid.Plane{
		{N: Vec{X: 1}, D: hi.X + margin}, {N: Vec{X: -1}, D: margin - lo.X}, {N: Vec{Y: 1}, D: hi.Y + margin},
		{N: Vec{Y: -1}, D: margin - lo.Y}, {N: Vec{Z: 1}, D: hi.Z + margin}, {N: Vec{Z: -1}, D: margin - lo.Z},
	} {
		if b.cell.Clip(p.N, p.D, slabLabel); b.cell.Empty() {
			return
		}
	}
}

// flatShare of a cell's reach is how far a corner may stand out of a plane by rounding. A
// face that lies in the plane of a part stays a face of the cell.
const flatShare = 4e-13

// clipFlat cuts b.cell by a plane of a part, unless all of it lies on one side but for
// rounding.
func (b *builder) clipFlat(p solid.Plane, tol float64) {
	most, least := math.Inf(-1), math.Inf(1)
	for _, v := range b.cell.Vertices() {
		s := dot(p.N, v) - p.D
		most, least = max(most, s), min(least, s)
	}
	switch {
	case most <= tol:
	case least >= -tol:
		b.cell.SetBox(Vec{}, Vec{}, [6]int32{})
	default:
		b.cell.Clip(p.N, p.D, partLabel)
	}
}

// measureIn measures one cell in the parts that it reaches into.
func (b *builder) measureIn(cell int32, want Measures, parts []solid.Solid, boxes []box) ([]PartMeasures, error) {
	b.buildWhole(cell)
	if b.full.Empty() {
		return nil, nil
	}
	at := b.d.place(cell)
	lo, hi := b.full.Bounds()
	var list []PartMeasures
	for i, part := range parts {
		if part == nil || !boxes[i].meets(at, lo, hi) {
			continue
		}
		m := PartMeasures{Part: int32(i)}
		var s partSums
		b.touched = b.touched[:0]
		if err := b.eachPiece(part, at, func() error { return b.addPiece(at, want, &m, &s) }); err != nil {
			return nil, err
		}
		if m.Volume = s.volume.Value(); !(m.Volume > 0) {
			continue
		}
		v := m.Volume
		m.Centroid = Vec{X: at.X + s.x.Value()/v, Y: at.Y + s.y.Value()/v, Z: at.Z + s.z.Value()/v}
		m.Neighbours = int32(len(b.touched))
		m.WallArea = s.walls.Value()
		m.Area = s.contacts.Value() + m.WallArea
		m.Clipped = m.WallArea > 0
		m.Faces += m.Neighbours
		if want&NearestFace != 0 {
			m.NearestFace = b.halfNearest(cell)
		}
		list = append(list, m)
	}
	return list, nil
}

// partSums are the sums over the pieces of a part.
type partSums struct{ volume, x, y, z, contacts, walls Sum }

// halfNearest is half the distance to the nearest other site.
func (b *builder) halfNearest(cell int32) float64 {
	d := b.d
	if d.stretched {
		return d.nearestFace(cell, b)
	}
	b.used.Reset()
	b.used.Add(cell)
	_, d2, _ := d.tree.NearestWithin(d.tree.Point(cell), math.Inf(1), b.used)
	return math.Sqrt(d2) / 2
}

// addPiece adds what the piece b.cell measures.
func (b *builder) addPiece(at Vec, want Measures, m *PartMeasures, s *partSums) error {
	c := &b.cell
	touch := func(label int32, area float64) {
		s.contacts.Add(area)
		for _, t := range b.touched {
			if t == label {
				return
			}
		}
		b.touched = append(b.touched, label)
	}
	first := func(v Vec, volume float64) {
		s.volume.Add(volume)
		s.x.Add(v.X)
		s.y.Add(v.Y)
		s.z.Add(v.Z)
	}
	space := b.space()
	if space == nil {
		volume, moment := c.VolumeAndFirst()
		first(moment, max(0, volume))
		m.Farthest = max(m.Farthest, c.Farthest())
		for i := range c.NumFaces() {
			label, _ := c.Face(i)
			switch {
			case label == partLabel || label == polyhedron.Open || !c.Counts(i):
			case label >= 0:
				touch(label, c.Area(i))
			default:
				s.walls.Add(c.Area(i))
				m.Faces++
			}
		}
		return nil
	}
	x := &b.measures
	if err := space.Measure(c, at, solidWant(want|Centroid), &b.work, x); err != nil {
		return err
	}
	if x.Empty {
		return nil
	}
	first(x.First, max(0, x.Volume))
	m.Farthest = max(m.Farthest, x.Farthest)
	if x.WallFaces > 0 {
		s.walls.Add(x.Walls)
		m.Faces += int32(x.WallFaces)
	}
	for i, a := range x.Contacts {
		if b.touches(i, a) {
			label, _ := c.Face(i)
			touch(label, a)
		}
	}
	return nil
}

// sharesIn lists the contacts of a cell inside each part, in a buffer that the next call
// overwrites. b.cell is the whole cell in the end.
func (b *builder) sharesIn(cell int32) ([]share, error) {
	b.buildWhole(cell)
	at := b.d.place(cell)
	b.inParts = b.inParts[:0]
	lo, hi := b.full.Bounds()
	for i, part := range b.parts.list {
		if part == nil || b.full.Empty() || !b.parts.boxes[i].meets(at, lo, hi) {
			continue
		}
		from := len(b.inParts)
		err := b.eachPiece(part, at, func() error {
			list, err := b.sharesOf(at, true)
			for _, s := range list {
				s.part = int32(i)
				b.inParts = addShare(b.inParts, from, s)
			}
			return err
		})
		if err != nil {
			return nil, err
		}
	}
	b.cell.CopyFrom(&b.full)
	return b.inParts, nil
}

// addShare adds a contact to those of one part, which begin at from: pieces of one
// contact are one.
func addShare(list []share, from int, s share) []share {
	for i := from; i < len(list); i++ {
		if k := &list[i]; k.other == s.other {
			area := k.area + s.area
			mean := func(a, b float64) float64 { return a + float64((b-a)*(s.area/area)) }
			k.middle = Vec{X: mean(k.middle.X, s.middle.X), Y: mean(k.middle.Y, s.middle.Y), Z: mean(k.middle.Z, s.middle.Z)}
			k.area = area
			return list
		}
	}
	return append(list, s)
}

// within is the parts that contacts are measured in.
type within struct {
	list  []solid.Solid
	boxes []box
}

// ContactsIn is Contacts with what of each contact lies in parts of the solid: Contact.Part
// is the number of the part. Contacts of one site come by the number of the other, then by
// part. A contact in the plane of a part counts to the part on the side of the site that
// it is read from, and to it for both sites.
func (d *Diagram) ContactsIn(ctx context.Context, sites []int32, parts []solid.Solid, yield func(site int32, contacts []Contact) error) error {
	return d.contacts(ctx, sites, &within{parts, partBoxes(parts)}, yield)
}
