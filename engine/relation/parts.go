package relation

import (
	"math"
	"runtime"
	"slices"
	"sync"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/solid"
)

// Part is the rows of the input that share one diagram: those with one value of
// FOR EACH, or all of them; and of these, those in one zone.
//
// Rows stand in the order of their identifiers, whatever their order in the
// input. Several rows may refer to one site (equal coordinates); each then has
// its share of what the site's cell measures.
type Part struct {
	Rows  []int32     // rows of the input
	Site  []int32     // of each row, its site in Sites
	Share []float64   // of each row, 1 / the number of rows of its site; nil: all 1
	Sites []r3.Vec    // distinct places, in the order of their first row
	Zone  int32       // of Clauses.Zones, -1 where there are none
	Group int32       // equal for parts with one value of FOR EACH
	Solid solid.Solid // that closes the diagram, nil: none
}

// share is the part of its site's measures that row k has.
func (p *Part) share(k int) float64 {
	if p.Share == nil {
		return 1
	}
	return p.Share[k]
}

// arrange sorts the input into parts. It refuses what has no partition:
// missing identifiers and coordinates, identifiers that repeat in a part.
func arrange(b *Bound, env *Env, input *column.Table, order *order, said *findings) ([]*Part, error) {
	rows, err := admitted(b, env, input)
	if err != nil {
		return nil, err
	}
	order.sort(rows)
	var together [][]int32 // rows with one value of FOR EACH
	for lo := 0; lo < len(rows); {
		hi := lo + 1
		for hi < len(rows) && order.samePart(rows[lo], rows[hi]) {
			hi++
		}
		if err := distinct(b, input, order, rows[lo:hi]); err != nil {
			return nil, err
		}
		together = append(together, slices.Clip(rows[lo:hi]))
		lo = hi
	}
	if err := scattered(b, env, input, order, together); err != nil {
		return nil, err
	}
	parts, err := zoned(b, input, together, said)
	if err != nil {
		return nil, err
	}
	for _, p := range parts {
		place(b, env, input, p)
	}
	return parts, duplicates(b, env, input, order, parts)
}

// position is the place of a row; -0 counts as 0.
func position(b *Bound, input *column.Table, row int32) r3.Vec {
	return r3.Vec{
		X: coordinate(&input.Cols[b.X], row),
		Y: coordinate(&input.Cols[b.Y], row),
		Z: coordinate(&input.Cols[b.Z], row),
	}
}

// placesOf are the positions of rows.
func placesOf(b *Bound, env *Env, input *column.Table, rows []int32) []r3.Vec {
	at := make([]r3.Vec, len(rows))
	delaunay.AdviseHugePages(at)
	threads := env.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	if len(rows) < 1<<14 {
		threads = 1
	}
	var all sync.WaitGroup
	for i := range threads {
		lo, hi := i*len(rows)/threads, (i+1)*len(rows)/threads
		all.Go(func() {
			for k := lo; k < hi; k++ {
				at[k] = position(b, input, rows[k])
			}
		})
	}
	all.Wait()
	return at
}

func coordinate(v *column.Vector, row int32) float64 {
	if v.Type == column.Integer {
		return float64(v.I[row])
	}
	return v.F[row] + 0 // -0 + 0 is 0
}

// place finds the distinct places of a part's rows.
func place(b *Bound, env *Env, input *column.Table, p *Part) {
	p.Site = make([]int32, len(p.Rows))
	delaunay.AdviseHugePages(p.Site)
	at := placesOf(b, env, input, p.Rows)
	if p.Sites = at; env.Diagrams.KnownDistinct(at, optionsOf(b, env, p)) {
		for k := range p.Site {
			p.Site[k] = int32(k)
		}
		return
	}
	p.Sites = at[:0] // a place is not behind its first row
	seen := newPlaces(len(p.Rows))
	var near [64]r3.Vec
	for from := 0; from < len(at); from += len(near) {
		n := copy(near[:], at[from:])
		seen.touch(near[:n])
		for k := range n {
			site, isNew := seen.index(near[k], p.Sites)
			if isNew {
				p.Sites = append(p.Sites, near[k])
			}
			p.Site[from+k] = site
		}
	}
	p.Sites = slices.Clip(p.Sites)
	if len(p.Sites) == len(p.Rows) {
		return
	}
	count := make([]int32, len(p.Sites))
	for _, s := range p.Site {
		count[s]++
	}
	p.Share = make([]float64, len(p.Rows))
	for k, s := range p.Site {
		p.Share[k] = 1 / float64(count[s])
	}
}

// places is an open-addressing table of positions.
type places struct {
	slots []int32 // site + 1
	mask  uint64
	n     int32
	sum   int32 // of what touch has read; it means nothing
}

func newPlaces(n int) *places {
	size := 16
	for size < 2*n {
		size *= 2
	}
	return &places{slots: make([]int32, size), mask: uint64(size - 1)}
}

// index is the number of the place, and whether it is new (then the caller
// appends it to sites).
func (t *places) index(at r3.Vec, sites []r3.Vec) (int32, bool) {
	for i := hashOf(at) & t.mask; ; i = (i + 1) & t.mask {
		switch s := t.slots[i]; {
		case s == 0:
			t.n++
			t.slots[i] = t.n
			return t.n - 1, true
		case sites[s-1] == at:
			return s - 1, false
		}
	}
}

// touch reads the slots that some places will look at, so that the memory answers all of
// them at once and not one after the other.
func (t *places) touch(near []r3.Vec) {
	for _, at := range near {
		t.sum += t.slots[hashOf(at)&t.mask]
	}
}

func hashOf(at r3.Vec) uint64 {
	h := math.Float64bits(at.X)
	h = mix(h) ^ math.Float64bits(at.Y)
	h = mix(h) ^ math.Float64bits(at.Z)
	return mix(h)
}

// mix spreads the bits of a word (the finaliser of a multiplicative hash).
func mix(h uint64) uint64 {
	h ^= h >> 32
	h *= 0x9e3779b97f4a7c15
	h ^= h >> 29
	h *= 0xbf58476d1ce4e5b9
	return h ^ h>>32
}
