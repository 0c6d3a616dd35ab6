package overlay

import (
	"cmp"
	"context"
	"math"
	"slices"
	"sync"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
)

// neighbour is a bisector between a site of b and one of its neighbours: it passes through
// the middle between them, and the normal points from the site.
type neighbour struct {
	site          int32
	size          float64 // length of normal
	normal, place Vec     // place: where the neighbour stands
}

// cells are the neighbours and the volumes of the cells of b: all of them, or as they are
// asked for.
type cells struct {
	b      *voronoi.Diagram
	metric Vec           // squares of the factors of the distances
	lists  [][]neighbour // by representative
	volume []float64     // of the polyhedron, before a solid that is not convex ends it

	mu    sync.Mutex // of lists and volume where few are asked for
	few   bool
	known []bool
}

func cellsOf(ctx context.Context, b *voronoi.Diagram, few bool) (*cells, error) {
	s := b.Stretch()
	x := &cells{b: b, few: few, lists: make([][]neighbour, b.Len()), volume: make([]float64, b.Len()),
		metric: Vec{X: float64(s.X * s.X), Y: float64(s.Y * s.Y), Z: float64(s.Z * s.Z)}}
	if few {
		x.known = make([]bool, b.Len())
		return x, nil
	}
	return x, b.EachCell(ctx, nil, func(site int32, at Vec, c *polyhedron.Cell) error {
		x.lists[site], x.volume[site] = x.read(at, c)
		return nil
	})
}

// of are the neighbours of a site, nearest first, and the volume of its cell.
func (x *cells) of(site int32) ([]neighbour, float64, error) {
	if !x.few {
		return x.lists[site], x.volume[site], nil
	}
	x.mu.Lock()
	defer x.mu.Unlock()
	if !x.known[site] {
		var c polyhedron.Cell
		at := x.b.Place(site)
		if err := x.b.Insert(at, &c); err != nil {
			return nil, 0, err
		}
		x.lists[site], x.volume[site] = x.read(at, &c)
		x.known[site] = true
	}
	return x.lists[site], x.volume[site], nil
}

// read lists the neighbours of a cell. The plane between two sites comes out the same to
// the last bit from both, but for its sign.
func (x *cells) read(at Vec, c *polyhedron.Cell) ([]neighbour, float64) {
	if c.Empty() {
		return nil, 0
	}
	list := make([]neighbour, 0, c.NumFaces())
	for i := range c.NumFaces() {
		label, _ := c.Face(i)
		if label < 0 {
			continue
		}
		to := x.b.Place(label)
		n := sub(to, at)
		n = Vec{X: float64(n.X * x.metric.X), Y: float64(n.Y * x.metric.Y), Z: float64(n.Z * x.metric.Z)}
		list = append(list, neighbour{label, length(n), n, to})
	}
	slices.SortFunc(list, func(p, q neighbour) int { return cmp.Or(cmp.Compare(p.size, q.size), cmp.Compare(p.site, q.site)) })
	return slices.CompactFunc(list, func(p, q neighbour) bool { return p.site == q.site }), max(0, c.Volume())
}

func dot(a, b Vec) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z) }

func sub(a, b Vec) Vec { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }

func add(a, b Vec) Vec { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }

func length(a Vec) float64 { return math.Sqrt(dot(a, a)) }
