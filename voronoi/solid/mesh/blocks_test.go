package mesh

import (
	"errors"
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// blocks is a set of unit cubes of a small grid: what combinations of boxes with whole
// coordinates are, found without any geometry.
type blocks [blocksSide * blocksSide * blocksSide]bool

const blocksSide = 6

func (s *blocks) at(x, y, z int) bool {
	inside := x >= 0 && y >= 0 && z >= 0 && x < blocksSide && y < blocksSide && z < blocksSide
	return inside && s[(z*blocksSide+y)*blocksSide+x]
}

func (s *blocks) each(do func(x, y, z int)) {
	for i, in := range s {
		if in {
			do(i%blocksSide, i/blocksSide%blocksSide, i/blocksSide/blocksSide)
		}
	}
}

// count is the volume and the surface.
func (s *blocks) count() (volume, area float64) {
	s.each(func(x, y, z int) {
		volume++
		for _, d := range [6][3]int{{1, 0, 0}, {-1, 0, 0}, {0, 1, 0}, {0, -1, 0}, {0, 0, 1}, {0, 0, -1}} {
			if !s.at(x+d[0], y+d[1], z+d[2]) {
				area++
			}
		}
	})
	return volume, area
}

// pieces is the number of parts that hang together through faces.
func (s *blocks) pieces() (n int) {
	seen := *s
	var fill func(x, y, z int)
	fill = func(x, y, z int) {
		if !seen.at(x, y, z) {
			return
		}
		seen[(z*blocksSide+y)*blocksSide+x] = false
		for _, d := range [6][3]int{{1, 0, 0}, {-1, 0, 0}, {0, 1, 0}, {0, -1, 0}, {0, 0, 1}, {0, 0, -1}} {
			fill(x+d[0], y+d[1], z+d[2])
		}
	}
	s.each(func(x, y, z int) {
		if seen.at(x, y, z) {
			n++
			fill(x, y, z)
		}
	})
	return n
}

// volumeIn is what a cell has of the blocks, cube by cube.
func (s *blocks) volumeIn(sites []Vec, i int) float64 {
	var total sum
	s.each(func(x, y, z int) {
		lo := Vec{X: float64(x), Y: float64(y), Z: float64(z)}
		c := &polyhedron.Cell{}
		c.SetBox(sub(lo, sites[i]), sub(add(lo, Vec{X: 1, Y: 1, Z: 1}), sites[i]), [6]int32{-1, -1, -1, -1, -1, -1})
		for j, q := range sites {
			if j != i && !c.Empty() {
				n := sub(q, sites[i])
				c.Clip(n, dot(n, n)/2, int32(j))
			}
		}
		if !c.Empty() {
			total.add(c.Volume())
		}
	})
	return total.value()
}

func randomBlock(r *rand.Rand) (lo, hi Vec, s *blocks) {
	s = &blocks{}
	var a, b [3]int
	for k := range 3 {
		a[k] = r.IntN(blocksSide)
		b[k] = a[k] + 1 + r.IntN(blocksSide-a[k])
	}
	for z := a[2]; z < b[2]; z++ {
		for y := a[1]; y < b[1]; y++ {
			for x := a[0]; x < b[0]; x++ {
				s[(z*blocksSide+y)*blocksSide+x] = true
			}
		}
	}
	v := func(p [3]int) Vec { return Vec{X: float64(p[0]), Y: float64(p[1]), Z: float64(p[2])} }
	return v(a), v(b), s
}

// randomTree is a nested expression of boxes: its solid, its cubes, its text.
func randomTree(r *rand.Rand, depth int, move func(Vec) Vec) (solid.Solid, *blocks, string, error) {
	if depth == 0 || r.IntN(5) == 0 {
		lo, hi, s := randomBlock(r)
		text := fmt.Sprintf("%v-%v", lo, hi)
		if move != nil {
			m, _, err := New(block(lo, hi).moved(move).v, block(lo, hi).t, Options{})
			return m, s, text, err
		}
		b, err := solid.NewBox(lo, hi)
		return b, s, text, err
	}
	a, sa, ta, err := randomTree(r, depth-1, move)
	if err != nil {
		return nil, nil, ta, err
	}
	b, sb, tb, err := randomTree(r, depth-1, move)
	if err != nil {
		return nil, nil, tb, err
	}
	op, name := Plus, "PLUS"
	if r.IntN(2) == 0 {
		op, name = Minus, "MINUS"
	}
	both := *sa
	for i, in := range sb {
		if op == Plus {
			both[i] = both[i] || in
		} else {
			both[i] = both[i] && !in
		}
	}
	text := "(" + ta + " " + name + " " + tb + ")"
	if both == (blocks{}) {
		_, err := Combine(op, a, b)
		var e *Error
		if !errors.As(err, &e) || e.Fault != NothingLeft {
			return nil, nil, text, fmt.Errorf("nothing is left, and that is %v", err)
		}
		return a, sa, ta, nil
	}
	m, err := Combine(op, a, b)
	return m, &both, text, err
}

// Nested combinations of boxes that share planes, edges and corners in every way have the
// volume, the surface and the pieces of their unit cubes, and so have the cells in them:
// of scattered sites and of lattices in the walls. Turned in space and moved far away,
// where nothing coincides to the last bit, all but the pieces are the same.
func TestCombinationsAreTheirCubes(t *testing.T) {
	r := rand.New(rand.NewPCG(cubesSeed, 6))
	for k := range cubesTrees {
		var move func(Vec) Vec
		if k%3 == 2 {
			move = rotation(r, Vec{X: 5e5 * float64(k%2), Y: 20, Z: 3})
		}
		m, s, text, err := randomTree(r, 3, move)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		_, hi := m.Bounds()
		digits := largest(hi) * 0x1p-52
		volume, area := s.count()
		near(t, text+": volume", m.Volume(), volume, 1e-12*volume+area*digits)
		near(t, text+": area", m.Area(), area, 1e-8*area+100*digits)
		if move == nil && m.Pieces() != s.pieces() {
			t.Errorf("%s: %d pieces, want %d", text, m.Pieces(), s.pieces())
		}
		lattices := [][]Vec{scatteredIn(r, s, 6), lattice(Vec{X: 1, Y: 1, Z: 1}, Vec{X: 2, Y: 2, Z: 3}, 3, 3, 2), lattice(Vec{}, Vec{X: 3, Y: 2, Z: 3}, 3, 3, 2)}
		for _, sites := range lattices {
			there := sites
			if move != nil {
				there = nil
				for _, p := range sites {
					there = append(there, move(p))
				}
			}
			for i, got := range laws(t, text, m, there) {
				near(t, text+": a cell", got.Volume, s.volumeIn(sites, i), 1e-11*volume+100*digits)
			}
		}
		if t.Failed() {
			return
		}
	}
}

const (
	cubesSeed  = 6
	cubesTrees = 18
)

// scatteredIn are places in the cubes.
func scatteredIn(r *rand.Rand, s *blocks, n int) (out []Vec) {
	for len(out) < n {
		p := Vec{X: r.Float64() * blocksSide, Y: r.Float64() * blocksSide, Z: r.Float64() * blocksSide}
		if s.at(int(p.X), int(p.Y), int(p.Z)) {
			out = append(out, p)
		}
	}
	return out
}

// Far from the origin the corners of a film, 1e-10 thick, are rounded by more than that: the
// surface lies in folds there, which are no walls.
func TestFoldsAreNoWalls(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 67))
	move := rotation(r, Vec{X: 5e5, Y: 20, Z: 3})
	m, s, text, err := randomTree(r, 2, move)
	if err != nil {
		t.Fatal(err)
	}
	volume, area := s.count()
	near(t, text+": volume", m.Volume(), volume, 1e-7)
	near(t, text+": area", m.Area(), area, 1e-6)
	folds := 0
	for _, f := range m.(*Mesh).folded {
		if f {
			folds++
		}
	}
	if folds == 0 {
		t.Errorf("%s has no folds", text)
	}
	laws(t, text, m, sitesIn(r, m, 12))
}
