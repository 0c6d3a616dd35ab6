package delaunay

import (
	"math"
	"sync/atomic"
)

// outcome of a comparison as a number, so that lists can be filled without branches.
func bit(b bool) uint32 {
	if b {
		return 1
	}
	return 0
}

// search collects the cavity of p: the tetrahedra whose spheres contain it,
// breadth first from one of them, and the faces that look at them from outside.
func (w *worker) search(seed uint32, p int32) {
	m := w.m
	tets := m.tets
	px, py, pz := m.pts[p].x, m.pts[p].y, m.pts[p].z
	queue, rim := w.queue, w.rim
	head, tail, edge := 0, 1, 0
	first := &tets[seed]
	first.v[0] |= marked
	queue[0] = seed << 2
	// The loop looks over all faces but the one by which a tetrahedron was entered.
	if r := first.n[0]; w.inConflict(r>>2, p) {
		tets[r>>2].v[0] |= marked
		queue[1] = r
		tail = 2
	} else {
		rim[0] = r
		edge = 1
	}
	for head < tail {
		if tail+4 > len(queue) || edge+4 > len(rim) {
			w.queue = append(w.queue, make([]uint32, len(queue))...)
			w.rim = append(w.rim, make([]uint32, len(rim))...)
			queue, rim = w.queue, w.rim
		}
		from := queue[head]
		head++
		t := &tets[from>>2]
		r0, r1, r2 := t.n[(from+1)&3], t.n[(from+2)&3], t.n[(from+3)&3]
		t0, t1, t2 := &tets[r0>>2], &tets[r1>>2], &tets[r2>>2]
		x0, y0, z0 := t0.c[0]-px, t0.c[1]-py, t0.c[2]-pz
		x1, y1, z1 := t1.c[0]-px, t1.c[1]-py, t1.c[2]-pz
		x2, y2, z2 := t2.c[0]-px, t2.c[1]-py, t2.c[2]-pz
		d0 := x0*x0 + y0*y0 + z0*z0
		d1 := x1*x1 + y1*y1 + z1*z1
		d2 := x2*x2 + y2*y2 + z2*z2
		in0, out0 := bit(d0 < float64(t0.lo)), bit(d0 > float64(t0.hi))
		in1, out1 := bit(d1 < float64(t1.lo)), bit(d1 > float64(t1.hi))
		in2, out2 := bit(d2 < float64(t2.lo)), bit(d2 > float64(t2.hi))

		old := uint32(t0.v[0]) >> 31
		if in0|out0|old == 0 {
			in0 = bit(w.slowConflict(r0>>2, p))
			out0 = 1 - in0
		}
		t0.v[0] |= int32(in0 << 31)
		queue[tail] = r0
		rim[edge] = r0
		tail += int(in0 &^ old)
		edge += int(out0 &^ old)

		old = uint32(t1.v[0]) >> 31
		if in1|out1|old == 0 {
			in1 = bit(w.slowConflict(r1>>2, p))
			out1 = 1 - in1
		}
		t1.v[0] |= int32(in1 << 31)
		queue[tail] = r1
		rim[edge] = r1
		tail += int(in1 &^ old)
		edge += int(out1 &^ old)

		old = uint32(t2.v[0]) >> 31
		if in2|out2|old == 0 {
			in2 = bit(w.slowConflict(r2>>2, p))
			out2 = 1 - in2
		}
		t2.v[0] |= int32(in2 << 31)
		queue[tail] = r2
		rim[edge] = r2
		tail += int(in2 &^ old)
		edge += int(out2 &^ old)
	}
	w.dead, w.edge = tail, edge
}

// inConflict reports whether p is inside the sphere of t, stored sphere first.
func (w *worker) inConflict(t uint32, p int32) bool {
	q := &w.m.tets[t]
	o := &w.m.pts[p]
	x, y, z := q.c[0]-o.x, q.c[1]-o.y, q.c[2]-o.z
	d := x*x + y*y + z*z
	if d < float64(q.lo) {
		return true
	}
	if d > float64(q.hi) {
		return false
	}
	return w.slowConflict(t, p)
}

