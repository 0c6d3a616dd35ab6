package draw

import (
	"fmt"
	"math"
	"slices"
)

// gaze is a parallel projection: from far away in a direction, upright.
type gaze struct {
	from, right, up Spot // of length 1
}

func gazeFrom(from Spot) gaze {
	n := toLength1(from)
	u, v := across(n)
	return gaze{n, u, v}
}

// flat is where a place is seen, y up.
func (g gaze) flat(p Spot) Point { return Point{times(p, g.right), times(p, g.up)} }

// opening is the plane at which the second picture is cut open: across the axis that is
// nearest to the direction of the view, in the middle.
func (x *Space) opening(from Spot) (axis int, at float64) {
	for k := range 3 {
		if math.Abs(from[k]) > math.Abs(from[axis]) {
			axis = k
		}
	}
	lo, hi := x.Bounds()
	return axis, (lo[axis] + hi[axis]) / 2
}

// Scene lays the still out: the cells from outside, and below or beside that cut open.
func (x *Space) Scene() *Scene {
	from, seen := x.Seen()
	s := newScene(x.Title, x.Description())
	g := gazeFrom(from)
	y := s.heading(x.Title, x.Shaded()+" of the site, "+seen)
	walls := x.walls()
	size := x.size()
	edges := roomEdges(walls, x.middle(), size)
	lo, hi := x.outline(g)
	wide, high := math.Max(hi.X-lo.X, size*1e-6), math.Max(hi.Y-lo.Y, size*1e-6)
	columns := 1.0
	if wide < 0.9*high {
		columns = 2
	}
	room := (s.Width-2*margin)/columns - 16
	scale := math.Min(room/wide, 400/high)
	axis, at := x.opening(from)
	headings := [2]string{"from outside", "cut open at " + WithUnit("xyz"[axis:axis+1]+" = "+Number(at), x.Length) + ", what lies before it taken away"}
	colours := x.Scale()
	bottom := y
	for k, heading := range headings {
		left := margin + float64(k)*(columns-1)*(s.Width-2*margin)/2
		top := bottom
		if k == 1 && columns == 2 {
			top = y
		}
		s.add(Shape{Class: "panel", At: Point{left, top + 14}, Size: textSize, Bold: true, Text: fitted(heading, room+16, textSize, true), Fill: ink})
		v := view{lo, Point{left + (room+16-wide*scale)/2, top + 26 + high*scale}, scale}
		p := &stillPanel{x: x, s: s, g: g, v: v, colours: colours, tol: size * 1e-9}
		if k == 0 {
			p.paint(walls, "cell")
			s.tripod(g, Point{left + 28, v.at.Y - 8})
		} else {
			p.opened(walls, edges, axis, at, from[axis])
		}
		bottom = v.at.Y + 14
	}
	y = x.legend(s, bottom+8, colours)
	y = s.words("words", margin, y, s.Width-2*margin, textSize, x.Words())
	y = s.words("note", margin, y+2, s.Width-2*margin, smallSize, append(slices.Clone(x.Notes),
		"A parallel view: lengths along each axis are alike all over the picture. Cells are named where there is room. Colours are not shaded by light, so that they are those of the legend.", colours.Source+".")...)
	return s.finish(y + 2)
}

// outline is the extent of what is seen.
func (x *Space) outline(g gaze) (lo, hi Point) {
	lo, hi = Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	for i := range x.Bodies {
		for _, h := range x.Bodies[i].Hulls {
			for _, c := range h.Corners {
				p := g.flat(c)
				lo = Point{math.Min(lo.X, p.X), math.Min(lo.Y, p.Y)}
				hi = Point{math.Max(hi.X, p.X), math.Max(hi.Y, p.Y)}
			}
		}
	}
	return lo, hi
}

// stillPanel is one of the pictures of a still on its way.
type stillPanel struct {
	x       *Space
	s       *Scene
	g       gaze
	v       view
	colours *Scale
	tol     float64
	painted []painted // what is there already, in its order
}

// painted is a facet on the page.
type painted struct {
	ring []Point
	body int
}

// place is where a place in space is on the page.
func (p *stillPanel) place(q Spot) Point { return p.v.place(p.g.flat(q)) }

