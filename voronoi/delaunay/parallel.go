package delaunay

import (
	"slices"
	"sync"
	"sync/atomic"
)

// Several threads without locks: space is cut into slabs, one a worker, by planes
// across one axis; a point belongs to the worker of its slab, and a tetrahedron to
// the worker to whom all its real vertices belong, or is mixed. A worker inserts the
// points of its slab whose cavities are all its own and defers the others, which are
// tried again with slabs across another axis and at last by one thread.
//
// While workers run nobody changes a mixed tetrahedron, but for the neighbour over a
// face that lies within one slab: only that slab's worker writes it, and others read
// it never, because a worker leaves a tetrahedron only over faces with a vertex of its
// own. Tetrahedra of other slabs are not even read. Points are written (their
// tetrahedron, their local number) by their owner alone.

const (
	noOwner     = 255 // the ghost
	mostThreads = 128
)

// Smaller rounds are inserted by one thread, and fewer deferred points a worker too.
// Variables, so that tests can have small sets inserted by many.
var leastParallel, leastRetry = 4096, 1024

// crew is the workers of one build and who owns what.
type crew struct {
	b       *builder
	owner   []uint8 // of points; the ghost belongs to noOwner
	workers []*worker
	stop    atomic.Bool
	done    atomic.Int64
}

func newCrew(b *builder) *crew {
	c := &crew{b: b, owner: make([]uint8, len(b.m.pts))}
	c.owner[0] = noOwner
	c.workers = append(c.workers, b.main)
	for len(c.workers) < min(b.threads, mostThreads) {
		c.workers = append(c.workers, newWorker(b.m))
	}
	for i, w := range c.workers {
		w.me = uint8(i)
		w.reserve(1)
		w.spare = w.fresh()
		b.m.tets[w.spare].v[0] |= marked
	}
	return c
}

// insertRound inserts points lo..hi-1.
func (c *crew) insertRound(lo, hi int) error {
	pending := make([]int32, 0, hi-lo)
	for p := lo; p < hi; p++ {
		if !c.b.isCorner(int32(p)) {
			pending = append(pending, int32(p))
		}
	}
	c.b.done += hi - lo - len(pending)
	for _, axis := range c.b.m.frame.axes() {
		if len(pending) < leastRetry*len(c.workers) {
			break
		}
		c.divide(axis, pending, hi)
		if err := c.b.makeRoom(len(pending)); err != nil {
			return err
		}
		pending = c.phase(pending, lo)
		if err := c.b.look(); err != nil {
			return err
		}
	}
	c.b.main.hint = c.b.anyReal()
	return c.b.insertSerially(pending)
}

// axes lists the axes, the one along which the sites extend most first.
func (f *frame) axes() [3]int {
	axes := [3]int{0, 1, 2}
	slices.SortStableFunc(axes[:], func(i, j int) int {
		a, b := f.box.hi[i]-f.box.lo[i], f.box.hi[j]-f.box.lo[j]
		switch {
		case a > b:
			return -1
		case a < b:
			return 1
		}
		return 0
	})
	return axes
}

func (q *point) along(axis int) float64 {
	switch axis {
	case 0:
		return q.x
	case 1:
		return q.y
	}
	return q.z
}

// divide gives points 1..hi-1 to slabs that hold about equally many pending points.
func (c *crew) divide(axis int, pending []int32, hi int) {
	pts := c.b.m.pts
	sample := make([]float64, 0, 4096)
	for i := range min(len(pending), cap(sample)) {
		p := pending[i*len(pending)/min(len(pending), cap(sample))]
		sample = append(sample, pts[p].along(axis))
	}
	slices.Sort(sample)
	cuts := make([]float64, len(c.workers)-1)
	for i := range cuts {
		cuts[i] = sample[len(sample)*(i+1)/len(c.workers)]
	}
	inChunks(hi, len(c.workers), func(from, to int) {
		for p := max(from, 1); p < to; p++ {
			x := pts[p].along(axis)
			slab := uint8(0)
			for _, cut := range cuts {
				slab += uint8(bit(x >= cut))
			}
			c.owner[p] = slab
		}
	})
}

// phase lets every worker insert its pending points and returns those deferred. The
// points below old were in before the round.
func (c *crew) phase(pending []int32, old int) []int32 {
	deferred := make([][]int32, len(c.workers))
	c.stop.Store(false)
	c.done.Store(int64(c.b.done))
	var wait sync.WaitGroup
	for i, w := range c.workers {
		wait.Go(func() {
			w.owner = c.owner
			deferred[i] = c.insertOwned(w, pending, old)
		})
	}
	wait.Wait()
	var rest []int32
	for _, d := range deferred {
		rest = append(rest, d...)
	}
	slices.Sort(rest)
	c.b.done += len(pending) - len(rest)
	return rest
}