// slowConflict is inConflict without the stored sphere.
func (w *worker) slowConflict(t uint32, p int32) bool {
	m := w.m
	q := &m.tets[t]
	if q.lo == q.hi {
		pts := m.pts
		a, b, c, d, o := &pts[q.v[0]&ownMask], &pts[q.v[1]], &pts[q.v[2]], &pts[q.v[3]], &pts[p]
		if in, ok := m.oneBox(a, b, c, d, o); ok {
			return in
		}
		return nearSphereTie(a, b, c, d, o)
	}
	if q.lo != loGhost {
		return m.inSphere(q.v[0]&ownMask, q.v[1], q.v[2], q.v[3], p)
	}
	v := q.v
	v[0] &= ownMask
	g := ghostIn(&v)
	v[g] = p
	if o := m.orient(v[0], v[1], v[2], v[3]); o != 0 {
		return o > 0
	}
	// In the plane of the facet the ghost's sphere is the facet's circle, which is
	// where that plane cuts the sphere of the real tetrahedron behind it; so is the
	// perturbed one, since raising a corner off the plane does not tilt the circle.
	return w.inConflict(q.n[g]>>2, p)
}

// ghostIn returns which vertex is the ghost, for a ghost.
func ghostIn(v *[4]int32) int {
	for k := range 3 {
		if v[k] == 0 {
			return k
		}
	}
	return 3
}

// fill puts the star of p into the cavity: one tetrahedron for each face of the rim.
// The records of the cavity are used again.
func (w *worker) fill(p int32) {
	m := w.m
	edge := w.edge
	w.prepareSlots()
	w.prepareLocals(edge)
	tets, pts := m.tets, m.pts
	queue, rim, locals, facets := w.queue, w.rim[:edge], w.locals, w.facets[:edge]
	table, stride, exact := w.table, w.stride, m.exact
	px, py, pz := pts[p].x, pts[p].y, pts[p].z
	known := uint32(1) // locals[0] is the ghost
	hint := uint32(noTet)
	for i, r := range rim {
		id := queue[i] >> 2
		outer := &tets[r>>2]
		back := &faceBack[r&3]
		outer.n[r&3] = id << 2
		v1, v2, v3 := outer.v[back[0]&3], outer.v[back[1]&3], outer.v[back[2]&3]
		q1, q2, q3 := &pts[v1], &pts[v2], &pts[v3]
		l1, l2, l3 := q1.local, q2.local, q3.local
		if l1 >= known || locals[l1].v != v1 {
			l1 = known
			known++
			q1.local, q1.tet = l1, id
			locals[l1].set(q1, px, py, pz, v1)
		}
		if l2 >= known || locals[l2].v != v2 {
			l2 = known
			known++
			q2.local, q2.tet = l2, id
			locals[l2].set(q2, px, py, pz, v2)
		}
		if l3 >= known || locals[l3].v != v3 {
			l3 = known
			known++
			q3.local, q3.tet = l3, id
			locals[l3].set(q3, px, py, pz, v3)
		}
		facets[i] = facet{l1, l2, l3, id}
		if stride != 0 {
			table[l1*stride+l2] = id<<2 + 3
			table[l2*stride+l3] = id<<2 + 1
			table[l3*stride+l1] = id<<2 + 2
		}
		t := &tets[id]
		t.v[0], t.v[1], t.v[2], t.v[3] = p, v1, v2, v3
		t.n[0] = r
		if v1 == 0 || v2 == 0 || v3 == 0 {
			t.lo, t.hi = loGhost, float32(math.Inf(1))
			w.ghost = id
			continue
		}
		hint = id
		a, b, c := &locals[l1], &locals[l2], &locals[l3]
		ax, ay, az := b.y*c.z-b.z*c.y, b.z*c.x-b.x*c.z, b.x*c.y-b.y*c.x
		bx, by, bz := c.y*a.z-c.z*a.y, c.z*a.x-c.x*a.z, c.x*a.y-c.y*a.x
		cx, cy, cz := a.y*b.z-a.z*b.y, a.z*b.x-a.x*b.z, a.x*b.y-a.y*b.x
		det := a.x*ax + a.y*ay + a.z*az
		inv := 0.5 / det
		ox := (a.q*ax + b.q*bx + c.q*cx) * inv
		oy := (a.q*ay + b.q*by + c.q*cy) * inv
		oz := (a.q*az + b.q*bz + c.q*cz) * inv
		r2 := ox*ox + oy*oy + oz*oz
		t.c[0], t.c[1], t.c[2] = px+ox, py+oy, pz+oz
		p2 := a.q * b.q * c.q
		if det*det*plainKappa2 > p2+kappaFloor && r2 > smallestSphere {
			t.lo, t.hi = float32(r2*(1-plainMargin)), float32(r2*(1+plainMargin))
		} else {
			t.lo, t.hi = carefulBounds(det, p2, r2)
		}
		if exact && m.isExact(det, a.q+b.q+c.q, r2) {
			t.lo, t.hi = float32(r2), float32(r2)
		}
	}
	pts[p].tet = queue[0] >> 2
	w.hint = hint
	if stride == 0 {
		w.linkByHash()
		return
	}
	for i := range facets {
		f := &facets[i]
		t := &tets[f.id]
		t.n[1] = table[f.c*stride+f.b]
		t.n[2] = table[f.a*stride+f.c]
		t.n[3] = table[f.b*stride+f.a]
	}
}

