package voronoi

import "math"

// incidence lists the tetrahedra at every point, those of one after those of another,
// so that a star is read at once and not from neighbour to neighbour: the memory
// answers many questions at the same time.
type incidence struct {
	start  []uint32 // tets[start[p]:start[p+1]] are those at point p
	tets   []uint32
	onHull []bool // point p lies on the convex hull: there is more than tets has
}

func (g *dual) listIncidence() {
	t, n := g.t, len(g.at)
	x := incidence{start: make([]uint32, n+1), tets: make([]uint32, 4*t.NumTets()), onHull: make([]bool, n)}
	for i := range uint32(t.NumTets()) {
		v, _ := t.Record(i)
		x.start[v[0]]++
		x.start[v[1]]++
		x.start[v[2]]++
		x.start[v[3]]++
	}
	sum := uint32(0)
	for p := range x.start {
		sum += x.start[p]
		x.start[p] = sum
	}
	// From the back, so that what was the end of a list becomes its start.
	for i := uint32(t.NumTets()); i > 0; {
		i--
		v, _ := t.Record(i)
		for _, p := range v {
			x.start[p]--
			x.tets[x.start[p]] = i
		}
	}
	for i := range t.NumGhosts() {
		v, _ := t.Record(uint32(t.NumTets() + i))
		for _, p := range v {
			x.onHull[p] = true
		}
	}
	g.incidence = x
}

// mostNeighbours is for how many the table of quickStar has room.
const mostNeighbours = 64

// link is an entry of the table: a tetrahedron of the star and the neighbour after.
type link struct{ tet, next uint8 }

// restOf[i] are the corners x, y, z that make (i, x, y, z) an even permutation.
var restOf = [4][3]uint8{{1, 2, 3}, {0, 3, 2}, {0, 1, 3}, {0, 2, 1}}

// quickStar is star for a point that is not on the hull and has not too many
// neighbours; it reports false for others.
//
// In a tetrahedron (p, x, y, z), positive, the walk around the edge to x comes from the
// facet with y and leaves by the one with z; likewise around those to y and z. That is
// noted in a table by two of the three. It is never cleared: all entries that are read
// later were written for this star.
func (w *walker) quickStar(p int32) bool {
	g := w.g
	if g.incidence.onHull[p] {
		return false
	}
	w.stamp++
	stamp := w.stamp << 8
	list := g.incidence.tets[g.incidence.start[p]:g.incidence.start[p+1]]
	if len(list) > 2*mostNeighbours-4 { // 2n - 4 tetrahedra at n neighbours
		return false
	}
	own, any, far2 := g.at[p], uint8(0), 0.0
	vertices, codes, ids := w.vertex[:len(list)], w.code[:len(list)], 0
	for i, tet := range list {
		v, _ := g.t.Record(tet)
		c := &g.centres[tet]
		a := &g.at[c.from]
		o := Vec{X: c.o.X + (a.X - own.X), Y: c.o.Y + (a.Y - own.Y), Z: c.o.Z + (a.Z - own.Z)}
		vertices[i], codes[i] = o, c.out
		any |= c.out
		far2 = max(far2, float64(o.X*o.X)+float64(o.Y*o.Y)+float64(o.Z*o.Z))
		rest := &restOf[corner(v, p)&3]
		var id [3]uint8
		for k := range id {
			q := v[rest[k]&3]
			e := w.local[q]
			if e&^0xff != stamp {
				e = stamp | uint32(ids)
				w.local[q] = e
				w.neighbour[ids&(mostNeighbours-1)] = q
				w.entry[ids&(mostNeighbours-1)] = math.MaxUint64
				ids++
			}
			id[k] = uint8(e) & (mostNeighbours - 1)
		}
		x, y, z := id[0], id[1], id[2]
		w.links[x][y], w.links[y][z], w.links[z][x] = link{uint8(i), z}, link{uint8(i), x}, link{uint8(i), y}
		// A face begins after the facet with the neighbour of the lowest number.
		nx, ny, nz := uint64(v[rest[0]&3])<<8|uint64(x), uint64(v[rest[1]&3])<<8|uint64(y), uint64(v[rest[2]&3])<<8|uint64(z)
		w.entry[x], w.entry[y], w.entry[z] = min(w.entry[x], ny), min(w.entry[y], nz), min(w.entry[z], nx)
	}
	w.p, w.own, w.open, w.any, w.far2, w.vertices = p, own, false, any, far2, 3*len(list)
	w.sortNeighbours(ids)
	w.collect(ids)
	return true
}

// sortNeighbours orders the neighbours by number: there are about fifteen.
func (w *walker) sortNeighbours(ids int) {
	order := w.byNumber[:ids]
	for i := range order {
		x := uint64(w.neighbour[i])<<8 | uint64(i)
		j := i
		for ; j > 0 && order[j-1] > x; j-- {
			order[j] = order[j-1]
		}
		order[j] = x
	}
}

// collect reads the faces from the table.
func (w *walker) collect(ids int) {
	faces, loop, out := w.faces[:0], w.loop[:0], w.out[:0]
	near2 := math.Inf(1)
	for _, x := range w.byNumber[:ids] {
		id := uint8(x) & (mostNeighbours - 1)
		q := w.neighbour[id]
		row := &w.links[id]
		begin := uint8(w.entry[id]) & (mostNeighbours - 1)
		from := len(loop)
		for at := begin; ; {
			e := row[at]
			i := e.tet & (2*mostNeighbours - 1)
			loop, out = append(loop, w.vertex[i]), append(out, w.code[i])
			if at = e.next & (mostNeighbours - 1); at == begin {
				break
			}
		}
		n := sub(w.g.at[q], w.own)
		near2 = min(near2, dot(n, n))
		faces = append(faces, face{q: q, n: n, from: int32(from), to: int32(len(loop))})
	}
	w.faces, w.loop, w.out, w.near2 = faces, loop, out, near2
}
