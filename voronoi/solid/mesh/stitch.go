package mesh

import (
	"cmp"
	"slices"

	"nearcell/voronoi/solid"
)

// stitch puts every corner that lies in the middle of a side of a loop into that loop, so
// that loops that run along each other have the same corners.
func (a *arrangement) stitch() {
	used := make([]bool, len(a.points))
	for _, loop := range a.pieces {
		for _, i := range loop {
			used[i] = true
		}
	}
	var ids []int32
	for i := range used {
		if used[i] {
			ids = append(ids, int32(i))
		}
	}
	t := newTree(len(ids), func(i int32) (lo, hi Vec) { p := a.points[ids[i]].f; return p, p })
	type side struct{ from, to int32 }
	known := map[side][]int32{}
	for k, loop := range a.pieces {
		var out []int32
		changed := false
		for i, x := range loop {
			y := loop[(i+1)%len(loop)]
			key := side{min(x, y), max(x, y)}
			between, ok := known[key]
			if !ok {
				between = a.between(t, ids, key.from, key.to)
				known[key] = between
			}
			out = append(out, x)
			if x == key.from {
				out = append(out, between...)
			} else {
				for j := len(between) - 1; j >= 0; j-- {
					out = append(out, between[j])
				}
			}
			changed = changed || len(between) > 0
		}
		if changed {
			a.pieces[k] = out
		}
	}
}

// between lists the corners strictly between two others on their segment, in order.
func (a *arrangement) between(t *tree, ids []int32, from, to int32) []int32 {
	p, q := &a.points[from], &a.points[to]
	var out []int32
	t.along(p.f, q.f, 4*a.grain, func(i int32) {
		x := ids[i]
		if x == from || x == to {
			return
		}
		r := &a.points[x]
		if segmentDistance(sub(p.f, r.f), sub(q.f, r.f)) <= 4*a.grain && onSegment(p, q, r) {
			out = append(out, x)
		}
	})
	if len(out) < 2 {
		return out
	}
	d := sub(q.f, p.f)
	axis := 0
	for k := range 3 {
		if abs(component(d, k)) > abs(component(d, axis)) {
			axis = k
		}
	}
	way := signOf(component(d, axis))
	slices.SortFunc(out, func(x, y int32) int {
		u, v := &a.points[x], &a.points[y]
		if c := cmp.Compare(component(u.f, axis), component(v.f, axis)); c != 0 {
			return way * c
		}
		return way * u.rat()[axis].Cmp(&v.rat()[axis])
	})
	return out
}

func abs(x float64) float64 { return max(x, -x) }

// along calls do for the items whose leaf comes within tol of the segment pq.
func (t *tree) along(p, q Vec, tol float64, do func(i int32)) {
	if len(t.nodes) == 0 {
		return
	}
	stack := []int32{0}
	for len(stack) > 0 {
		k := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		n := &t.nodes[k]
		from, to := 0.0, 1.0
		for axis := range 3 {
			x, d := component(p, axis), component(q, axis)-component(p, axis)
			lo, hi := component(n.lo, axis)-tol-x, component(n.hi, axis)+tol-x
			if d == 0 {
				if lo > 0 || hi < 0 {
					to = -1
				}
				continue
			}
			u, v := lo/d, hi/d
			from, to = max(from, min(u, v)-1e-9), min(to, max(u, v)+1e-9)
		}
		if from > to {
			continue
		}
		if n.to == 0 {
			stack = append(stack, n.from, k+1)
			continue
		}
		for _, i := range t.items[n.from:n.to] {
			do(i)
		}
	}
}

// mesh rounds the corners and makes triangles of the pieces.
func (a *arrangement) mesh(kind string, precision float64) (*Mesh, error) {
	number := make([]int32, len(a.points))
	for i := range number {
		number[i] = -1
	}
	byPlace := map[Vec]int32{}
	var v []Vec
	var t [][3]int32
	var seam []bool
	of := func(i int32) int32 {
		if number[i] < 0 {
			p := add(a.points[i].f, Vec{})
			k, ok := byPlace[p]
			if !ok {
				k = int32(len(v))
				byPlace[p] = k
				v = append(v, p)
			}
			number[i] = k
		}
		return number[i]
	}
	for i, loop := range a.pieces {
		a.ears(loop, func(p, q, r int32) {
			c := [3]int32{of(p), of(q), of(r)}
			if c[0] != c[1] && c[1] != c[2] && c[2] != c[0] {
				t = append(t, c)
				if a.body != nil {
					seam = append(seam, a.seam[i])
				}
			}
		})
	}
	if len(t) == 0 {
		return nil, &Error{Fault: NothingLeft}
	}
	return closed(v, t, seam, kind, precision)
}

