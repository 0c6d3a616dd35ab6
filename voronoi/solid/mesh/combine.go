package mesh

import (
	"math"
	"math/big"
	"slices"

	"nearcell/voronoi/solid"
)

// Op is how two solids are combined.
type Op int8

const (
	Plus  Op = iota // what lies in one or in both
	Minus           // what lies in the first and not in the second
	Both            // what lies in both
)

// expression says which places belong to a combination: a leaf, or two expressions.
type expression struct {
	leaf int // -1: a and b
	op   Op
	a, b *expression
}

func only(leaf int) *expression { return &expression{leaf: leaf} }

// holds tells whether a place that lies in these leaves lies in the combination.
func (e *expression) holds(in []bool) bool {
	switch {
	case e.leaf >= 0:
		return in[e.leaf]
	case e.op == Plus:
		return e.a.holds(in) || e.b.holds(in)
	case e.op == Both:
		return e.a.holds(in) && e.b.holds(in)
	}
	return e.a.holds(in) && !e.b.holds(in)
}

// leaf is a solid that a combination is made of.
type leaf struct {
	*surface
	key   [16]byte
	faced bool // triangles of its own lie on one another
}

// assembly is what a combined solid is made of, so that further combinations begin with
// what was given and not with what was rounded.
type assembly struct {
	leaves []*leaf
	of     *expression
}

// Surfaced is a solid that knows triangles of its surface.
type Surfaced interface {
	solid.Solid
	// Surface gives corners and triangles, counter-clockwise from outside, over whose
	// edges the directed uses cancel.
	Surface() ([]Vec, [][3]int32)
}

// Surface gives the triangles of the mesh.
func (m *Mesh) Surface() ([]Vec, [][3]int32) { return m.v, m.t }

// SurfaceError is a solid that has no triangles.
type SurfaceError struct{ Kind string }

func (e *SurfaceError) Error() string { return "mesh: a " + e.Kind + " has no triangles" }

// Combine makes a PLUS b, a MINUS b, or what both share, of any two solids. Where their surfaces cross, the
// corners of the result are computed exactly and then rounded once; where faces lie in
// one plane, that is decided exactly. The error is an *[Error] or a *[SurfaceError].
func Combine(op Op, a, b solid.Solid) (*Mesh, error) {
	return Join([]Op{op}, a, b)
}

// Join makes the solid ((s0 op0 s1) op1 s2) … of any number of solids at once.
func Join(ops []Op, s ...solid.Solid) (*Mesh, error) {
	all := &assembly{}
	for i, body := range s {
		e, err := all.take(body)
		if err != nil {
			return nil, err
		}
		if i == 0 {
			all.of = e
		} else {
			all.of = &expression{leaf: -1, op: ops[i-1], a: all.of, b: e}
		}
	}
	m, err := combine(all.leaves, all.of, nil, "combination", 0)
	if err != nil {
		return nil, err
	}
	m.made = all
	return m, nil
}

// take adds a solid's leaves to the assembly, each once, and says what it is made of.
func (l *assembly) take(s solid.Solid) (*expression, error) {
	if m, ok := s.(*Mesh); ok && m.made != nil {
		number := make([]int, len(m.made.leaves))
		for i, f := range m.made.leaves {
			number[i] = l.number(f)
		}
		return m.made.of.renumbered(number), nil
	}
	t, ok := s.(Surfaced)
	if !ok {
		return nil, &SurfaceError{s.Facts().Kind}
	}
	v, tri := t.Surface()
	return only(l.number(&leaf{surface: newSurface(v, tri), key: s.Key()})), nil
}

func (l *assembly) number(f *leaf) int {
	for i, g := range l.leaves {
		if g.key == f.key {
			return i
		}
	}
	l.leaves = append(l.leaves, f)
	return len(l.leaves) - 1
}

func (e *expression) renumbered(number []int) *expression {
	if e.leaf >= 0 {
		return only(number[e.leaf])
	}
	return &expression{leaf: -1, op: e.op, a: e.a.renumbered(number), b: e.b.renumbered(number)}
}

// arrangement cuts the triangles of all leaves where the others' surfaces meet them, and
// keeps the pieces that separate the combination from what is outside. All decisions are
// exact.
type arrangement struct {
	leaves []*leaf
	of     *expression
	tree   *tree // of the leaves' bounds
	grain  float64
	near   float64 // between faces that coincide but for rounding

	points []point
	given  map[Vec]int32
	made   map[string]int32
	pieces [][]int32   // loops of points
	body   *expression // nil, or what bounds a region and is no seam of it
	seam   []bool      // of each piece, where there is a region

	plus, minus []bool
}

