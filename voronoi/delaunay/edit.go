package delaunay

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// Insert adds a site and returns its number, NumSites() before the call. Only the
// tetrahedra whose spheres contain the site change, but numbers of others may: the
// last take the place of those that are gone. The result is the same set as building
// with the site from the start. A site far outside the box of the others (more than
// three times its distance from the internal origin) has all spheres computed anew;
// below dimension 3 everything is built anew.
func (t *T) Insert(p r3.Vec) (site int, err error) {
	site = len(t.place)
	if !finite(p) {
		return -1, &CoordinateError{site}
	}
	if site >= mostSites {
		return -1, ErrTooMany
	}
	t.own()
	if !t.ownSites { // the caller's slice may have room behind its end
		t.sites, t.ownSites = t.sites[:3*site:3*site], true
	}
	t.sites = append(t.sites, p.X, p.Y, p.Z)
	if t.dimension < 3 {
		t.place = append(t.place, -1)
		return site, t.rebuild()
	}
	if !t.admit(p) {
		t.reframe()
	}
	x, y, z := t.frame.internal(t.sites, site)
	t.order = append(t.order, uint32(site))
	t.pts = append(t.pts, point{x: x, y: y, z: z, tet: noTet})
	q := int32(len(t.pts) - 1)
	w := t.editor()
	w.hint = t.startNear(p)
	seed, equal := w.locate(q)
	if equal != 0 {
		t.place = append(t.place, equal)
		t.repeats = append(t.repeats, int32(site))
		return site, nil
	}
	t.place = append(t.place, q)
	w.search(seed, q)
	t.room(w, w.edge-w.dead)
	gone := append([]uint32(nil), w.queue[:w.dead]...)
	for i := range gone {
		gone[i] >>= 2
	}
	deltaReal := -t.countReal(gone)
	w.fill(q)
	made := make([]uint32, w.edge)
	for i := range made {
		made[i] = w.queue[i] >> 2
	}
	deltaReal += t.countReal(made)
	t.settle(w, append(gone, made...), deltaReal, len(made)-len(gone))
	return site, nil
}

// admit reports whether the frame is exact for p, and gives up the common unit when p
// is no multiple of it.
func (t *T) admit(p r3.Vec) bool {
	f := t.frame
	if f.rounded {
		return false // survey again
	}
	one := *f
	if !one.survey([]float64{p.X, p.Y, p.Z}, 1) || one.rounded {
		return false
	}
	for k := range 3 {
		if math.Abs(one.box.lo[k]) > 1 {
			return false
		}
		f.box.lo[k], f.box.hi[k] = min(f.box.lo[k], one.box.lo[k]), max(f.box.hi[k], one.box.hi[k])
	}
	finer, exact := one.bits > f.bits, t.exact
	f.bits = max(f.bits, one.bits)
	t.setLimits()
	if finer && exact { // for sites that are multiples of the unit that was
		for i := range t.tets[:t.real] {
			if q := &t.tets[i]; q.lo == q.hi {
				t.setSphere(q)
			}
		}
	}
	return true
}

// reframe chooses another frame for all sites and computes every sphere again.
func (t *T) reframe() {
	f, _ := newFrame(t.sites, 1)
	t.frame = f
	t.setLimits()
	for p := 1; p < len(t.pts); p++ {
		q := &t.pts[p]
		q.x, q.y, q.z = f.internal(t.sites, int(t.order[p-1]))
	}
	for i := range t.tets[:t.real] {
		t.setSphere(&t.tets[i])
	}
}

// setSphere computes the stored sphere of a real tetrahedron.
func (m *mesh) setSphere(t *tet) {
	o := &m.pts[t.v[0]]
	var l [3]local
	for k := range l {
		q := &m.pts[t.v[k+1]]
		x, y, z := q.x-o.x, q.y-o.y, q.z-o.z
		l[k] = local{x: x, y: y, z: z, q: x*x + y*y + z*z}
	}
	a, b, c := &l[0], &l[1], &l[2]
	ax, ay, az := b.y*c.z-b.z*c.y, b.z*c.x-b.x*c.z, b.x*c.y-b.y*c.x
	bx, by, bz := c.y*a.z-c.z*a.y, c.z*a.x-c.x*a.z, c.x*a.y-c.y*a.x
	cx, cy, cz := a.y*b.z-a.z*b.y, a.z*b.x-a.x*b.z, a.x*b.y-a.y*b.x
	det := a.x*ax + a.y*ay + a.z*az
	inv := 0.5 / det
	ox := (a.q*ax + b.q*bx + c.q*cx) * inv
	oy := (a.q*ay + b.q*by + c.q*cy) * inv
	oz := (a.q*az + b.q*bz + c.q*cz) * inv
	t.c = [3]float64{o.x + ox, o.y + oy, o.z + oz}
	r2 := ox*ox + oy*oy + oz*oz
	t.lo, t.hi = carefulBounds(det, a.q*b.q*c.q, r2)
	if m.exact && m.isExact(det, a.q+b.q+c.q, r2) {
		t.lo, t.hi = float32(r2), float32(r2)
	}
}

