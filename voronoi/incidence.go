package voronoi

import "math"

// incidence lists the tetrahedra at every point, those of one after those of another,
// so that a star is read at once and not from neighbour to neighbour: the memory
// answers many questions at the same time.
type incidence struct {
	start []uint32 // tets[start[p]:start[p+1]] are those at point p
	tets  []uint32
}

// list makes the lists, once. They are worth it where many stars are wanted; single
// ones are found without.
func (g *dual) list() { g.listing.Do(g.listIncidence) }

func (g *dual) listIncidence() {
	t, n := g.t, len(g.at)
	x := incidence{start: make([]uint32, n+1), tets: make([]uint32, 4*t.NumTets())}
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
	g.incidence = x
}

// mostNeighbours is for how many the table of quickStar has room.
const mostNeighbours = 64

// restOf[i] are the corners x, y, z that make (i, x, y, z) an even permutation.
var restOf = [4][3]uint8{{1, 2, 3}, {0, 3, 2}, {0, 1, 3}, {0, 2, 1}}

// quickStar is star for a point that is not on the hull and has not too many
// neighbours; it reports false for others, and where there are no lists.
//
// In a tetrahedron (p, x, y, z), positive, the walk around the edge to x comes from the
// facet with y and leaves by the one with z; likewise around those to y and z. That is
// noted in a table by two of the three. It is never cleared: all entries that are read
// later were written for this star.
func (w *walker) quickStar(p int32) bool {
	g := w.g
	if g.incidence.start == nil || g.flags[p]&flagHull != 0 {
		return false
	}
	w.stamp++
	stamp := w.stamp << 8
	list := g.incidence.tets[g.incidence.start[p]:g.incidence.start[p+1]]
	if len(list) > 2*mostNeighbours-4 { // 2n - 4 tetrahedra at n neighbours
		return false
	}
	own, any, far2 := g.at[p].Vec, uint8(0), 0.0
	vertices, codes := w.vertex[:len(list)], w.code[:len(list)]
	local, links, entry := w.local, &w.links, &w.entry
	w.met = 0
	// First all that lies far apart in memory, with nothing to wait for in between.
	corners, centres := w.corners[:len(list)], w.centres[:len(list)]
	for i, tet := range list {
		v, _ := g.t.Record(tet)
		corners[i] = *v
		centres[i] = g.centres[tet]
	}
	for i := range corners {
		v, c := &corners[i], &centres[i]
		rest := &restOf[corner(v, p)&3]
		qx, qy, qz := v[rest[0]&3], v[rest[1]&3], v[rest[2]&3]
		ex, ey, ez := local[qx], local[qy], local[qz]
		if ex&^0xff != stamp {
			ex = w.meet(qx, stamp)
		}
		if ey&^0xff != stamp {
			ey = w.meet(qy, stamp)
		}
		if ez&^0xff != stamp {
			ez = w.meet(qz, stamp)
		}
		x, y, z := ex&(mostNeighbours-1), ey&(mostNeighbours-1), ez&(mostNeighbours-1)
		links[x][y], links[y][z], links[z][x] = uint16(i)<<8|uint16(z), uint16(i)<<8|uint16(x), uint16(i)<<8|uint16(y)
		// A face begins after the facet with the neighbour of the lowest number.
		nx, ny, nz := uint64(qx)<<8|uint64(x), uint64(qy)<<8|uint64(y), uint64(qz)<<8|uint64(z)
		entry[x], entry[y], entry[z] = min(entry[x], ny), min(entry[y], nz), min(entry[z], nx)

		a := &g.at[c.from]
		ox, oy, oz := c.o.X+(a.X-own.X), c.o.Y+(a.Y-own.Y), c.o.Z+(a.Z-own.Z)
		vertices[i], codes[i] = Vec{X: ox, Y: oy, Z: oz}, c.out
		any |= c.out
		if d := float64(ox*ox) + float64(oy*oy) + float64(oz*oz); d > far2 {
			far2 = d
		}
	}
	w.p, w.own, w.open, w.any, w.far2, w.vertices = p, own, false, any, far2, 3*len(list)
	w.sortNeighbours(w.met)
	w.collect(w.met)
	return true
}

// meet gives a neighbour its number in the star.
func (w *walker) meet(q int32, stamp uint32) uint32 {
	i := w.met & (mostNeighbours - 1)
	e := stamp | uint32(i)
	w.local[q] = e
	w.neighbour[i] = q
	w.entry[i] = math.MaxUint64
	w.met++
	return e
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
	if n := w.vertices; cap(w.loop) < n {
		w.loop, w.out = make([]Vec, 2*n), make([]uint8, 2*n)
	}
	faces, loop, out := w.faces[:0], w.loop[:w.vertices], w.out[:w.vertices]
	near2 := math.Inf(1)
	to := 0
	for _, x := range w.byNumber[:ids] {
		id := x & (mostNeighbours - 1)
		q := w.neighbour[id]
		row := &w.links[id]
		begin := uint16(w.entry[id]) & (mostNeighbours - 1)
		from := to
		for at := begin; to < len(loop) && to < len(out); {
			e := row[at]
			i := e >> 8 & (2*mostNeighbours - 1)
			loop[to], out[to] = w.vertex[i], w.code[i]
			to++
			if at = e & (mostNeighbours - 1); at == begin {
				break
			}
		}
		n := sub(w.g.at[q].Vec, w.own)
		if d := dot(n, n); d < near2 {
			near2 = d
		}
		faces = append(faces, face{q: q, n: n, from: int32(from), to: int32(to)})
	}
	w.faces, w.loop, w.out, w.near2 = faces, loop, out, near2
}
