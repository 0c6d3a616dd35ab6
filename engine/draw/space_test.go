package draw

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// blocks is a room of some of the boxes of a grid, each a body: with corners that turn
// inward, holes and overhangs, as it comes.
func blocks(t *rapid.T) (*Space, [][2]Spot) {
	var at [3][]float64
	for k := range 3 {
		n := rapid.IntRange(1, 4).Draw(t, "n")
		v := 0.0
		at[k] = []float64{v}
		for range n {
			v += rapid.Float64Range(0.3, 2).Draw(t, "step")
			at[k] = append(at[k], v)
		}
	}
	n := [3]int{len(at[0]) - 1, len(at[1]) - 1, len(at[2]) - 1}
	number := map[[3]int]int32{}
	x := &Space{Title: "Blocks", Value: "v", Text: Number}
	var boxes [][2]Spot
	for i := range n[0] * n[1] * n[2] {
		c := [3]int{i % n[0], i / n[0] % n[1], i / n[0] / n[1]}
		if rapid.IntRange(0, 3).Draw(t, "there") == 0 {
			continue
		}
		number[c] = int32(len(x.Bodies))
		lo, hi := Spot{at[0][c[0]], at[1][c[1]], at[2][c[2]]}, Spot{at[0][c[0]+1], at[1][c[1]+1], at[2][c[2]+1]}
		boxes = append(boxes, [2]Spot{lo, hi})
		x.Bodies = append(x.Bodies, Body{At: between(lo, hi, 0.5), Rows: []BodyRow{{ID: Number(float64(i)), Value: float64(i), Volume: (hi[0] - lo[0]) * (hi[1] - lo[1]) * (hi[2] - lo[2])}},
			Hulls: []Hull{boxHull(lo, hi)}})
	}
	for c, k := range number {
		for f := range x.Bodies[k].Hulls[0].Faces {
			beside := c
			beside[f/2] += 2*(f%2) - 1
			if o, there := number[beside]; there {
				x.Bodies[k].Hulls[0].Faces[f].Other = o
			}
		}
	}
	return x, boxes
}

// boxHull has the faces at lo x, hi x, lo y, hi y, lo z, hi z, all walls.
func boxHull(lo, hi Spot) Hull {
	var h Hull
	for c := range 8 {
		p := lo
		for k := range 3 {
			if c>>k&1 != 0 {
				p[k] = hi[k]
			}
		}
		h.Corners = append(h.Corners, p)
	}
	for _, loop := range [][]int32{{0, 4, 6, 2}, {1, 3, 7, 5}, {0, 1, 5, 4}, {2, 6, 7, 3}, {0, 2, 3, 1}, {4, 5, 7, 6}} {
		h.Faces = append(h.Faces, HullFace{Loop: loop, Other: Wall})
	}
	return h
}

func direction(t *rapid.T) Spot {
	for {
		d := Spot{rapid.Float64Range(-1, 1).Draw(t, "dx"), rapid.Float64Range(-1, 1).Draw(t, "dy"), rapid.Float64Range(-1, 1).Draw(t, "dz")}
		if length(d) > 0.1 {
			return d
		}
	}
}

// planeOf is a place of a plane across an axis: at a side of a box, or well away from all.
func planeOf(t *rapid.T, boxes [][2]Spot, axis int) float64 {
	b := rapid.SampledFrom(boxes).Draw(t, "by")
	if rapid.Bool().Draw(t, "at a side") {
		return b[rapid.IntRange(0, 1).Draw(t, "side")][axis]
	}
	at := b[0][axis] + (b[1][axis]-b[0][axis])*rapid.Float64Range(0.01, 0.99).Draw(t, "at")
	for _, o := range boxes {
		if math.Abs(o[0][axis]-at) < 1e-6 || math.Abs(o[1][axis]-at) < 1e-6 {
			return o[0][axis]
		}
	}
	return at
}

// first is the box that is nearest to the eye on the line through a place along from, at
// most limit along the axis; -1: none. It is the reference: nothing of facets is in it.
func first(boxes [][2]Spot, through, from Spot, axis int, limit, side float64) int {
	best, found := math.Inf(-1), -1
	for i, b := range boxes {
		lo, hi := math.Inf(-1), math.Inf(1)
		for k := range 3 {
			l, h := b[0][k], b[1][k]
			if k == axis {
				if side > 0 {
					h = math.Min(h, limit)
				} else {
					l = math.Max(l, limit)
				}
			}
			if l >= h {
				lo, hi = 1, 0
				break
			}
			s, e := (l-through[k])/from[k], (h-through[k])/from[k]
			lo, hi = math.Max(lo, math.Min(s, e)), math.Min(hi, math.Max(s, e))
		}
		if lo < hi && hi > best {
			best, found = hi, i
		}
	}
	return found
}

