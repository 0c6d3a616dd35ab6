package delaunay

import (
	"context"

	"gonum.org/v1/gonum/spatial/r3"
)

// T is the Delaunay tetrahedralisation of a set of sites. Its methods that do not
// change it may be called from several goroutines at once.
type T struct {
	mesh
	dimension int
	place     []int32 // site -> point, equal sites to the same one; 0: removed
	repeats   []int32 // sites equal to one with a lower index, ascending
	removed   int     // places that were removed
	real      int     // tets[:real] are real,
	ghosts    int     // the rest ghosts
	ownSites  bool    // sites is no longer the caller's slice
	borrowed  bool    // the arrays are those of a Stored and not to be written to
	edit      *worker // of Insert and Remove
}

// Build makes the Delaunay tetrahedralisation of sites. Sites that coincide become
// one vertex, that of the lowest index (see Representative). It fails with a
// *CoordinateError, a *MemoryError, ErrTooMany or the context's error; sites on a
// line or in a plane are no error but have a lower Dimension and no tetrahedra.
func Build(ctx context.Context, sites []r3.Vec, o Options) (*T, error) {
	flat := make([]float64, 0, 3*len(sites))
	for _, s := range sites {
		flat = append(flat, s.X, s.Y, s.Z)
	}
	return BuildFlat(ctx, flat, o)
}