func (t *T) editor() *worker {
	if t.edit == nil {
		t.edit = newWorker(&t.mesh)
	}
	t.edit.free, t.edit.next, t.edit.end = t.edit.free[:0], 0, 0
	return t.edit
}

// room gives an editing worker n records.
func (t *T) room(w *worker, n int) {
	for !w.reserve(n) {
		t.tets = t.tets[:cap(t.tets)]
		if len(t.tets)-int(t.used) < t.block() {
			t.grow(len(t.tets)/8 + 2*t.block())
		}
	}
}

func (t *T) countReal(ids []uint32) int {
	n := 0
	for _, i := range ids {
		if t.tets[i].lo != loGhost {
			n++
		}
	}
	return n
}

// settle puts the real tetrahedra in front of the ghosts again after an edit that
// changed the records touched and the numbers of real and all tetrahedra.
func (t *T) settle(w *worker, touched []uint32, deltaReal, delta int) {
	oldReal, oldAll := t.real, t.real+t.ghosts
	real, all := oldReal+deltaReal, oldAll+delta
	candidates := make(map[uint32]bool, len(touched))
	for _, i := range touched {
		candidates[i] = true
	}
	for i := min(oldReal, real); i < max(oldReal, real); i++ {
		candidates[uint32(i)] = true
	}
	for i := min(oldAll, all); i < max(oldAll, all); i++ {
		candidates[uint32(i)] = true
	}
	list := make([]uint32, 0, len(candidates))
	for i := range candidates {
		list = append(list, i)
	}
	t.sift(list, real, func(q *tet) bool { return !q.isFree() && q.lo != loGhost })
	t.sift(list, all, func(q *tet) bool { return !q.isFree() })
	t.real, t.ghosts = real, all-real
	t.used = int64(all)
	t.tets = t.tets[:all]
	t.pts[0].tet = uint32(real)
}

// sift exchanges the listed records so that those that belong come before middle.
func (t *T) sift(list []uint32, middle int, belongs func(*tet) bool) {
	var low, high []uint32
	for _, i := range list {
		switch in := belongs(&t.tets[i]); {
		case in && int(i) >= middle:
			high = append(high, i)
		case !in && int(i) < middle:
			low = append(low, i)
		}
	}
	for k := range high {
		t.exchange(low[k], high[k])
	}
}

// Remove takes a site away; its number is not used again. When it shares its place
// with others only the number goes. Otherwise its tetrahedra are replaced by those of
// its neighbours, and numbers of other tetrahedra may change. The result is the same
// set as building without the site.
func (t *T) Remove(site int) error {
	if site < 0 || site >= len(t.place) || t.place[site] == 0 {
		return fmt.Errorf("delaunay: there is no site %d to remove", site)
	}
	t.own()
	p := t.place[site]
	if t.removeRepeat(site, p) {
		return nil
	}
	t.place[site] = 0
	t.removed++
	if t.dimension < 3 {
		return t.rebuild()
	}
	if !t.excise(p) {
		return t.rebuild()
	}
	return nil
}

// removeRepeat removes a site that shares the place of point p with others.
func (t *T) removeRepeat(site int, p int32) bool {
	representative := int(t.order[p-1])
	for i, s := range t.repeats {
		if t.place[s] != p || (representative != site && int(s) != site) {
			continue
		}
		if representative == site { // the next lowest takes over
			t.order[p-1] = uint32(s)
		}
		t.repeats = append(t.repeats[:i:i], t.repeats[i+1:]...)
		t.place[site] = 0
		t.removed++
		return true
	}
	return false
}

// rebuild builds everything anew of the sites that are left.
func (t *T) rebuild() error {
	var live []int32
	var flat []float64
	for s, p := range t.place {
		if p != 0 {
			live = append(live, int32(s))
			flat = append(flat, t.sites[3*s:3*s+3]...)
		}
	}
	n, err := BuildFlat(context.Background(), flat, Options{Threads: 1})
	if err != nil {
		return err
	}
	place := make([]int32, len(t.place))
	for i, s := range live {
		place[s] = n.place[i]
	}
	for i, s := range n.order {
		n.order[i] = uint32(live[s])
	}
	for i, s := range n.repeats {
		n.repeats[i] = live[s]
	}
	n.sites, n.place, n.removed, n.ownSites = t.sites, place, t.removed, t.ownSites
	*t = *n
	return nil
}
