package overlay

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"
	"sync"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Vec is a point or a vector in space.
type Vec = voronoi.Vec

// ErrOpen is returned for a diagram without a solid.
var ErrOpen = errors.New("overlay: a diagram without a solid has pieces without an end")

// ErrUndivided is returned for two different solids that cannot be cut by one another: they
// are not convex, have no convex parts, and their surfaces cannot be arranged.
var ErrUndivided = errors.New("overlay: two different solids, neither of them convex or made of convex parts")

// Piece is space that a cell of the first diagram and one of the second share.
type Piece struct {
	A, B   int32   // sites of the two, representatives of their groups
	Part   int32   // number in Options.Parts, 0 without
	Volume float64 // more than 0
}

// Options say what of the pieces is measured. The zero value is good.
type Options struct {
	// Parts are regions in which pieces are measured one by one; none: as wholes. They
	// may overlap and reach out of the solids.
	Parts []solid.Divided
}

// Least share of the smaller cell that is a piece.
const least = 1e-12

// Pieces are the pieces of the cells of the given sites of a (nil: all) and all cells of
// b, by the site of a as asked for, then by that of b, then by part: entry i belongs to the
// i-th site asked for. Sites in one place have the same list. Cells are worked on by as
// many goroutines as a has.
//
// It fails with ErrOpen, ErrUndivided, *voronoi.NoSuchSiteError, and ctx's error.
func Pieces(ctx context.Context, a, b *voronoi.Diagram, sites []int32, o Options) ([][]Piece, error) {
	if a.Solid() == nil || b.Solid() == nil {
		return nil, ErrOpen
	}
	x, err := newOverlay(ctx, a, b, sites, o)
	if err != nil {
		return nil, err
	}
	if sites == nil {
		sites = make([]int32, a.Len())
		for i := range sites {
			sites[i] = int32(i)
		}
	}
	found := make([][]Piece, a.Len()) // by representative
	err = a.EachCell(ctx, sites, func(site int32, at Vec, c *polyhedron.Cell) error {
		w := x.works.Get().(*work)
		defer x.works.Put(w)
		list, err := w.flood(site, at, c)
		found[site] = list
		return err
	})
	if err != nil {
		return nil, err
	}
	lists := make([][]Piece, len(sites))
	for i, s := range sites {
		if r := a.Representative(s); r >= 0 {
			lists[i] = found[r]
		}
	}
	return lists, nil
}

// overlay is what the cells of one call share.
type overlay struct {
	a, b    *voronoi.Diagram
	cells   *cells
	ends    endings // how the solids end the pieces
	parts   []solid.Divided
	lo, hi  []Vec     // bounds of parts
	works   sync.Pool // of *work
	labelOf int32     // label of a cut towards site s of b: labelOf + s
}

func newOverlay(ctx context.Context, a, b *voronoi.Diagram, sites []int32, o Options) (*overlay, error) {
	x := &overlay{a: a, b: b, parts: o.Parts, labelOf: int32(a.Len())}
	if int64(a.Len())+int64(b.Len()) >= math.MaxInt32 {
		return nil, voronoi.ErrTooMany
	}
	var err error
	if x.ends, err = endingsOf(a.Solid(), b.Solid()); err != nil {
		return nil, err
	}
	for _, p := range o.Parts {
		lo, hi := p.Bounds()
		x.lo, x.hi = append(x.lo, lo), append(x.hi, hi)
	}
	few := sites != nil && len(sites) < b.Len()/8
	if x.cells, err = cellsOf(ctx, b, few); err != nil {
		return nil, err
	}
	x.works.New = func() any { return &work{x: x, seen: map[int32]bool{}} }
	return x, nil
}

// work is the scratch of one goroutine.
type work struct {
	x     *overlay
	cell  polyhedron.Cell // the cell of a, ended by b's solid where that is convex
	piece polyhedron.Cell
	part  polyhedron.Cell
	chip  polyhedron.Cell
	seen  map[int32]bool
	queue []int32
	near  []neighbour
	plane []solid.Plane
	solid solid.Work
	out   solid.Measures
	list  []Piece
}

// flood finds the pieces of one cell of a, whose place is at.
func (w *work) flood(site int32, at Vec, c *polyhedron.Cell) ([]Piece, error) {
	x := w.x
	w.cell.CopyFrom(c)
	whole := max(0, w.cell.Volume())
	x.ends.enter(&w.cell, at)
	if w.cell.Empty() || x.ends.nothing {
		return nil, nil
	}
	w.list = w.list[:0]
	clear(w.seen)
	inside := middle(&w.cell)
	seed, _ := x.b.Nearest(add(at, inside))
	if seed < 0 {
		return nil, nil
	}
	w.queue = append(w.queue[:0], seed)
	w.seen[seed] = true
	tol := flatShare * (w.cell.Farthest() + length(inside))
	for k := 0; k < len(w.queue); k++ {
		j := w.queue[k]
		near, volume, err := x.cells.of(j)
		if err != nil {
			return nil, err
		}
		w.cut(at, x.b.Place(j), near, tol)
		if w.piece.Empty() {
			continue
		}
		w.spread()
		if err := w.measure(Piece{A: site, B: j}, at, least*min(whole, volume)); err != nil {
			return nil, err
		}
	}
	slices.SortFunc(w.list, func(p, q Piece) int { return cmp.Or(cmp.Compare(p.B, q.B), cmp.Compare(p.Part, q.Part)) })
	return slices.Clone(w.list), nil
}

