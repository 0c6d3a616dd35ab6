package solid

import (
	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/solid/planar"
)

// Surface gives corners and triangles of the surface, counter-clockwise from outside. No
// corner is computed: they are those of the plan, at the heights of floor and ceiling.
func (x *extrusion) Surface() ([]Vec, [][3]int32) {
	number := map[Vec2]int32{}
	var nodes []r2.Vec
	node := func(p Vec2) int32 {
		k, ok := number[p]
		if !ok {
			k = int32(len(nodes))
			number[p] = k
			nodes = append(nodes, p)
		}
		return k
	}
	var sides [][2]int32
	for i := range x.plan.edges {
		e := &x.plan.edges[i]
		sides = append(sides, [2]int32{node(e.a), node(e.b)})
	}
	flat := planar.Delaunay(nodes)
	if err := flat.Constrain(sides); err != nil {
		panic("solid: the sides of a plan cross: " + err.Error()) // the plan was checked
	}
	n := int32(len(nodes))
	v := make([]Vec, 0, 2*n)
	for _, z := range [2]float64{x.z0, x.z1} {
		for _, p := range nodes {
			v = append(v, Vec{X: p.X, Y: p.Y, Z: z})
		}
	}
	var t [][3]int32
	for i, in := range insideOf(flat, sides) {
		if c := flat.T[i]; in {
			t = append(t, [3]int32{c[0], c[2], c[1]}, [3]int32{c[0] + n, c[1] + n, c[2] + n})
		}
	}
	for _, s := range sides {
		a, b := s[0], s[1]
		t = append(t, [3]int32{a, b, b + n}, [3]int32{a, b + n, a + n})
	}
	return v, t
}

// insideOf tells which triangles lie to the left of the sides next to them.
func insideOf(flat *planar.Mesh, sides [][2]int32) []bool {
	walls := make(map[[2]int32]bool, len(sides))
	for _, s := range sides {
		walls[s] = true
	}
	inside := make([]bool, len(flat.T))
	var stack []int32
	enter := func(t int32) {
		if t >= 0 && !inside[t] {
			inside[t] = true
			stack = append(stack, t)
		}
	}
	for t, c := range flat.T {
		for k := range 3 {
			if walls[[2]int32{c[k], c[(k+1)%3]}] {
				enter(int32(t))
			}
		}
	}
	for len(stack) > 0 {
		t := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for k, u := range flat.Next[t] {
			a, b := flat.T[t][k], flat.T[t][(k+1)%3]
			if !walls[[2]int32{a, b}] && !walls[[2]int32{b, a}] {
				enter(u)
			}
		}
	}
	return inside
}
