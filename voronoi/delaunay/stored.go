package delaunay

import (
	"errors"
	"slices"
	"sync/atomic"
	"unsafe"
)

// Stored is a tetrahedralisation as it lies in memory, in flat arrays to be written to a
// file and used again from there without a copy. It holds what Build computed, spheres
// included, for machines of the same byte order; unlike Arrays it depends on the order of
// insertion, and whoever reads it trusts it: only what could lead out of the arrays is
// checked. The sites are not in it.
type Stored struct {
	Facts   []int32   // dimension, real tetrahedra, removed places
	Order   []int32   // of each point but the ghost: its site
	Place   []int32   // of each site: its point
	Repeats []int32   // sites equal to one with a lower index
	Points  []float64 // 4 a point
	Tets    []int32   // 16 a tetrahedron
}

const (
	storedFacts   = 3
	wordsPerPoint = 4
	wordsPerTet   = 16
)

var (
	_ = [1]struct{}{}[unsafe.Sizeof(point{})-8*wordsPerPoint]
	_ = [1]struct{}{}[unsafe.Sizeof(tet{})-4*wordsPerTet]
)

// Store gives the tetrahedralisation as arrays, which share its memory and must not be
// changed; nor must it, as long as they are in use.
func (t *T) Store() *Stored {
	s := &Stored{
		Facts: []int32{int32(t.dimension), int32(t.real), int32(t.removed)},
		Order: recast[int32](t.order), Place: t.place, Repeats: t.repeats,
	}
	if len(t.pts) > 0 {
		s.Points = unsafe.Slice((*float64)(unsafe.Pointer(&t.pts[0])), wordsPerPoint*len(t.pts))
	}
	if len(t.tets) > 0 {
		s.Tets = unsafe.Slice((*int32)(unsafe.Pointer(&t.tets[0])), wordsPerTet*len(t.tets))
	}
	return s
}

// Bytes is how much memory the arrays take.
func (s *Stored) Bytes() int64 {
	return 4*int64(len(s.Facts)+len(s.Order)+len(s.Place)+len(s.Repeats)+len(s.Tets)) + 8*int64(len(s.Points))
}

var errStored = errors.New("delaunay: stored arrays that do not fit each other")

// Restore is the tetrahedralisation that Store gave, of the same sites. It uses the
// arrays where they are (they may lie in a mapped file) and never writes to them: Insert
// and Remove copy them first.
func Restore(s *Stored, sites []float64, threads int) (*T, error) {
	n := len(sites) / 3
	if len(sites)%3 != 0 || len(s.Facts) != storedFacts || len(s.Order) != n || len(s.Place) != n ||
		len(s.Points) != wordsPerPoint*(n+1) || len(s.Tets)%wordsPerTet != 0 {
		return nil, errStored
	}
	f, bad := newFrame(sites, threads)
	if bad >= 0 {
		return nil, &CoordinateError{bad}
	}
	t := &T{
		mesh:      mesh{frame: f, sites: sites, order: recast[uint32](s.Order)},
		dimension: int(s.Facts[0]), real: int(s.Facts[1]), removed: int(s.Facts[2]),
		place: s.Place, repeats: s.Repeats, borrowed: true,
	}
	t.pts = aligned[point](s.Points, n+1)
	t.tets = aligned[tet](s.Tets, len(s.Tets)/wordsPerTet)
	t.used, t.ghosts = int64(len(t.tets)), len(t.tets)-t.real
	if t.dimension < -1 || t.dimension > 3 || t.real < 0 || t.ghosts < 0 || !t.inRange(threads) {
		return nil, errStored
	}
	t.setLimits()
	return t, nil
}

// inRange tells whether all numbers of points, sites and tetrahedra name one.
func (t *T) inRange(threads int) bool {
	n, count := len(t.place), uint32(len(t.tets))
	named := func(list []int32, lo, hi int32) bool {
		return !slices.ContainsFunc(list, func(x int32) bool { return x < lo || x > hi })
	}
	if !named(t.place, 0, int32(n)) || !named(recast[int32](t.order), 0, int32(n-1)) || !named(t.repeats, 0, int32(n-1)) {
		return false
	}
	var wrong atomic.Bool
	inChunks(len(t.tets), threads, func(lo, hi int) {
		var high int32 // a negative one is above all as an unsigned number
		var far uint32
		for i := lo; i < hi; i++ {
			q := &t.tets[i]
			for k := range 4 {
				high = int32(max(uint32(high), uint32(q.v[k])))
				far = max(far, q.n[k]>>2)
			}
		}
		if lo < hi && (uint32(high) > uint32(n) || far >= count) {
			wrong.Store(true)
		}
	})
	inChunks(len(t.pts), threads, func(lo, hi int) {
		for i := lo; i < hi; i++ {
			if x := t.pts[i].tet; x != noTet && x >= count {
				wrong.Store(true)
			}
		}
	})
	return !wrong.Load()
}

// own copies what is borrowed before it is changed.
func (t *T) own() {
	if !t.borrowed {
		return
	}
	t.borrowed = false
	t.order, t.place, t.repeats = slices.Clone(t.order), slices.Clone(t.place), slices.Clone(t.repeats)
	t.pts, t.tets = slices.Clone(t.pts), slices.Clone(t.tets)
}

// recast sees numbers of 32 bits as signed or unsigned.
func recast[to, from int32 | uint32](list []from) []to {
	if len(list) == 0 {
		return nil
	}
	return unsafe.Slice((*to)(unsafe.Pointer(&list[0])), len(list))
}

// aligned sees numbers as records, in place where they are aligned for them.
func aligned[to point | tet, from int32 | float64](list []from, n int) []to {
	if n == 0 {
		return nil
	}
	var zero to
	if uintptr(unsafe.Pointer(&list[0]))%unsafe.Alignof(zero) == 0 {
		return unsafe.Slice((*to)(unsafe.Pointer(&list[0])), n)
	}
	out := make([]to, n)
	copy(unsafe.Slice((*from)(unsafe.Pointer(&out[0])), len(list)), list)
	return out
}