// middle is a point inside a convex polyhedron.
func middle(c *polyhedron.Cell) Vec {
	lo, hi := c.Bounds()
	if v, first := c.VolumeAndFirst(); v > 0 {
		m := Vec{X: first.X / v, Y: first.Y / v, Z: first.Z / v}
		if m.X >= lo.X && m.X <= hi.X && m.Y >= lo.Y && m.Y <= hi.Y && m.Z >= lo.Z && m.Z <= hi.Z {
			return m
		}
	}
	var m Vec
	n := float64(c.NumVertices())
	for _, v := range c.Vertices() {
		m = Vec{X: m.X + v.X/n, Y: m.Y + v.Y/n, Z: m.Z + v.Z/n}
	}
	return m
}

// cut makes w.piece what of w.cell is nearer to a site of b, at place, than to its
// neighbours.
func (w *work) cut(at, place Vec, near []neighbour, tol float64) {
	w.piece.CopyFrom(&w.cell)
	here := sub(place, at)
	for i := range near {
		n := &near[i]
		// The plane through the middle of the two sites, from differences to the place
		// of a's site, which lose nothing far from the origin.
		d := dot(n.normal, add(sub(n.place, at), here)) / 2
		if clipFlat(&w.piece, n.normal, d, n.size*tol, w.x.labelOf+n.site); w.piece.Empty() {
			return
		}
	}
}

// flatShare of a cell's reach is how far a corner may stand out of a plane by rounding.
const flatShare = 4e-13

// clipFlat cuts c by a half-space, unless all of it lies on one side but for rounding.
func clipFlat(c *polyhedron.Cell, n Vec, d, tol float64, label int32) {
	most, lowest := math.Inf(-1), math.Inf(1)
	for _, v := range c.Vertices() {
		s := dot(n, v) - d
		most, lowest = max(most, s), min(lowest, s)
	}
	switch {
	case most <= tol:
	case lowest >= -tol:
		c.SetBox(Vec{}, Vec{}, [6]int32{})
	default:
		c.Clip(n, d, label)
	}
}

// spread queues the cells of b beyond the faces of the piece.
func (w *work) spread() {
	for i := range w.piece.NumFaces() {
		label, _ := w.piece.Face(i)
		if label < w.x.labelOf {
			continue // a face of a's cell
		}
		if k := label - w.x.labelOf; !w.seen[k] {
			w.seen[k] = true
			w.queue = append(w.queue, k)
		}
	}
}

// measure adds the piece, or what of it lies in each part, to the list.
func (w *work) measure(p Piece, at Vec, least float64) error {
	put := func(c *polyhedron.Cell, part int) error {
		v, err := w.volume(c, at)
		if err == nil && v > least && v > 0 {
			p.Part, p.Volume = int32(part), v
			w.list = append(w.list, p)
		}
		return err
	}
	if len(w.x.parts) == 0 {
		return put(&w.piece, 0)
	}
	lo, hi := w.piece.Bounds()
	for i, body := range w.x.parts {
		if !meets(sub(w.x.lo[i], at), sub(w.x.hi[i], at), lo, hi) {
			continue
		}
		var sum voronoi.Sum
		err := w.eachConvex(&w.part, &w.piece, body, at, func(c *polyhedron.Cell) error {
			v, err := w.volume(c, at)
			sum.Add(v)
			return err
		})
		if err != nil {
			return err
		}
		if v := sum.Value(); v > least && v > 0 {
			p.Part, p.Volume = int32(i), v
			w.list = append(w.list, p)
		}
	}
	return nil
}

// eachConvex calls do for what of c lies in each convex part of a solid, in the buffer to.
func (w *work) eachConvex(to, c *polyhedron.Cell, body solid.Divided, at Vec, do func(c *polyhedron.Cell) error) error {
	lo, hi := c.Bounds()
	for i := range body.NumParts() {
		if plo, phi := body.PartBounds(i); !meets(sub(plo, at), sub(phi, at), lo, hi) {
			continue
		}
		to.CopyFrom(c)
		w.plane = body.PartPlanes(i, at, w.plane[:0])
		for _, p := range w.plane {
			if to.Clip(p.N, p.D, polyhedron.Wall(0)); to.Empty() {
				break
			}
		}
		if to.Empty() {
			continue
		}
		if err := do(to); err != nil {
			return err
		}
	}
	return nil
}

// meets tells whether two boxes share more than their surfaces.
func meets(alo, ahi, blo, bhi Vec) bool {
	return alo.X < bhi.X && blo.X < ahi.X && alo.Y < bhi.Y && blo.Y < ahi.Y && alo.Z < bhi.Z && blo.Z < ahi.Z
}
