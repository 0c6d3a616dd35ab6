package mesh

import (
	"nearcell/voronoi/solid/planar"
)

// Ground tells of a surface against a height.
type Ground struct {
	Points     int     // places of the survey, repeated ones once
	Repeated   int     // points that stood there twice, with equal heights
	Under      float64 // volume between where the surface lies under the height
	Over       float64 // and where it lies over it
	Area       float64 // of the plan that the survey covers
	LongestGap float64 // longest side of a triangle: how far from one another places joined by a plane lie
}

// Terrain is the space between a surveyed surface, plane over each triangle of the
// Delaunay triangulation of the points' places in plan, and a height: above the surface
// where it lies under the height, beneath it where it lies over. The error is an *[Error].
func Terrain(points []Vec, height float64) (*Mesh, *Ground, error) {
	g := &Ground{}
	b := &terrain{height: height, cuts: map[[2]int32]int32{}}
	if err := b.survey(points, g); err != nil {
		return nil, nil, err
	}
	b.flat = planar.Delaunay(b.place)
	if len(b.flat.T) == 0 {
		return nil, nil, &Error{Fault: NoPlan, Count: len(b.place)}
	}
	b.raise(g)
	if len(b.t) == 0 {
		return nil, nil, &Error{Fault: NoVolume}
	}
	m, err := closed(b.v, b.t, nil, "terrain", 0)
	return m, g, err
}

// terrain is under construction. Corner i < n is point i on the surface, i + n the place
// above or below it at the height; those are one where the surface is at the height.
type terrain struct {
	height float64
	place  []planar.Vec
	z      []float64
	n      int32
	v      []Vec
	t      [][3]int32
	flat   *planar.Mesh
	cuts   map[[2]int32]int32 // where a side of a triangle passes through the height
}

func (b *terrain) survey(points []Vec, g *Ground) error {
	if !(abs(b.height) <= largestSize) {
		return &Error{Fault: NotFinite, Corner: -1}
	}
	seen := map[planar.Vec]int{}
	for i, p := range points {
		if !(largest(p) <= largestSize) {
			return &Error{Fault: NotFinite, Corner: i}
		}
		q := planar.Vec{X: p.X + 0, Y: p.Y + 0}
		if k, ok := seen[q]; ok {
			if b.z[k] != p.Z {
				return &Error{Fault: TwoHeights, Corner: i, At: p}
			}
			g.Repeated++
			continue
		}
		seen[q] = len(b.place)
		b.place, b.z = append(b.place, q), append(b.z, p.Z)
	}
	g.Points = len(b.place)
	b.n = int32(len(b.place))
	b.v = make([]Vec, 2*b.n)
	for i, q := range b.place {
		b.v[i], b.v[int32(i)+b.n] = Vec{X: q.X, Y: q.Y, Z: b.z[i]}, Vec{X: q.X, Y: q.Y, Z: b.height}
	}
	return nil
}

// side tells whether a corner of the plan lies over or under the height.
func (b *terrain) side(i int32) int { return signOf(b.z[i] - b.height) }

// base is the corner at the height.
func (b *terrain) base(i int32) int32 {
	if i >= 2*b.n || b.side(i) == 0 {
		return i
	}
	return i + b.n
}

// cut is the corner where the side between two points passes through the height.
func (b *terrain) cut(i, j int32) int32 {
	key := [2]int32{min(i, j), max(i, j)}
	k, ok := b.cuts[key]
	if !ok {
		i, j = key[0], key[1]
		t := (b.height - b.z[i]) / (b.z[j] - b.z[i])
		p, q := b.place[i], b.place[j]
		k = int32(len(b.v))
		b.v = append(b.v, Vec{X: p.X + float64(t*(q.X-p.X)), Y: p.Y + float64(t*(q.Y-p.Y)), Z: b.height})
		b.cuts[key] = k
	}
	return k
}

// raise makes the solid over all triangles of the plan.
func (b *terrain) raise(g *Ground) {
	var under, over, area sum
	for k, t := range b.flat.T {
		for _, way := range [2]int{-1, 1} {
			loop := b.part(t[:], way, true)
			for i := 2; i < len(loop); i++ {
				x, y, z := loop[0], loop[i-1], loop[i]
				volume := b.prism(x, y, z)
				if way < 0 {
					// Over the surface: it looks down, the height up.
					b.add(x, z, y)
					b.add(b.base(x), b.base(y), b.base(z))
					under.add(volume)
				} else {
					b.add(x, y, z)
					b.add(b.base(x), b.base(z), b.base(y))
					over.add(volume)
				}
			}
			for i, u := range b.flat.Next[k] {
				if u < 0 {
					b.wall(t[i], t[(i+1)%3], way)
				}
			}
		}
		p, q, r := b.place[t[0]], b.place[t[1]], b.place[t[2]]
		area.add((float64((q.X-p.X)*(r.Y-p.Y)) - float64((q.Y-p.Y)*(r.X-p.X))) / 2)
		for i := range t {
			d := sub(Vec{X: b.place[t[i]].X, Y: b.place[t[i]].Y}, Vec{X: b.place[t[(i+1)%3]].X, Y: b.place[t[(i+1)%3]].Y})
			g.LongestGap = max(g.LongestGap, length(d))
		}
	}
	g.Under, g.Over, g.Area = under.value(), over.value(), area.value()
}

// part is what a loop of points has on one side of the height: nil if no more than its
// rim.
func (b *terrain) part(loop []int32, way int, closed bool) []int32 {
	var out []int32
	any := false
	for k, i := range loop {
		s := b.side(i) * way
		if s >= 0 {
			out = append(out, i)
			any = any || s > 0
		}
		if k+1 == len(loop) && !closed {
			break
		}
		if j := loop[(k+1)%len(loop)]; b.side(i)*b.side(j) < 0 {
			out = append(out, b.cut(i, j))
		}
	}
	if !any {
		return nil
	}
	return out
}

// wall raises the side from i to j of the plan's rim, which has the plan to its left.
func (b *terrain) wall(i, j int32, way int) {
	line := b.part([]int32{i, j}, way, false)
	for k := 1; k < len(line); k++ {
		low, high := [2]int32{line[k-1], line[k]}, [2]int32{b.base(line[k-1]), b.base(line[k])}
		if way > 0 {
			low, high = high, low
		}
		b.add(low[0], low[1], high[1])
		b.add(low[0], high[1], high[0])
	}
}

func (b *terrain) add(x, y, z int32) {
	if x != y && y != z && z != x {
		b.t = append(b.t, [3]int32{x, y, z})
	}
}

// prism is the volume between a triangle of the surface and the height.
func (b *terrain) prism(x, y, z int32) float64 {
	p, q, r := b.v[x], b.v[y], b.v[z]
	area := (float64((q.X-p.X)*(r.Y-p.Y)) - float64((q.Y-p.Y)*(r.X-p.X))) / 2
	return area * abs((p.Z-b.height)+(q.Z-b.height)+(r.Z-b.height)) / 3
}