// BuildFlat is Build for coordinates x, y, z of one site after another. The slice is
// kept and must not be changed while the result is in use.
func BuildFlat(ctx context.Context, sites []float64, o Options) (*T, error) {
	if len(sites)%3 != 0 {
		return nil, ErrShape
	}
	n := len(sites) / 3
	if n > mostSites {
		return nil, ErrTooMany
	}
	if need := Estimate(n); o.Memory > 0 && need > o.Memory {
		return nil, &MemoryError{need, o.Memory}
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	f, bad := newFrame(sites, defaultThreads(o.Threads))
	if bad >= 0 {
		return nil, &CoordinateError{bad}
	}
	t := &T{mesh: mesh{frame: f, sites: sites}}
	b := &builder{t: t, m: &t.mesh, ctx: ctx, options: o, threads: defaultThreads(o.Threads)}
	if err := b.run(); err != nil {
		return nil, err
	}
	return t, nil
}

// builder runs one build.
type builder struct {
	t       *T
	m       *mesh
	ctx     context.Context
	options Options
	threads int
	done    int
	ends    []int
	corners [4]int32
	main    *worker
	crew    *crew
}

func (b *builder) run() error {
	m, n := b.m, len(b.m.sites)/3
	m.setLimits()
	m.tets = make([]tet, int(float64(n)*tetsPerSite)+m.block()*(b.threads+1))
	AdviseHugePages(m.tets)
	stop := b.faultPages()
	m.order, b.ends = insertionOrder(m.frame, m.sites, b.threads)
	b.gather()
	stop()
	b.main = newWorker(m)
	w := b.main
	var dimension int
	dimension, b.corners = w.startSimplex()
	b.t.dimension = dimension
	if dimension == 3 {
		if err := b.insertAll(); err != nil {
			return err
		}
	} else {
		b.lowDimension()
	}
	b.finish()
	return nil
}

// gather copies the sites into the order of insertion.
func (b *builder) gather() {
	m, n := b.m, len(b.m.order)
	m.pts = make([]point, n+1)
	AdviseHugePages(m.pts)
	m.pts[0].tet = noTet
	inChunks(n, b.threads, func(lo, hi int) {
		for i := lo; i < hi; i++ {
			x, y, z := m.frame.internal(m.sites, int(m.order[i]))
			m.pts[i+1] = point{x: x, y: y, z: z, tet: noTet}
		}
	})
}

// faultPages touches the tetrahedra's memory from another goroutine while the sites
// are sorted, if there is more than one thread; stop ends it.
func (b *builder) faultPages() (stop func()) {
	if b.threads < 2 || len(b.m.tets) < 1<<16 {
		return func() {}
	}
	quit, ended := make(chan struct{}), make(chan struct{})
	tets := b.m.tets
	go func() {
		defer close(ended)
		const page = 4096 / tetBytes
		for i := 0; i < len(tets); i += page {
			tets[i].lo = 0
			if i%(page<<8) == 0 {
				select {
				case <-quit:
					return
				default:
				}
			}
		}
	}()
	return func() { close(quit); <-ended }
}

const stepsBetweenLooks = 4096

// look reports progress and whether the context has ended.
func (b *builder) look() error {
	if b.options.Progress != nil {
		b.options.Progress(b.done, len(b.m.order))
	}
	return b.ctx.Err()
}

func (b *builder) insertAll() error {
	if b.threads > 1 {
		b.crew = newCrew(b)
	}
	begin := 1
	for _, end := range b.ends {
		var err error
		if b.threads > 1 && begin > 1 && end+1-begin >= leastParallel {
			err = b.crew.insertRound(begin, end+1)
		} else {
			points := make([]int32, 0, end+1-begin)
			for p := begin; p <= end; p++ {
				if b.isCorner(int32(p)) {
					b.done++
				} else {
					points = append(points, int32(p))
				}
			}
			err = b.insertSerially(points)
		}
		if err != nil {
			return err
		}
		begin = end + 1
	}
	return b.look()
}

func (b *builder) isCorner(p int32) bool {
	return p == b.corners[0] || p == b.corners[1] || p == b.corners[2] || p == b.corners[3]
}

func (b *builder) insertSerially(points []int32) error {
	w := b.main
	for _, p := range points {
		if b.done++; b.done%stepsBetweenLooks == 0 {
			if err := b.look(); err != nil {
				return err
			}
		}
		for !w.insert(p) {
			if err := b.makeRoom(len(b.m.order) - b.done + w.edge); err != nil {
				return err
			}
		}
	}
	return nil
}

// insert adds point p, or notes that it is equal to a vertex. It reports false and
// does nothing when the mesh has to grow.
func (w *worker) insert(p int32) bool {
	seed, equal := w.locate(p)
	if equal != 0 {
		w.twins = append(w.twins, twin{p, equal})
		return true
	}
	w.search(seed, p)
	if !w.reserve(w.edge - w.dead) {
		w.unmark(w.dead)
		return false
	}
	w.fill(p)
	return true
}

// makeRoom sees to it that the mesh has records for n more points, as far as points
// usually need them, or a block for each worker at least.
func (b *builder) makeRoom(n int) error {
	m := b.m
	room := len(m.tets) - int(m.used)
	if room >= n*6+m.block()*(b.threads+1) {
		return nil
	}
	by := max(len(m.tets)/8, n*6) + m.block()*(b.threads+1)
	if limit := b.options.Memory; limit > 0 {
		fixed := Estimate(len(m.order)) - int64(float64(len(m.order))*(tetsPerSite*tetBytes+sortBytes))
		if need := fixed + tetBytes*int64(2*len(m.tets)+by); need > limit {
			return &MemoryError{need, limit}
		}
	}
	m.grow(by)
	return nil
}

// anyReal returns a real tetrahedron.
func (b *builder) anyReal() uint32 {
	m := b.m
	i := m.pts[b.corners[0]].tet
	if m.tets[i].lo == loGhost {
		i = m.tets[i].n[ghostIn(&m.tets[i].v)] >> 2
	}
	return i
}

// lowDimension finds equal sites without a tetrahedralisation.
func (b *builder) lowDimension() {
	m := b.m
	list := make([]int32, len(m.order))
	for i := range list {
		list[i] = int32(i + 1)
	}
	sortPoints(m, list)
	for i := 1; i < len(list); i++ {
		if m.same(list[i-1], list[i]) {
			b.main.twins = append(b.main.twins, twin{list[i], list[i-1]})
			list[i] = list[i-1]
		}
	}
}

// finish settles which of equal sites represents them, and sorts real tetrahedra
// before ghosts.
func (b *builder) finish() {
	m, t := b.m, b.t
	workers := []*worker{b.main}
	if b.crew != nil {
		workers = b.crew.workers
	}
	var twins []twin
	for _, w := range workers {
		twins = append(twins, w.twins...)
	}
	for _, w := range twins {
		p, v := w.point-1, w.vertex-1
		if m.order[p] < m.order[v] {
			m.order[p], m.order[v] = m.order[v], m.order[p]
		}
	}
	t.place = make([]int32, len(m.order))
	for i, s := range m.order {
		t.place[s] = int32(i + 1)
	}
	for _, w := range twins {
		s := m.order[w.point-1]
		t.place[s] = w.vertex
		t.repeats = append(t.repeats, int32(s))
	}
	sortInts(t.repeats)
	if t.dimension == 3 {
		t.compact(workers)
	} else {
		m.tets, m.used = nil, 0
	}
}
