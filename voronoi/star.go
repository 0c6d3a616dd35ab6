package voronoi

import (
	"math"
	"slices"

	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
)

// walker measures cells of a dual. It is the scratch of one goroutine.
type walker struct {
	g     *dual
	stamp uint32
	seen  []uint32 // by point: the stamp of the last star that it was in

	// Scratch of quickStar: neighbours by the order in which they were met, their order
	// by number, the vertices by that of the tetrahedra, and the table.
	local     []uint32 // by point: stamp and number in the star
	neighbour [mostNeighbours]int32
	byNumber  [mostNeighbours]uint64
	entry     [mostNeighbours]uint64 // of each face, where it begins
	corners   [2 * mostNeighbours][4]int32
	centres   [2 * mostNeighbours]centre
	vertex    [2 * mostNeighbours]Vec
	code      [2 * mostNeighbours]uint8
	links     [mostNeighbours][mostNeighbours]uint16 // tetrahedron << 8 | neighbour after
	met       int

	// The star at hand.
	p     int32
	own   Vec
	faces []face
	loop  []Vec   // Voronoi vertices around each face, seen from p
	out   []uint8 // of each, the outcode
	open  bool    // p lies on the convex hull
	any   uint8   // all outcodes together
	// vertices is how many there are in the loops.
	vertices int
	far2     float64 // squared distance of the farthest vertex
	near2    float64 // squared distance of the nearest site, which is a neighbour

	// The part of the cell in the box: see boxed.go.
	lo, hi  Vec // seen from p
	polygon rim
	spare   rim
	walls   [6]wall
	ends    [12]int8 // upper less lower ends on the edges of the box

	sums cellSums
	cell polyhedron.Cell
	near []index.Neighbour
}

// face is the Voronoi face towards the point q.
type face struct {
	q        int32
	n        Vec   // place of q, seen from p
	from, to int32 // loop[from:to]

	tet    uint32 // where the walk around the edge begins
	ip, iq uint8  // the corners of p and q there
}

func newWalker(g *dual) *walker {
	return &walker{g: g, seen: make([]uint32, len(g.at)), local: make([]uint32, len(g.at))}
}

// afterPair[i][j] are the corners x and y that make (i, j, x, y) an even permutation.
var afterPair = func() (after [4][4][2]uint8) {
	for i := range uint8(4) {
		for j := range uint8(4) {
			for x := range uint8(4) {
				y := 6 - i - j - x
				if i == j || i == x || j == x || y > 3 {
					continue
				}
				p := [4]uint8{i, j, x, y}
				odd := false
				for a := range p {
					for b := range a {
						odd = odd != (p[b] > p[a])
					}
				}
				if !odd {
					after[i][j] = [2]uint8{x, y}
				}
			}
		}
	}
	return after
}()

// star collects the faces of the cell of p, by neighbour. The loops run
// counter-clockwise seen from outside and begin where the numbers of the neighbours say:
// they do not depend on how the tetrahedra are numbered.
func (w *walker) star(p int32) {
	if w.stamp >= 1<<24-2 {
		w.stamp = 0
		clear(w.seen)
		clear(w.local)
	}
	if !w.quickStar(p) {
		w.slowStar(p)
	}
}

// slowStar walks around every Delaunay edge at p.
func (w *walker) slowStar(p int32) {
	g := w.g
	w.stamp++
	w.p, w.own = p, g.at[p].Vec
	w.faces, w.loop, w.out = w.faces[:0], w.loop[:0], w.out[:0]
	w.open, w.any, w.far2, w.vertices = false, 0, 0, 0
	w.seen[p], w.seen[0] = w.stamp, w.stamp // the ghost is no neighbour
	begin, _ := g.t.PointTet(p)
	v, _ := g.t.Record(begin)
	ip := corner(v, p)
	for k := range uint8(4) {
		if k != ip && v[k] != 0 {
			w.discover(v[k], begin, ip, k)
			break
		}
	}
	for i := 0; i < len(w.faces); i++ {
		w.around(i)
	}
	slices.SortFunc(w.faces, func(a, b face) int { return int(a.q - b.q) })
	w.near2 = math.Inf(1)
	for i := range w.faces {
		f := &w.faces[i]
		f.n = sub(g.at[f.q].Vec, w.own)
		w.near2 = min(w.near2, dot(f.n, f.n))
	}
}

// corner is the place of p among the corners, found without a branch: the difference
// in bits less one is negative only where there is none.
func corner(v *[4]int32, p int32) uint8 {
	return uint8(((v[1]^p)-1)>>31&1 | ((v[2]^p)-1)>>31&2 | ((v[3]^p)-1)>>31&3)
}

func (w *walker) discover(q int32, tet uint32, ip, iq uint8) {
	w.seen[q] = w.stamp
	w.faces = append(w.faces, face{q: q, tet: tet, ip: ip, iq: iq})
}

// around walks around the edge from p to one neighbour, that of face i.
func (w *walker) around(i int) {
	g, p, q := w.g, w.p, w.faces[i].q
	tet, ip, iq := w.faces[i].tet, w.faces[i].ip, w.faces[i].iq
	begin := tet
	from, lowest, least := len(w.loop), 0, int32(math.MaxInt32)
	loop, out, own, any, far2 := w.loop, w.out, w.own, w.any, w.far2
	seen, stamp, centres, at := w.seen, w.stamp, g.centres, g.at
	v, n := g.t.Record(tet)
	for {
		xy := &afterPair[ip&3][iq&3]
		x, y := xy[0]&3, xy[1]&3
		key := v[y] // the third point of the facet towards the next vertex
		if key < least {
			least, lowest = key, len(loop)-from
		}
		if int(tet) >= len(centres) {
			w.open = true
			loop, out = append(loop, Vec{}), append(out, 0)
		} else {
			c := &centres[tet]
			a := &at[c.from]
			o := Vec{X: c.o.X + (a.X - own.X), Y: c.o.Y + (a.Y - own.Y), Z: c.o.Z + (a.Z - own.Z)}
			loop, out = append(loop, o), append(out, c.out)
			any |= c.out
			if d := float64(o.X*o.X) + float64(o.Y*o.Y) + float64(o.Z*o.Z); d > far2 {
				far2 = d
			}
		}
		if seen[key] != stamp {
			w.discover(key, tet, ip, y)
		}
		next := n[x]
		if tet = next >> 2; tet == begin {
			break
		}
		v, n = g.t.Record(tet)
		ip, iq = corner(v, p), corner(v, q)
	}
	w.loop, w.out, w.any, w.far2 = loop, out, any, far2
	w.vertices += len(loop) - from
	f := &w.faces[i]
	f.from, f.to = int32(from), int32(len(w.loop))
	if lowest > 0 { // begin there: the first ones once more behind the others
		w.loop = append(w.loop, w.loop[from:from+lowest]...)
		w.out = append(w.out, w.out[from:from+lowest]...)
		f.from, f.to = f.from+int32(lowest), f.to+int32(lowest)
	}
}