// rival is a triangle of another leaf.
type rival struct {
	*leaf
	t int32
}

// combine makes the mesh of a combination. With a body, pieces that do not bound that are
// seams.
func combine(leaves []*leaf, of, body *expression, kind string, precision float64) (*Mesh, error) {
	a := &arrangement{
		leaves: leaves, of: of, body: body, given: map[Vec]int32{}, made: map[string]int32{},
		plus: make([]bool, len(leaves)), minus: make([]bool, len(leaves)),
	}
	a.tree = newTree(len(leaves), func(i int32) (lo, hi Vec) { return leaves[i].lo, leaves[i].hi })
	for _, l := range leaves {
		size := max(largest(l.lo), largest(l.hi))
		a.grain = max(a.grain, 1e-12*size)
		a.near = max(a.near, nearFactor*length(sub(l.hi, l.lo))+64*(math.Nextafter(size, inf)-size))
	}
	for i := range leaves {
		for t := range leaves[i].t {
			a.cut(int32(i), int32(t))
		}
	}
	if len(a.pieces) == 0 {
		return nil, &Error{Fault: NothingLeft}
	}
	a.stitch()
	return a.mesh(kind, precision)
}

func (a *arrangement) number(p point) int32 {
	if p.exact == nil {
		v := add(p.f, Vec{})
		k, ok := a.given[v]
		if !ok {
			k = int32(len(a.points))
			a.given[v] = k
			a.points = append(a.points, p)
		}
		return k
	}
	key := p.key()
	k, ok := a.made[key]
	if !ok {
		k = int32(len(a.points))
		a.made[key] = k
		a.points = append(a.points, p)
	}
	return k
}

// cut cuts one triangle of a leaf and keeps what belongs to the combination's surface.
func (a *arrangement) cut(l, t int32) {
	own := a.leaves[l]
	u, v, w := own.corners(t)
	axis := upright(u, v, w)
	if axis < 0 {
		return // its edges are those of others
	}
	rivals := a.rivals(l, t)
	loops := [][]int32{{a.number(given(u)), a.number(given(v)), a.number(given(w))}}
	for _, r := range rivals {
		loops = a.cutBy(loops, [3]Vec{u, v, w}, axis, r)
	}
	for _, loop := range loops {
		q := given(u) // no surface is near
		if len(rivals) > 0 {
			q = a.centre(loop)
		}
		a.keep(l, loop, &q, [3]Vec{u, v, w}, axis, len(rivals) > 0)
	}
}

// rivals are the triangles of other leaves that may meet a triangle.
func (a *arrangement) rivals(l, t int32) []rival {
	var out []rival
	lo, hi := a.leaves[l].box(t)
	r := Vec{X: a.near, Y: a.near, Z: a.near}
	lo, hi = sub(lo, r), add(hi, r)
	a.tree.inBox(lo, hi, func(i int32) bool {
		other := a.leaves[i]
		if i == l && !other.faced {
			return true
		}
		other.tree.inBox(lo, hi, func(j int32) bool {
			jlo, jhi := other.box(j)
			if jlo.X > hi.X || jhi.X < lo.X || jlo.Y > hi.Y || jhi.Y < lo.Y || jlo.Z > hi.Z || jhi.Z < lo.Z {
				return true
			}
			if i != l {
				out = append(out, rival{other, j})
			} else if j != t {
				if how, _, _ := other.meeting(t, j); how == faced {
					out = append(out, rival{other, j})
				}
			}
			return true
		})
		return true
	})
	return out
}

// centre is the mean of a loop's corners, exactly.
func (a *arrangement) centre(loop []int32) point {
	var r [3]big.Rat
	n := new(big.Rat).SetInt64(int64(len(loop)))
	for i := range r {
		for _, k := range loop {
			r[i].Add(&r[i], &a.points[k].rat()[i])
		}
		r[i].Quo(&r[i], n)
	}
	return pointOf(&r)
}