// topmost is the body painted last over a place of the page, -1 where there is none; it is
// not clear within a hair of an edge.
func topmost(list []painted, at Point) (body int, clear bool) {
	body, clear = -1, true
	for _, f := range list {
		for i, a := range f.ring {
			b := f.ring[(i+1)%len(f.ring)]
			l := math.Hypot(b.X-a.X, b.Y-a.Y)
			along := ((at.X-a.X)*(b.X-a.X) + (at.Y-a.Y)*(b.Y-a.Y)) / math.Max(l*l, 1e-30)
			along = math.Max(0, math.Min(1, along))
			if math.Hypot(at.X-a.X-along*(b.X-a.X), at.Y-a.Y-along*(b.Y-a.Y)) < 1e-6 {
				clear = false
			}
		}
		if (Polygon{f.ring}).Holds(at) {
			body = f.body
		}
	}
	return body, clear
}

// TestHidden: what is painted last over a place is what a line of sight meets first, in
// rooms of any shape, from any direction, whole and cut open.
func TestHidden(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, boxes := blocks(t)
		if len(boxes) == 0 {
			return
		}
		from := direction(t)
		g := gazeFrom(from)
		walls := x.walls()
		axis, cut := -1, 0.0
		p := &stillPanel{x: x, s: newScene("", ""), g: g, v: view{scale: 1}, colours: x.Scale(), tol: x.size() * 1e-9}
		if rapid.Bool().Draw(t, "open") {
			axis = rapid.IntRange(0, 2).Draw(t, "axis")
			cut = planeOf(t, boxes, axis)
			p.opened(walls, roomEdges(walls, x.middle(), x.size()), axis, cut, from[axis])
		} else {
			p.paint(walls, "cell")
		}
		lo, hi := x.outline(g)
		for range 40 {
			q := Point{lo.X + (hi.X-lo.X)*rapid.Float64Range(0, 1).Draw(t, "x"), lo.Y + (hi.Y-lo.Y)*rapid.Float64Range(0, 1).Draw(t, "y")}
			var through Spot
			for k := range 3 {
				through[k] = q.X*g.right[k] + q.Y*g.up[k]
			}
			got, clear := topmost(p.painted, Point{q.X, -q.Y})
			if !clear {
				continue
			}
			side := 1.0
			if axis >= 0 {
				side = math.Copysign(1, from[axis])
			}
			if want := first(boxes, through, g.from, axis, cut, side); got != want {
				t.Fatalf("from %v, at %v: body %d is painted, %d is seen", from, q, got, want)
			}
		}
	})
}

// TestCutAreas: what a plane cuts out of each body has the area of the box there.
func TestCutAreas(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, boxes := blocks(t)
		axis := rapid.IntRange(0, 2).Draw(t, "axis")
		if len(boxes) == 0 {
			return
		}
		at := planeOf(t, boxes, axis)
		side := rapid.SampledFrom([]float64{-1, 1}).Draw(t, "side")
		got := make([]float64, len(boxes))
		for _, f := range x.Cut(axis, at, side) {
			got[f.body] += f.area
		}
		for i, b := range boxes {
			want := 0.0
			if b[0][axis] < at && at < b[1][axis] || side > 0 && at == b[1][axis] || side < 0 && at == b[0][axis] {
				want = 1
				for k := range 3 {
					if k != axis {
						want *= b[1][k] - b[0][k]
					}
				}
			}
			if math.Abs(got[i]-want) > 1e-9 {
				t.Fatalf("box %d, %c = %v: the cut has %v, not %v", i, 'x'+rune(axis), at, got[i], want)
			}
		}
	})
}

