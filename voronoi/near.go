package voronoi

// Near is a site and its distance from a place.
type Near struct {
	Site  int32   // the representative of its group
	Dist2 float64 // stretched as distances are
}

// Place is where a site stands, as it was given to New (-0 as 0), for a site that
// takes part.
func (d *Diagram) Place(site int32) Vec { return d.place(d.cell[site]) }

// Local is a place in the coordinates of Tetrahedra: moved by the origin, and stretched
// as distances are. Spot is that of a site that takes part.
func (d *Diagram) Local(p Vec) Vec { return d.local(positive(p)) }

// Spot is Local of the place of a site that takes part.
func (d *Diagram) Spot(site int32) Vec { return d.tree.Point(d.cell[site]) }

// TakesPart tells whether a site has a cell: it does not lie outside the solid.
func (d *Diagram) TakesPart(site int32) bool { return d.cell[site] >= 0 }

// Nearby appends to buf the k sites nearest to p (the representatives of their
// groups), by growing distance, those equally far by their coordinates; fewer if
// there are no more. The group of the site skip is passed over; -1: none is. Those
// that are as far as the last one, to the last bit, follow it: which of them it is
// would be chance. With stretched distances near is what is near in these.
func (d *Diagram) Nearby(p Vec, k int, skip int32, buf []Near) []Near {
	if k <= 0 {
		return buf
	}
	b := d.builder()
	defer d.free(b)
	b.used.Reset()
	if skip >= 0 && d.cell[skip] >= 0 {
		b.used.Add(d.cell[skip])
	}
	local := d.Local(p)
	for room := k + 4; ; room *= 2 {
		b.near = d.tree.KNearest(local, room, b.used, b.near[:0])
		if n := len(b.near); n < room || b.near[n-1].Dist2 > b.near[k-1].Dist2 {
			break
		}
	}
	for i, q := range b.near {
		if i >= k && q.Dist2 > b.near[k-1].Dist2 {
			break
		}
		buf = append(buf, Near{d.site[q.Point], q.Dist2})
	}
	return buf
}