// cutBy cuts loops in the plane of the triangle t by another triangle.
func (a *arrangement) cutBy(loops [][]int32, t [3]Vec, axis int, r rival) [][]int32 {
	u, v, w := r.corners(r.t)
	var sides [3]int
	low, high := false, false
	for k, x := range [3]Vec{u, v, w} {
		p := given(x)
		sides[k] = orient3(t[0], t[1], t[2], &p)
		low, high = low || sides[k] < 0, high || sides[k] > 0
	}
	if !low && !high {
		return a.cutFlat(loops, axis, [3]Vec{u, v, w})
	}
	if a.almostFlat([3]Vec{u, v, w}, t) {
		// Faces that coincide but for rounding: films and gaps between them begin and
		// end at the sides of the faces, and are told from walls piece by piece.
		loops = a.cutFlat(loops, axis, [3]Vec{u, v, w})
	}
	section, ok := sectionOf([3]Vec{u, v, w}, sides, t)
	if !ok || upright(u, v, w) < 0 {
		return loops
	}
	var out [][]int32
	for _, loop := range loops {
		below, above, ends := a.divide(loop,
			func(p *point) int { return orient3(u, v, w, p) },
			func(p, q *point) point { return crossing(p, q, u, v, w) })
		if below == nil || above == nil || !overlap(section, ends) {
			out = append(out, loop)
		} else {
			out = append(out, below, above)
		}
	}
	return out
}

// almostFlat tells whether a triangle lies in the plane of t but for rounding.
func (a *arrangement) almostFlat(tri, t [3]Vec) bool {
	n := cross(sub(t[1], t[0]), sub(t[2], t[0]))
	l := length(n)
	for _, x := range tri {
		if abs(dot(n, sub(x, t[0]))) > a.near*l {
			return false
		}
	}
	return l > 0
}

// sectionOf is the segment in which a triangle meets the plane of t.
func sectionOf(tri [3]Vec, sides [3]int, t [3]Vec) (out [2]point, ok bool) {
	n := 0
	for k := range 3 {
		p, q := given(tri[k]), given(tri[(k+1)%3])
		x, y := sides[k], sides[(k+1)%3]
		if x == 0 && n < 2 {
			out[n] = p
			n++
		}
		if x*y < 0 && n < 2 {
			out[n] = crossing(&p, &q, t[0], t[1], t[2])
			n++
		}
	}
	return out, n == 2
}

// cutFlat cuts loops by a triangle in their own plane: along its sides, where it covers
// something of them.
func (a *arrangement) cutFlat(loops [][]int32, axis int, tri [3]Vec) [][]int32 {
	var p [3]point
	for k := range p {
		p[k] = given(tri[k])
	}
	way := turn(&p[0], &p[1], &p[2], axis)
	if way == 0 {
		return loops
	}
	var out [][]int32
	for _, loop := range loops {
		if a.parted(loop, p, way, axis) {
			out = append(out, loop)
			continue
		}
		rest := loop
		for k := range 3 {
			x, y := &p[k], &p[(k+1)%3]
			in, beyond, _ := a.divide(rest,
				func(q *point) int { return -way * turn(x, y, q, axis) },
				func(q, r *point) point { return meeting(q, r, x, y, axis) })
			if in != nil && beyond != nil {
				out = append(out, beyond)
				rest = in
			}
		}
		out = append(out, rest)
	}
	return out
}

// parted tells whether a line separates a loop from a triangle, both seen along an axis.
func (a *arrangement) parted(loop []int32, p [3]point, way, axis int) bool {
	all := func(x, y *point, sign int, each func(do func(q *point) bool) bool) bool {
		return each(func(q *point) bool { return turn(x, y, q, axis)*sign <= 0 })
	}
	for k := range p {
		if all(&p[k], &p[(k+1)%3], way, func(do func(q *point) bool) bool {
			for _, i := range loop {
				if !do(&a.points[i]) {
					return false
				}
			}
			return true
		}) {
			return true
		}
	}
	sense := 0
	for k := 2; k < len(loop) && sense == 0; k++ {
		sense = turn(&a.points[loop[0]], &a.points[loop[k-1]], &a.points[loop[k]], axis)
	}
	for k, i := range loop {
		if all(&a.points[i], &a.points[loop[(k+1)%len(loop)]], sense, func(do func(q *point) bool) bool {
			return do(&p[0]) && do(&p[1]) && do(&p[2])
		}) {
			return true
		}
	}
	return false
}