// prepareSlots makes queue[:edge] name a record for every new tetrahedron, and puts
// records that are left over on the free list. There must be enough in reserve.
func (w *worker) prepareSlots() {
	for w.dead > w.edge {
		w.dead--
		w.free = append(w.free, w.queue[w.dead]>>2)
	}
	if w.edge > len(w.queue) {
		w.queue = append(w.queue, make([]uint32, w.edge)...)
	}
	for i := w.dead; i < w.edge; i++ {
		w.queue[i] = w.fresh() << 2
	}
}

// fresh returns a record of the worker's own.
func (w *worker) fresh() uint32 {
	if w.next < w.end {
		w.next++
		return w.next - 1
	}
	n := len(w.free) - 1
	id := w.free[n]
	w.free = w.free[:n]
	return id
}

// How many records a worker takes at a time; of few sites, whose tetrahedra are built by
// the thousand, a small block.
const (
	usualBlock = 1024
	smallBlock = 64
	fewSites   = 256
)

func (m *mesh) block() int {
	if len(m.sites) < 3*fewSites {
		return smallBlock
	}
	return usualBlock
}

// reserve makes sure that fresh can be called n times; it reports false when the mesh
// has no more records.
func (w *worker) reserve(n int) bool {
	for int(w.end-w.next)+len(w.free) < n {
		for ; w.next < w.end; w.next++ {
			w.free = append(w.free, w.next)
		}
		block := int64(w.m.block())
		end := atomic.AddInt64(&w.m.used, block)
		if end > int64(len(w.m.tets)) {
			atomic.AddInt64(&w.m.used, -block)
			return false
		}
		w.next, w.end = uint32(end-block), uint32(end)
	}
	return true
}

func (m *mesh) grow(by int) {
	bigger := make([]tet, len(m.tets)+by)
	AdviseHugePages(bigger)
	copy(bigger, m.tets)
	m.tets = bigger
}

// largestStride bounds the edge table to 4 MiB; larger cavities use a hash.
const largestStride = 1024

// prepareLocals makes room for the vertices of edge facets: a sphere of that many
// triangles has edge/2 + 2 vertices, the ghost's place included or not.
func (w *worker) prepareLocals(edge int) {
	n := edge/2 + 4
	if n > len(w.locals) {
		w.locals = make([]local, 2*n)
		w.facets = make([]facet, 4*n)
	}
	if n > largestStride {
		w.stride = 0
	} else if w.stride == 0 || uint32(n) > w.stride {
		w.resizeTable(n)
	}
}

func (w *worker) resizeTable(n int) {
	w.stride = 64
	for w.stride < uint32(n) {
		w.stride *= 2
	}
	if need := int(w.stride * w.stride); need > len(w.table) {
		w.table = make([]uint32, need)
	}
}

// edgeHash maps the directed edges of a large cavity to faces, by open addressing.
type edgeHash struct {
	keys []uint64
	refs []uint32
}

func (h *edgeHash) reset(n int) {
	size := 64
	for size < 2*n {
		size *= 2
	}
	h.keys = make([]uint64, size)
	h.refs = make([]uint32, size)
}

func (h *edgeHash) slot(a, b uint32) int {
	key := (uint64(a)<<32 | uint64(b)) + 1
	i := int(mix(key)) & (len(h.keys) - 1)
	for h.keys[i] != 0 && h.keys[i] != key {
		i = (i + 1) & (len(h.keys) - 1)
	}
	h.keys[i] = key
	return i
}

func (w *worker) linkByHash() {
	facets := w.facets[:w.edge]
	h := &w.hash
	h.reset(3 * len(facets))
	for i := range facets {
		f := &facets[i]
		h.refs[h.slot(f.a, f.b)] = f.id<<2 + 3
		h.refs[h.slot(f.b, f.c)] = f.id<<2 + 1
		h.refs[h.slot(f.c, f.a)] = f.id<<2 + 2
	}
	for i := range facets {
		f := &facets[i]
		t := &w.m.tets[f.id]
		t.n[1] = h.refs[h.slot(f.c, f.b)]
		t.n[2] = h.refs[h.slot(f.a, f.c)]
		t.n[3] = h.refs[h.slot(f.b, f.a)]
	}
}
