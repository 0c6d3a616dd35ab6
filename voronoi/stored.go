package voronoi

import (
	"errors"
	"math"
	"runtime"
	"unsafe"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/index"
)

// Stored is a diagram as flat arrays, to be written to a file: all that New computes, but
// nothing of a cell. Arrays over cells are in the order of the index, which depends on the
// coordinates alone.
type Stored struct {
	Key    []uint8   // 16 bytes, Diagram.Key
	Facts  []float64 // those that are numbers; see storeFacts
	Points []float64 // x, y, z of each cell's site, shifted and stretched
	Order  []int32   // of each cell: its number among the distinct sites
	Cell   []int32   // of each site: its cell, -1 outside
	Site   []int32   // of each cell: the representative site
	Count  []int32   // of each cell: sites at its place

	Outside         []int32
	OutsideDistance []float64
	OnWall          []int32
	Groups          []int32 // of each group: how many members, then these

	// Only where distances are stretched: the sites as they stand, the index of true
	// distances, and the number of each cell in it.
	Places     []float64
	Plain      []float64
	PlainOrder []int32
	PlainOf    []int32
}

const storedFacts = 18

// Distinct is how many places its sites inside have.
func (s *Stored) Distinct() int { return len(s.Site) }

// Store is the diagram as arrays. They are shared with it and not to be changed.
func (d *Diagram) Store() *Stored {
	d.probe.Do(d.probeCells)
	s := &Stored{
		Key: d.key[:], Facts: d.storeFacts(), Points: flat(d.tree.Points()), Order: d.tree.Originals(),
		Cell: d.cell, Site: d.site, Count: d.count,
		Outside: d.facts.Outside, OutsideDistance: d.facts.OutsideDistance, OnWall: d.facts.OnWall,
	}
	for _, g := range d.facts.Groups {
		s.Groups = append(append(s.Groups, int32(len(g.Members))), g.Members...)
	}
	if d.stretched {
		s.Places, s.Plain, s.PlainOrder, s.PlainOf = flat(d.places), flat(d.plain.Points()), d.plain.Originals(), d.plainOf
	}
	return s
}

func (d *Diagram) storeFacts() []float64 {
	f, flatness := d.facts, 0.0
	if f.Flat {
		flatness = 1
	}
	return []float64{float64(f.Inside), float64(f.Distinct), float64(f.Dimension), f.Extent[0], f.Extent[1], f.Extent[2], flatness,
		f.Lo.X, f.Lo.Y, f.Lo.Z, f.Hi.X, f.Hi.Y, f.Hi.Z, f.Origin.X, f.Origin.Y, f.Origin.Z, f.Volume, d.offered}
}

var errStored = errors.New("voronoi: arrays that are not those of a diagram")

// Restore is the diagram that New made of some sites with the same options, from what
// Store gave of it, which it keeps and which must not be changed. It checks lengths and
// ranges; that the arrays belong to the options is the caller's to know.
func Restore(s *Stored, o Options) (*Diagram, error) {
	if len(s.Key) != 16 || len(s.Facts) != storedFacts || !s.fits(IsStretch(o.Stretch)) {
		return nil, errStored
	}
	d := &Diagram{solid: o.Solid, threads: o.Threads, progress: o.Progress, memory: o.Memory,
		stretched: IsStretch(o.Stretch), stretch: o.Stretch, cell: s.Cell, site: s.Site, count: s.Count}
	if d.threads <= 0 {
		d.threads = runtime.GOMAXPROCS(0)
	}
	copy(d.key[:], s.Key)
	d.restoreFacts(s)
	if d.solid != nil {
		d.lo, d.hi = d.solid.Bounds()
		d.label()
	}
	var err error
	if d.tree, err = index.Restore(vectors(s.Points), s.Order); err != nil {
		return nil, err
	}
	if d.stretched {
		if d.plain, err = index.Restore(vectors(s.Plain), s.PlainOrder); err != nil {
			return nil, err
		}
		d.places, d.plainOf = vectors(s.Places), s.PlainOf
	}
	return d, nil
}

// Recall names who may know the tetrahedralisation from an earlier run: recall is asked
// before it would be built, and makes it of what StoreTetrahedra gave of a diagram of the
// same key, with delaunay.Restore; nil: it is to be built. Recall is to be called before
// the diagram is used.
func (d *Diagram) Recall(recall func(sites []float64, threads int) *delaunay.T) { d.recall = recall }

// StoreTetrahedra is the tetrahedralisation as arrays, which are shared with it; nil
// where none was built, or where it was recalled.
func (d *Diagram) StoreTetrahedra() *delaunay.Stored {
	d.building.Lock()
	defer d.building.Unlock()
	if d.whole == nil || !d.fresh {
		return nil
	}
	return d.whole.t.Store()
}

// fits tells whether the arrays have lengths and numbers that go together.
func (s *Stored) fits(stretched bool) bool {
	n, m := len(s.Cell), len(s.Site)
	switch {
	case n == 0, len(s.Points) != 3*m, len(s.Order) != m, len(s.Count) != m, len(s.Outside) != len(s.OutsideDistance):
		return false
	case stretched && (len(s.Places) != 3*m || len(s.Plain) != 3*m || len(s.PlainOrder) != m || len(s.PlainOf) != m):
		return false
	}
	for left := s.Groups; len(left) > 0; {
		if left[0] < 2 || int(left[0]) >= len(left) || !ranged(left[1:1+left[0]], 0, n) {
			return false
		}
		left = left[1+left[0]:]
	}
	return ranged(s.Cell, -1, m) && ranged(s.Site, 0, n) && ranged(s.Outside, 0, n) && ranged(s.OnWall, 0, n) && ranged(s.PlainOf, 0, m)
}

// ranged tells whether all numbers lie from lo to n-1.
func ranged(list []int32, lo int32, n int) bool {
	for _, x := range list {
		if x < lo || int(x) >= n {
			return false
		}
	}
	return true
}

func (d *Diagram) restoreFacts(s *Stored) {
	v := s.Facts
	d.facts = Facts{
		Sites: len(s.Cell), Inside: int(v[0]), Distinct: int(v[1]), Dimension: int(v[2]),
		Extent: [3]float64{v[3], v[4], v[5]}, Flat: v[6] != 0,
		Lo: Vec{X: v[7], Y: v[8], Z: v[9]}, Hi: Vec{X: v[10], Y: v[11], Z: v[12]},
		Origin: Vec{X: v[13], Y: v[14], Z: v[15]}, Volume: v[16],
		Outside: s.Outside, OutsideDistance: s.OutsideDistance, OnWall: s.OnWall,
	}
	d.origin = d.facts.Origin
	d.probe.Do(func() { d.offered = v[17] })
	for left := s.Groups; len(left) > 0; left = left[1+left[0]:] {
		members := left[1 : 1+left[0]]
		d.facts.Groups = append(d.facts.Groups, Group{Representative: members[0], Members: members})
	}
}

// flat is vectors as one run of numbers, vectors the way back; both share the memory.
func flat(v []Vec) []float64 {
	if len(v) == 0 {
		return nil
	}
	return unsafe.Slice(&v[0].X, 3*len(v))
}

func vectors(x []float64) []Vec {
	if len(x) < 3 {
		return nil
	}
	return unsafe.Slice((*Vec)(unsafe.Pointer(&x[0])), len(x)/3)
}

var _ = [1]struct{}{}[unsafe.Sizeof(Vec{})-3*unsafe.Sizeof(math.Pi)] // a Vec is three float64
