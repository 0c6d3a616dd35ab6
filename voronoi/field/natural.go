package field

import (
	"cmp"
	"context"
	"math"
	"slices"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// neighbour is a site whose cell the cell of the place touches.
type neighbour struct {
	site int32
	at   Vec     // seen from the place
	area float64 // of the face, in the solid
	rank int32   // in the zone; -1: not known
}

// byZone finds the coordinates by the tetrahedra that p would change, which is far
// quicker; ok is false where these do not tell, or where the cell leaves the solid. They
// may still tell which neighbours touch: then w.tied is set.
func (f *Field) byZone(p Vec, near int32, w *Work) (place Place, ok bool) {
	w.tied = false
	if !f.ready {
		return Between, false
	}
	z := &w.zone
	switch z.find(f.t, f.d.Local(p), f.own[near]) {
	case zoneNone:
		return Between, false
	case zoneWhole:
		if z.inSolid(f, p) && z.parts() {
			z.weigh(f.o.Method, f.site, w)
			return Between, true
		}
	}
	z.link()
	w.tied = true
	return Between, false
}

// natural finds natural neighbour coordinates (Sibson 1980, 1981; Belikov et al. 1997):
// those of the place p, or with self >= 0 those of the place of this site among the
// others.
func (f *Field) natural(ctx context.Context, p Vec, self int32, w *Work) (Place, []Weight, error) {
	if err := f.d.Insert(p, &w.cell); err != nil {
		return Between, nil, err
	}
	if w.cell.Empty() {
		return OutsideSolid, nil, nil
	}
	if f.body == nil && w.cell.IsOpen() {
		return f.onRim(ctx, p, self, w)
	}
	whole := f.convex || f.body.Distance(p) > w.cell.Farthest()*(1+1e-12) && f.body.Side(p, 0) == solid.Inside
	if err := f.meet(p, whole, w); err != nil {
		return Between, nil, err
	}
	w.metric = f.metric
	return f.weigh(p, whole, w)
}

// plain is the metric of distances that are not stretched.
var plain = Vec{X: 1, Y: 1, Z: 1}

// times multiplies by a metric.
func times(m, a Vec) Vec {
	return Vec{X: float64(m.X * a.X), Y: float64(m.Y * a.Y), Z: float64(m.Z * a.Z)}
}

// weigh turns the neighbours of w.cell into weights.
func (f *Field) weigh(p Vec, whole bool, w *Work) (Place, []Weight, error) {
	if f.o.Method == Laplace {
		w.byArea()
	} else if err := f.byVolume(p, whole, w); err != nil {
		return Between, nil, err
	}
	if len(w.weights) == 0 {
		if len(w.around) == 0 {
			return Alone, nil, nil
		}
		// Nothing of the cell has a volume: p lies on a corner of the solid to
		// within rounding. The nearest site has what there is.
		s, _ := f.d.Nearest(p)
		w.weights = append(w.weights, Weight{s, 1})
	}
	return Between, w.finish(), nil
}

// meet lists the neighbours of w.cell: the sites behind its faces, once each.
func (f *Field) meet(p Vec, whole bool, w *Work) error {
	w.around = w.around[:0]
	c := &w.cell
	var inside []float64
	if !whole {
		if err := f.body.Measure(c, p, solid.WantContacts, &w.solid, &w.measures); err != nil {
			return err
		}
		inside = w.measures.Contacts
	}
	least := crumbShare * c.Surface()
	for i := range c.NumFaces() {
		label, _ := c.Face(i)
		if label < 0 || !c.Counts(i) {
			continue
		}
		area := c.Area(i)
		if inside != nil {
			area = inside[i]
			if !(area > least) && f.o.Method == Laplace {
				continue // its face lies outside the solid
			}
		}
		k := slices.IndexFunc(w.around, func(n neighbour) bool { return n.site == label })
		if k >= 0 { // rounding left several faces in one plane: but for one they are crumbs
			w.around[k].area += area
			continue
		}
		rank := int32(-1)
		if w.tied {
			rank = w.zone.rankOf(f.own[label])
		}
		w.around = append(w.around, neighbour{label, f.offset(label, p), area, rank})
	}
	return nil
}

// crumbShare of a cell's surface: smaller contacts are none.
const crumbShare = 1e-12

// offset is the place of a site seen from p.
func (f *Field) offset(site int32, p Vec) Vec {
	return sub(sub(f.d.Place(site), f.facts.Origin), sub(p, f.facts.Origin))
}

// byArea weighs by area over distance, both as stretched as distances are. With the
// factors S a face towards a neighbour at n, which stands upright on S²n, has its area
// times det S |Sn|/|S²n|, and |Sn| is the distance.
func (w *Work) byArea() {
	for _, n := range w.around {
		w.weights = append(w.weights, Weight{n.site, n.area / length(times(w.metric, n.at))})
	}
}

// byVolume weighs by what the cell takes from each neighbour: the part of it that is
// nearer to this one than to the others, cut out of the cell itself. Each part is a sum
// of positive terms; a difference of two volumes would have no digits left where the
// part is small.
func (f *Field) byVolume(p Vec, whole bool, w *Work) error {
	if len(w.around) == 1 {
		w.weights = append(w.weights, Weight{w.around[0].site, 1})
		return nil
	}
	for j := range w.around {
		if w.cutPart(j) == polyhedron.Empty {
			continue
		}
		v := 0.0
		if whole {
			v = w.piece.Volume()
		} else {
			if err := f.body.Measure(&w.piece, p, solid.WantVolume, &w.solid, &w.measures); err != nil {
				return err
			}
			v = w.measures.Volume
		}
		w.weights = append(w.weights, Weight{w.around[j].site, max(0, v)})
	}
	return nil
}

// cutPart makes w.piece the part of w.cell that is nearer to neighbour j than to the
// other neighbours. Those near to j cut first: they leave little for the others.
func (w *Work) cutPart(j int) polyhedron.Result {
	own := w.around[j].at
	w.order, w.list = w.order[:0], w.list[:0]
	for k := range w.around {
		n := sub(w.around[k].at, own)
		w.list = append(w.list, dot(times(w.metric, n), n))
		if k != j && (!w.tied || w.zone.linked(w.around[j].rank, w.around[k].rank)) {
			w.order = append(w.order, int32(k))
		}
	}
	slices.SortFunc(w.order, func(a, b int32) int {
		if c := cmp.Compare(w.list[a], w.list[b]); c != 0 {
			return c
		}
		return int(a - b)
	})
	w.piece.CopyFrom(&w.cell)
	for _, k := range w.order {
		other := w.around[k].at
		n := times(w.metric, sub(other, own))
		d := dot(n, add(own, other)) / 2
		if w.piece.Clip(n, d, w.around[k].site) == polyhedron.Empty {
			return polyhedron.Empty
		}
	}
	return polyhedron.Cut
}

// withoutByZone is byZone at the place of a site that is taken away. Its neighbours close
// the hole that it leaves, so that their own tetrahedralisation has the zone of its place.
func (f *Field) withoutByZone(ctx context.Context, p Vec, site int32, w *Work) (place Place, ok bool, err error) {
	if !f.ready || f.o.Method != Sibson {
		return Between, false, nil
	}
	w.ring = f.t.Neighbours(int(f.own[site]), w.ring[:0])
	if len(w.ring) < 5 || w.ring[0] == delaunay.Ghost || len(w.ring) > crowdedRing {
		return Between, false, nil
	}
	w.spots = w.spots[:0]
	at := f.local(site)
	near, least := int32(0), math.Inf(1)
	for i, s := range w.ring {
		q := f.t.Site(int(s))
		w.spots = append(w.spots, q)
		e := sub(q, at)
		if d := dot(e, e); d < least {
			near, least = int32(i), d
		}
	}
	small, err := delaunay.Build(ctx, w.spots, delaunay.Options{Threads: 1})
	if err != nil {
		return Between, false, err
	}
	z := &w.zone
	if small.Dimension() < 3 || z.find(small, at, near) != zoneWhole || !z.inSolid(f, p) || !z.parts() {
		return Between, false, nil
	}
	z.weigh(Sibson, func(i int32) int32 { return f.site(w.ring[i]) }, w)
	return Between, true, nil
}

// crowdedRing is the number of neighbours from which those of one site are no small set.
const crowdedRing = 1000

// facesByZone counts the faces of the cell of p as byZone finds it.
func (f *Field) facesByZone(p Vec, w *Work) (n int, ok bool) {
	if !f.ready {
		return 0, false
	}
	s, d := f.d.Nearest(p)
	if d == 0 {
		return 0, false
	}
	z := &w.zone
	if z.find(f.t, f.d.Local(p), f.own[s]) != zoneWhole || !z.inSolid(f, p) || !z.parts() {
		return 0, false
	}
	surface := 0.0
	for _, a := range z.face {
		surface += a
	}
	for _, a := range z.face {
		if a > crumbShare*surface {
			n++
		}
	}
	return n, true
}

// Neighbours is how many sites the cell of p would touch, -1 where p has no cell.
func (f *Field) Neighbours(p Vec, w *Work) (int, error) {
	w.tied = false
	if f.body != nil && f.body.Side(p, f.tol) == solid.Outside {
		return -1, nil
	}
	if n, ok := f.facesByZone(p, w); ok {
		return n, nil
	}
	if err := f.d.Insert(p, &w.cell); err != nil {
		return -1, err
	}
	if w.cell.Empty() {
		return -1, nil
	}
	whole := f.convex || f.body.Distance(p) > w.cell.Farthest()*(1+1e-12) && f.body.Side(p, 0) == solid.Inside
	if err := f.meet(p, whole, w); err != nil {
		return -1, err
	}
	n := 0
	least := crumbShare * w.cell.Surface()
	for _, a := range w.around {
		if a.area > least || math.IsInf(a.area, 0) {
			n++
		}
	}
	return n, nil
}