func (c *crew) insertOwned(w *worker, pending []int32, old int) (deferred []int32) {
	w.hint = noTet
	tried := 0
	for i, p := range pending {
		if w.owner[p] != w.me {
			continue
		}
		if tried++; tried%stepsBetweenLooks == 0 && c.rest(w, tried) {
			for _, q := range pending[i:] {
				if w.owner[q] == w.me {
					deferred = append(deferred, q)
				}
			}
			return deferred
		}
		if !w.insertOwned(p, old) {
			deferred = append(deferred, p)
		}
	}
	return deferred
}

// rest reports progress and whether the work has to stop.
func (c *crew) rest(w *worker, tried int) bool {
	done := c.done.Add(stepsBetweenLooks)
	if w.me == 0 && c.b.options.Progress != nil {
		c.b.options.Progress(int(done), len(c.b.m.order))
	}
	if c.b.ctx.Err() != nil {
		c.stop.Store(true)
	}
	return c.stop.Load()
}

// insertOwned is insert where only the worker's own tetrahedra may change; it reports
// false when p has to be deferred.
func (w *worker) insertOwned(p int32, old int) bool {
	seed, equal, found := uint32(0), int32(0), false
	if w.hint != noTet {
		seed, equal, found = w.locateOwned(p)
	}
	if !found && equal == 0 {
		// The hint may lie in a pocket between mixed tetrahedra.
		if w.hint = w.ownStart(p, old); w.hint == noTet {
			return false
		}
		seed, equal, found = w.locateOwned(p)
	}
	if equal != 0 {
		w.twins = append(w.twins, twin{p, equal})
		return true
	}
	if !found || !w.owns(seed) || !w.searchOwned(seed, p) {
		return false
	}
	if !w.reserve(w.edge - w.dead) {
		w.unmark(w.dead)
		return false
	}
	w.fill(p)
	return true
}

// owns reports whether all real vertices of t are the worker's.
func (w *worker) owns(t uint32) bool {
	for _, v := range w.m.tets[t].v {
		if w.foreign(v&ownMask) != 0 {
			return false
		}
	}
	return true
}

// foreign is 1 for a point of another worker, 0 for an own one and the ghost.
func (w *worker) foreign(p int32) uint32 {
	o := w.owner[p]
	return bit(o != w.me) & bit(o != noOwner)
}

// ownStart returns a tetrahedron at the nearest of a few own points that were in
// before the round, or noTet.
func (w *worker) ownStart(p int32, old int) uint32 {
	const tries, enough = 256, 24
	o := &w.m.pts[p]
	best, least, hits := uint32(noTet), 0.0, 0
	for i := 0; i < tries && hits < enough; i++ {
		w.seed += 0x9e3779b97f4a7c15
		q := int(mix(w.seed)%uint64(old-1)) + 1
		if w.owner[q] != w.me || w.m.pts[q].tet == noTet {
			continue
		}
		a := &w.m.pts[q]
		x, y, z := a.x-o.x, a.y-o.y, a.z-o.z
		if d := x*x + y*y + z*z; best == noTet || d < least {
			best, least = a.tet, d
		}
		hits++
	}
	if best != noTet && w.m.tets[best].lo == loGhost {
		// The face away from the ghost has the own vertex.
		t := &w.m.tets[best]
		best = t.n[ghostIn(&t.v)] >> 2
	}
	return best
}

// locateOwned is locate over faces with an own vertex; found is false where the walk
// would have to leave over another.
func (w *worker) locateOwned(p int32) (seed uint32, equal int32, found bool) {
	m := w.m
	tets, pts, owner, me := m.tets, m.pts, w.owner, w.me
	px, py, pz := pts[p].x, pts[p].y, pts[p].z
	cur := w.hint
	for {
		t := &tets[cur]
		x, y, z := t.c[0]-px, t.c[1]-py, t.c[2]-pz
		if x*x+y*y+z*z < float64(t.lo) || t.lo == loGhost {
			return cur, 0, true
		}
		a, b, c, d := &pts[t.v[0]], &pts[t.v[1]], &pts[t.v[2]], &pts[t.v[3]]
		ax, ay, az := a.x-px, a.y-py, a.z-pz
		bx, by, bz := b.x-px, b.y-py, b.z-pz
		cx, cy, cz := c.x-px, c.y-py, c.z-pz
		dx, dy, dz := d.x-px, d.y-py, d.z-pz
		ab, ac, ad := ax*by-ay*bx, ax*cy-ay*cx, ax*dy-ay*dx
		bc, bd, cd := bx*cy-by*cx, bx*dy-by*dx, cx*dy-cy*dx
		s := [4]float64{
			bz*cd - cz*bd + dz*bc, cz*ad - az*cd - dz*ac,
			az*bd - bz*ad + dz*ab, bz*ac - az*bc - cz*ab,
		}
		own := [4]uint32{
			bit(owner[t.v[0]] == me), bit(owner[t.v[1]] == me),
			bit(owner[t.v[2]] == me), bit(owner[t.v[3]] == me),
		}
		count := own[0] + own[1] + own[2] + own[3]
		k, least := 4, 0.0
		for i := range 4 {
			if s[i] < least && count > own[i] {
				k, least = i, s[i]
			}
		}
		if k < 4 {
			q := [4]float64{
				ax*ax + ay*ay + az*az, bx*bx + by*by + bz*bz,
				cx*cx + cy*cy + cz*cz, dx*dx + dy*dy + dz*dz,
			}
			n := q[(k+1)&3] * q[(k+2)&3] * q[(k+3)&3]
			if least*least > orientFactor*n && n > filterFloor {
				cur = t.n[k] >> 2
				continue
			}
		}
		next, equal, blocked := w.stepOwned(cur, p, own, count)
		if equal != 0 || blocked {
			return cur, equal, false
		}
		if next == cur {
			return cur, 0, true
		}
		cur = next
	}
}