// opened paints what lies behind a plane across an axis, and the plane itself; the edges
// of the room before it are drawn over it, thin.
func (p *stillPanel) opened(walls []facet, edges [][2]Spot, axis int, at, side float64) {
	var n Spot
	n[axis] = math.Copysign(1, side)
	d := n[axis] * at
	var kept []facet
	for i := range walls {
		lo, hi := walls[i].reach(n, d)
		switch {
		case hi <= p.tol:
			kept = append(kept, walls[i])
		case lo < -p.tol:
			_, behind := walls[i].slice(n, d, p.tol)
			for k, e := range behind.edges {
				a, b := behind.at[k], behind.at[(k+1)%len(behind.at)]
				if e == noEdge && math.Abs(times(n, a)-d) <= 2*p.tol && math.Abs(times(n, b)-d) <= 2*p.tol {
					behind.edges[k] = roomEdge // the wall ends at the cut
				}
			}
			kept = append(kept, *behind)
		}
	}
	kept = append(kept, p.x.Cut(axis, at, side)...)
	p.paint(kept, "cell")
	var thin [][]Point
	for _, e := range edges {
		da, db := times(n, e[0])-d, times(n, e[1])-d
		switch {
		case da <= p.tol && db <= p.tol:
			continue
		case da < 0:
			e[0] = between(e[0], e[1], da/(da-db))
		case db < 0:
			e[1] = between(e[0], e[1], da/(da-db))
		}
		thin = append(thin, []Point{p.place(e[0]), p.place(e[1])})
	}
	if len(thin) > 0 {
		p.s.add(Shape{Class: "taken-away", Paths: thin, Stroke: softer, Line: 0.7, Dash: []float64{4, 3}})
	}
}

// Cut is what a plane across an axis cuts out of the bodies, as seen from the side.
func (x *Space) Cut(axis int, at, side float64) []facet {
	size := x.size()
	var n Spot
	n[axis] = math.Copysign(1, side)
	var list []facet
	for i := range x.Bodies {
		for k := range x.Bodies[i].Hulls {
			h := &x.Bodies[i].Hulls[k]
			if f, ok := newFacet(h.cut(n, n[axis]*at, size*1e-9), i, float64(size*size)*1e-14); ok {
				f.cap = true
				h.plainEdges(&f, size*1e-9, true)
				list = append(list, f)
			}
		}
	}
	return list
}

// paint paints facets, the far ones first; those that face away are not seen.
func (p *stillPanel) paint(list []facet, class string) {
	var seen []*facet
	for i := range list {
		if times(list[i].n, p.g.from) > 1e-9 {
			seen = append(seen, &list[i])
		}
	}
	split(seen, p.tol).paint(p.g.from, func(group []*facet) { p.group(group, class) })
	p.names()
}

// group paints the facets of one plane: their colours, their marks, their edges.
func (p *stillPanel) group(list []*facet, class string) {
	marks := map[Hatch][]Polygon{}
	var lines [roomEdge + 1][][]Point
	for _, f := range list {
		b := &p.x.Bodies[f.body]
		ring := make([]Point, len(f.at))
		for i, q := range f.at {
			ring[i] = p.place(q)
		}
		fill := p.x.Fill(p.colours, b)
		shape := Shape{Class: class, Closed: true, Fill: fill, Stroke: fill, Line: 0.3, Paths: [][]Point{ring}, Tip: p.x.tip(b),
			Data: []Attribute{{"id", b.ID()}, {"area", exact(f.area)}, {"volume", exact(b.Size())}}}
		if v, missing := b.Shade(); !missing {
			shape.Data = append(shape.Data, Attribute{"value", exact(v)})
		}
		if f.cap {
			shape.Class = "cap"
		}
		p.s.add(shape)
		p.painted = append(p.painted, painted{ring, f.body})
		if h := p.x.Mark(b); h != NoHatch {
			marks[h] = append(marks[h], Polygon{ring})
		}
		for i, kind := range f.edges {
			if kind != noEdge {
				lines[kind] = append(lines[kind], []Point{ring[i], ring[(i+1)%len(ring)]})
			}
		}
	}
	for h := Rising; h <= Level; h++ {
		if hatching := hatched(h, marks[h]); len(hatching) > 0 {
			p.s.add(Shape{Class: hatchNames[h], Paths: hatching, Stroke: ink, Line: 0.7})
		}
	}
	if len(lines[cellEdge]) > 0 {
		p.s.add(Shape{Class: "border", Paths: once(lines[cellEdge]), Stroke: softer, Line: 0.6})
	}
	if len(lines[roomEdge]) > 0 {
		p.s.add(Shape{Class: "wall", Paths: once(lines[roomEdge]), Stroke: ink, Line: 1.6})
	}
}