// divide cuts a convex loop where side changes its sign. One of the two is nil if
// nothing of the loop's inside is there. ends are where the cut begins and ends.
func (a *arrangement) divide(loop []int32, side func(p *point) int, cross func(p, q *point) point) (below, above []int32, ends [2]point) {
	signs := make([]int, len(loop))
	low, high := false, false
	for k, i := range loop {
		signs[k] = side(&a.points[i])
		low, high = low || signs[k] < 0, high || signs[k] > 0
	}
	if !high {
		return loop, nil, ends
	}
	if !low {
		return nil, loop, ends
	}
	n := 0
	end := func(p point) {
		if n < 2 {
			ends[n] = p
		}
		n++
	}
	for k, i := range loop {
		next := (k + 1) % len(loop)
		if signs[k] <= 0 {
			below = append(below, i)
		}
		if signs[k] >= 0 {
			above = append(above, i)
		}
		if signs[k] == 0 {
			end(a.points[i])
		}
		if signs[k]*signs[next] < 0 {
			p := cross(&a.points[i], &a.points[loop[next]])
			x := a.number(p)
			end(p)
			below, above = append(below, x), append(above, x)
		}
	}
	return below, above, ends
}

// keep keeps a piece of a leaf's surface if the combination is on one side of it. Of
// pieces of several leaves in one place the first leaf's is kept. met tells that other
// triangles come near.
func (a *arrangement) keep(l int32, loop []int32, q *point, t [3]Vec, axis int, met bool) {
	p0, p1, p2 := given(t[0]), given(t[1]), given(t[2])
	up := turn(&p0, &p1, &p2, axis)
	for i, other := range a.leaves {
		if int32(i) == l && !(other.faced && met) {
			a.plus[i], a.minus[i] = false, true
			continue
		}
		ahead, behind := other.windings(q, axis, a.grain)
		if up < 0 {
			ahead, behind = behind, ahead
		}
		a.plus[i], a.minus[i] = ahead > 0, behind > 0
		if int32(i) < l && a.plus[i] != a.minus[i] {
			return
		}
	}
	out, in := a.of.holds(a.plus), a.of.holds(a.minus)
	switch {
	case in && !out:
		a.pieces = append(a.pieces, loop)
	case out && !in:
		turned := slices.Clone(loop)
		slices.Reverse(turned)
		a.pieces = append(a.pieces, turned)
	default:
		return
	}
	if a.body != nil {
		a.seam = append(a.seam, a.body.holds(a.plus) == a.body.holds(a.minus))
	}
}

// windings are how often the surface winds around the places next to q towards larger
// and towards smaller values of an axis' coordinate, no triangle but those through q
// itself being between.
func (s *surface) windings(q *point, axis int, grain float64) (ahead, behind int) {
	r := Vec{X: grain, Y: grain, Z: grain}
	lo, hi := sub(q.f, r), add(q.f, r)
	if lo.X > s.hi.X || hi.X < s.lo.X || lo.Y > s.hi.Y || hi.Y < s.lo.Y || lo.Z > s.hi.Z {
		return 0, 0
	}
	hi.Z = inf
	s.tree.inBox(lo, hi, func(i int32) bool {
		a, b, c := s.corners(i)
		if min(a.X, b.X, c.X) > hi.X || max(a.X, b.X, c.X) < lo.X || min(a.Y, b.Y, c.Y) > hi.Y || max(a.Y, b.Y, c.Y) < lo.Y ||
			max(a.Z, b.Z, c.Z) < lo.Z {
			return true
		}
		pa, pb, pc := given(a), given(b), given(c)
		way := turn(&pa, &pb, &pc, 2)
		if way == 0 {
			return true
		}
		ab, bc, ca := turn(&pa, &pb, q, 2), turn(&pb, &pc, q, 2), turn(&pc, &pa, q, 2)
		height, known := 0, false
		for _, step := range [2]int{1, -1} {
			if moved(ab, a, b, axis, step) != way || moved(bc, b, c, axis, step) != way || moved(ca, c, a, axis, step) != way {
				continue
			}
			if !known {
				height, known = orient3(a, b, c, q), true
			}
			side := height
			if side == 0 {
				side = step * turn(&pa, &pb, &pc, axis)
			}
			if side == -way {
				if step > 0 {
					ahead += way
				} else {
					behind += way
				}
			}
		}
		return true
	})
	return ahead, behind
}

// moved is the side of the line ab, seen from above, on which a place lies that was moved
// from where that side is known: by a little along an axis, less along y, least along x.
func moved(side int, a, b Vec, axis, step int) int {
	if side != 0 {
		return side
	}
	x, y := signOf(b.X-a.X), signOf(b.Y-a.Y)
	if axis == 0 && y != 0 {
		return -y * step
	}
	if axis == 1 && x != 0 {
		return x * step
	}
	if x != 0 {
		return x
	}
	return -y
}