// TestRoomEdges: the edges of an L-shaped room are found in one piece each, though its cells
// meet them at different places.
func TestRoomEdges(t *testing.T) {
	x := &Space{Value: "v", Text: Number}
	for _, b := range [][2]Spot{{{0, 0, 0}, {3, 2, 2}}, {{0, 2, 0}, {3, 5, 2}}, {{3, 0, 0}, {7, 1, 2}}, {{3, 1, 0}, {7, 2, 2}}} {
		x.Bodies = append(x.Bodies, Body{Rows: []BodyRow{{ID: "a"}}, Hulls: []Hull{boxHull(b[0], b[1])}})
	}
	contacts := [][3]int32{{0, 3, 1}, {1, 2, 0}, {2, 3, 3}, {3, 2, 2}, {2, 0, 0}, {3, 0, 0}} // body, face, other
	for _, c := range contacts {
		x.Bodies[c[0]].Hulls[0].Faces[c[1]].Other = c[2]
	}
	// The side of the first box at x = 3 is half of it towards the third, half towards the fourth.
	h := &x.Bodies[0].Hulls[0]
	h.Faces[1].Other = 2
	edges := x.RoomEdges()
	sum := 0.0
	for _, e := range edges {
		sum += length(minus(e[1], e[0]))
	}
	// An L of 7 by 5 has a girth of 24, twice, and six uprights of 2.
	if len(edges) != 18 || math.Abs(sum-(2*24+6*2)) > 1e-9 {
		t.Errorf("%d edges, %v together: %v", len(edges), sum, edges)
	}
}

// TestStillIsSafe: texts are escaped, all lies on the page, and bodies without a value are
// hatched and told of.
func TestStillIsSafe(t *testing.T) {
	x := &Space{Title: "<b>", Value: "<script>", Unit: "°C", Length: "m", Volume: "m³", Limits: []float64{2, 8}, Text: Number, Bodies: []Body{
		{Rows: []BodyRow{{ID: "<script>alert(1)</script>", Value: 9, Volume: 1}}, Hulls: []Hull{boxHull(Spot{0, 0, 0}, Spot{1, 1, 1})}},
		{Rows: []BodyRow{{ID: "b", Missing: true, Volume: 2}}, Hulls: []Hull{boxHull(Spot{1, 0, 0}, Spot{3, 1, 1})}},
		{Rows: []BodyRow{{ID: "c", Value: 1, Volume: 1}}, Hulls: []Hull{boxHull(Spot{0, 0, 1}, Spot{1, 1, 2})}}}}
	scene := x.Scene()
	svg := string(scene.SVG())
	if strings.Contains(svg, "<script") || strings.Contains(svg, "<b>") {
		t.Error("a text is not escaped")
	}
	for _, want := range []string{`class="over"`, `class="under"`, `class="missing"`, "over the limit", "under the limit", "no value at the site",
		"25 % (1 m³) over 8 °C, 25 % (1 m³) under 2 °C; 50 % (2 m³) without a value", "seen from the direction (-1, -2, 1.5)"} {
		if !strings.Contains(svg, want) {
			t.Errorf("no %q in the picture", want)
		}
	}
	for _, shape := range scene.Shapes {
		for _, path := range shape.Paths {
			for _, p := range path {
				if p.X < -1 || p.X > scene.Width+1 || p.Y < -1 || p.Y > scene.Height+1 {
					t.Fatalf("%s at %v is not on the page of %v by %v", shape.Class, p, scene.Width, scene.Height)
				}
			}
		}
	}
}

// TestSeamsAreNoEdges: where a cell goes on from one hull to the next, the opened still draws
// no line of a room.
func TestSeamsAreNoEdges(t *testing.T) {
	x := &Space{Value: "v", Text: Number, Bodies: []Body{{Rows: []BodyRow{{ID: "a", Volume: 8}}, Hulls: []Hull{boxHull(Spot{0, 0, 0}, Spot{2, 4, 1}), boxHull(Spot{2, 0, 0}, Spot{4, 4, 1})}}}}
	x.Bodies[0].Hulls[0].Faces[1].Other = Seam
	x.Bodies[0].Hulls[1].Faces[0].Other = Seam
	g := gazeFrom(Spot{-1, -2, 1.5})
	p := &stillPanel{x: x, s: newScene("", ""), g: g, v: view{scale: 1}, colours: x.Scale(), tol: x.size() * 1e-9}
	walls := x.walls()
	p.opened(walls, roomEdges(walls, x.middle(), x.size()), 1, 2, -2)
	a, b := p.place(Spot{2, 4, 1}), p.place(Spot{2, 2, 1})
	for _, shape := range p.s.Shapes {
		if shape.Class != "wall" && shape.Class != "border" {
			continue
		}
		for _, l := range shape.Paths {
			if cross := (l[1].X-l[0].X)*(b.Y-a.Y) - (l[1].Y-l[0].Y)*(b.X-a.X); math.Abs(cross) < 1e-6 && math.Hypot((l[0].X+l[1].X-a.X-b.X)/2, (l[0].Y+l[1].Y-a.Y-b.Y)/2) < 0.2 {
				t.Errorf("a line of the class %s along the seam: %v", shape.Class, l)
			}
		}
	}
}