// names writes the name of each cell into the largest of its facets that is seen, where it
// fits: within the facet, and not where something nearer lies over it.
func (p *stillPanel) names() {
	type label struct {
		at   Point
		area float64
	}
	best := make([]label, len(p.x.Bodies))
	for k := range p.painted {
		f := &p.painted[k]
		rings := Polygon{f.ring}
		area := math.Abs(rings.Area())
		if area <= best[f.body].area*(1+1e-9) {
			continue
		}
		at := rings.Middle()
		half, high := width(p.x.Bodies[f.body].ID(), smallSize, false)/2+2, smallSize*0.6
		free := true
		for _, c := range [...]Point{{-half, -high}, {half, -high}, {half, high}, {-half, high}, {}} {
			q := Point{at.X + c.X, at.Y + c.Y}
			free = free && rings.Holds(q) && !slices.ContainsFunc(p.painted[k+1:], func(o painted) bool { return Polygon{o.ring}.Holds(q) })
		}
		if free {
			best[f.body] = label{at, area}
		}
	}
	for i, l := range best {
		if l.area > 0 {
			p.s.add(Shape{Class: "name", At: Point{l.at.X, l.at.Y + smallSize*0.35}, Anchor: Middle, Size: smallSize, Text: p.x.Bodies[i].ID(), Fill: ink, Halo: true})
		}
	}
}

// once leaves out lines that are there already, the other way round or the same.
func once(lines [][]Point) [][]Point {
	type ends [4]int64
	seen := map[ends]bool{}
	var list [][]Point
	for _, l := range lines {
		key := ends{int64(math.Round(l[0].X * 50)), int64(math.Round(l[0].Y * 50)), int64(math.Round(l[1].X * 50)), int64(math.Round(l[1].Y * 50))}
		if !seen[key] {
			seen[key], seen[ends{key[2], key[3], key[0], key[1]}] = true, true
			list = append(list, l)
		}
	}
	return list
}

func (x *Space) tip(b *Body) string {
	value := "no value"
	if v, missing := b.Shade(); !missing {
		value = WithUnit(Number(v), x.Unit)
	}
	return fmt.Sprintf("%s: %s, %s", b.ID(), value, WithUnit(Number(b.Size()), x.Volume))
}

// tripod draws where the axes point.
func (s *Scene) tripod(g gaze, at Point) {
	for k, name := range [...]string{"x", "y", "z"} {
		var axis Spot
		axis[k] = 1
		d := g.flat(axis)
		end := Point{at.X + 20*d.X, at.Y - 20*d.Y}
		if math.Hypot(d.X, d.Y) < 0.05 {
			continue // it points at the eye
		}
		s.line("axis-line", ink, 1, at, end)
		s.text("axis", Point{at.X + 27*d.X, at.Y - 27*d.Y + 3}, smallSize, Middle, name)
	}
}

// legend draws the scale with its limits, and a swatch for each mark that is used.
func (x *Space) legend(s *Scene, y float64, scale *Scale) float64 {
	m := &Section{Value: x.Value, Unit: x.Unit, Limits: x.Limits}
	left, wide, high := float64(margin), 400.0, 14.0
	top := y + 30
	end := m.strip(s, named(x.Value, x.Unit), left, y, wide, top, high, scale)
	left, y = left+wide+26, y+2
	for _, h := range x.Marks() {
		y = s.swatch(left, y, h, x.MarkWords()[h])
	}
	return math.Max(y, end) + 8
}