// stepOwned is step over faces with an own vertex; blocked says that only others
// separate t from p.
func (w *worker) stepOwned(t uint32, p int32, own [4]uint32, count uint32) (next uint32, equal int32, blocked bool) {
	m := w.m
	q := &m.tets[t]
	for _, v := range q.v {
		if m.same(v, p) {
			return t, v, false
		}
	}
	for k := range 4 {
		v := q.v
		v[k] = p
		if m.orient(v[0], v[1], v[2], v[3]) < 0 {
			if count > own[k] {
				return q.n[k] >> 2, 0, false
			}
			blocked = true
		}
	}
	return t, 0, blocked
}

// searchOwned is search that gives up, marks removed, when the cavity has a
// tetrahedron that is not the worker's.
func (w *worker) searchOwned(seed uint32, p int32) bool {
	m := w.m
	tets, owner, me, spare := m.tets, w.owner, w.me, w.spare
	px, py, pz := m.pts[p].x, m.pts[p].y, m.pts[p].z
	queue, rim := w.queue, w.rim
	head, tail, edge := 0, 1, 0
	first := &tets[seed]
	first.v[0] |= marked
	queue[0] = seed << 2
	if r := first.n[0]; w.inConflict(r>>2, p) {
		if w.foreign(tets[r>>2].v[r&3]) != 0 {
			w.unmark(tail)
			return false
		}
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

		// A mixed tetrahedron must not be written, not even with what it holds: marks
		// for those outside go to a spare record.
		var old, target uint32
		old = uint32(t0.v[0]) >> 31
		if in0|out0|old == 0 {
			in0 = bit(w.slowConflict(r0>>2, p))
			out0 = 1 - in0
		}
		if o := owner[t0.v[r0&3]&ownMask]; in0&bit(o != me)&bit(o != noOwner) != 0 {
			w.unmark(tail)
			return false
		}
		if target = spare; in0 != 0 {
			target = r0 >> 2
		}
		tets[target].v[0] |= marked
		queue[tail] = r0
		rim[edge] = r0
		tail += int(in0 &^ old)
		edge += int(out0 &^ old)

		old = uint32(t1.v[0]) >> 31
		if in1|out1|old == 0 {
			in1 = bit(w.slowConflict(r1>>2, p))
			out1 = 1 - in1
		}
		if o := owner[t1.v[r1&3]&ownMask]; in1&bit(o != me)&bit(o != noOwner) != 0 {
			w.unmark(tail)
			return false
		}
		if target = spare; in1 != 0 {
			target = r1 >> 2
		}
		tets[target].v[0] |= marked
		queue[tail] = r1
		rim[edge] = r1
		tail += int(in1 &^ old)
		edge += int(out1 &^ old)

		old = uint32(t2.v[0]) >> 31
		if in2|out2|old == 0 {
			in2 = bit(w.slowConflict(r2>>2, p))
			out2 = 1 - in2
		}
		if o := owner[t2.v[r2&3]&ownMask]; in2&bit(o != me)&bit(o != noOwner) != 0 {
			w.unmark(tail)
			return false
		}
		if target = spare; in2 != 0 {
			target = r2 >> 2
		}
		tets[target].v[0] |= marked
		queue[tail] = r2
		rim[edge] = r2
		tail += int(in2 &^ old)
		edge += int(out2 &^ old)
	}
	w.dead, w.edge = tail, edge
	return true
}

// unmark takes the marks from the first n tetrahedra of the queue.
func (w *worker) unmark(n int) {
	for _, r := range w.queue[:n] {
		w.m.tets[r>>2].v[0] &= ownMask
	}
}