// ears cuts a convex loop, which may have corners in the middle of its sides, into
// triangles, the fattest first. None of them is flat as long as the loop is not: around an
// edge that pieces meet in, a flat triangle would not tell on which side its piece lies.
func (a *arrangement) ears(loop []int32, cut func(p, q, r int32)) {
	rest := append([]int32(nil), loop...)
	for len(rest) > 3 {
		best, most := 0, -1.0
		n := len(rest)
		for i := range rest {
			if fat := a.fatness(rest[(i+n-1)%n], rest[i], rest[(i+1)%n]); fat > most && (fat <= flatness || !a.flat(rest, i)) {
				best, most = i, fat
			}
		}
		cut(rest[(best+n-1)%n], rest[best], rest[(best+1)%n])
		rest = append(rest[:best], rest[best+1:]...)
	}
	cut(rest[0], rest[1], rest[2])
}

// flatness is the fatness up to which a triangle may be flat but for rounding.
const flatness = 1e-12

// fatness is twice the area of a triangle divided by the square of its longest side.
func (a *arrangement) fatness(i, j, k int32) float64 {
	p, q, r := a.points[i].f, a.points[j].f, a.points[k].f
	longest := max(length(sub(q, p)), length(sub(r, q)), length(sub(p, r)))
	if longest == 0 {
		return 0
	}
	return length(cross(sub(q, p), sub(r, p))) / (longest * longest)
}

// flat tells whether a loop without one of its corners has no area.
func (a *arrangement) flat(loop []int32, without int) bool {
	n := len(loop)
	first := loop[(without+1)%n]
	for k := 2; k+1 < n; k++ {
		if a.fatness(first, loop[(without+k)%n], loop[(without+k+1)%n]) > flatness {
			return false
		}
	}
	return true
}

// closed makes the mesh of a closed surface that bounds a solid, and counts its pieces
// and voids. Components as thin as rounding are left out.
func closed(v []Vec, t [][3]int32, seam []bool, kind string, precision float64) (*Mesh, error) {
	list := uses(t)
	if err := balance(v, list); err != nil {
		return nil, &Error{Fault: NotClosed, At: err.(*Error).Edges[0][0]}
	}
	of, n := components(v, t, list)
	volumes, areas := make([]sum, n), make([]sum, n)
	lo, hi := v[t[0][0]], v[t[0][0]]
	for i, c := range t {
		p := v[c[0]]
		q, r := sub(v[c[1]], p), sub(v[c[2]], p)
		o := sub(p, v[t[0][0]])
		volumes[of[i]].add(dot(o, cross(q, r)) / 6)
		areas[of[i]].add(length(cross(q, r)) / 2)
		for _, x := range c {
			lo, hi = least(lo, v[x]), most(hi, v[x])
		}
	}
	thin := nearFactor * length(sub(hi, lo))
	shells, voids := 0, 0
	kept, keptSeam := t[:0:0], seam[:0:0]
	for k := range n {
		volume := volumes[k].value()
		switch {
		case abs(volume) <= thin*areas[k].value():
			continue
		case volume > 0:
			shells++
		default:
			voids++
		}
		for i := range t {
			if int(of[i]) == k {
				kept = append(kept, t[i])
				if seam != nil {
					keptSeam = append(keptSeam, seam[i])
				}
			}
		}
	}
	if shells == 0 {
		return nil, &Error{Fault: NothingLeft}
	}
	m := finish(v, kept, keptSeam, uses(kept), kind, precision)
	m.pieces, m.voids = shells, voids
	m.skipFilms()
	return m, nil
}

// Restore makes the mesh of a surface that was tested before: of what Surface gives.
func Restore(corners []Vec, triangles [][3]int32, precision float64) (*Mesh, error) {
	b := &builder{}
	if err := b.take(corners, triangles, 0); err != nil {
		return nil, err
	}
	list := uses(b.t)
	if err := balance(b.v, list); err != nil {
		return nil, err
	}
	of, n := components(b.v, b.t, list)
	volumes := make([]sum, n)
	for i, t := range b.t {
		p := sub(b.v[t[0]], b.v[0])
		volumes[of[i]].add(dot(p, cross(sub(b.v[t[1]], b.v[0]), sub(b.v[t[2]], b.v[0]))) / 6)
	}
	m := finish(b.v, b.t, nil, list, "mesh", precision)
	for k := range volumes {
		if volumes[k].value() > 0 {
			m.pieces++
		} else {
			m.voids++
		}
	}
	return m, nil
}

// skipFilms finds triangles on both sides of a film of the solid, or of a gap in it, that
// is thinner than faces can be told apart: what walls leave that coincide but for
// rounding. They are no walls. Where the surface lies in folds, three times in one place,
// the triangle in the middle looks the wrong way: its area is taken off the other two.
func (m *Mesh) skipFilms() {
	gone := 0.0
	for i := range m.t {
		if m.wall[i] < 0 {
			continue
		}
		a, b, c := m.corners(int32(i))
		middle := scale(1.0/3, add(a, add(b, c)))
		step := scale(shift*m.near, m.n[i])
		in, out := m.side(sub(middle, step)), m.side(add(middle, step))
		switch {
		case in == out:
			m.wall[i] = -1
			gone += m.size[i]
		case in == solid.Outside && out == solid.Inside:
			if m.folded == nil {
				m.folded = make([]bool, len(m.t))
			}
			m.folded[i] = true
			gone += 2 * m.size[i]
		}
	}
	m.films = gone
	m.area -= gone
}
