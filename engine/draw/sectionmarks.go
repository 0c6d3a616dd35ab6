package draw

import (
	"fmt"
	"math"
	"slices"
)

// axes draws ticks left of the map and below it.
func (x *Section) axes(s *Scene, v view, hi Point) {
	left, bottom := v.at.X, v.at.Y
	right, top := v.place(hi).X, v.place(hi).Y
	byX := step(hi.X-v.lo.X, max(2, int((right-left)/60)))
	for _, t := range ticks(v.lo.X, hi.X, max(2, int((right-left)/60))) {
		at := v.place(Point{t, v.lo.Y})
		s.line("tick", softer, 0.8, Point{at.X, bottom + 4}, Point{at.X, bottom + 8})
		s.text("number", Point{at.X, bottom + 19}, smallSize, Middle, tickText(t, byX))
	}
	byY := step(hi.Y-v.lo.Y, max(2, int((bottom-top)/40)))
	for _, t := range ticks(v.lo.Y, hi.Y, max(2, int((bottom-top)/40))) {
		at := v.place(Point{v.lo.X, t})
		s.line("tick", softer, 0.8, Point{left - 8, at.Y}, Point{left - 4, at.Y})
		s.text("number", Point{left - 11, at.Y + 3.5}, smallSize, End, tickText(t, byY))
	}
	s.text("axis", Point{(left + right) / 2, bottom + 31}, smallSize, Middle, named(x.AxisX, x.Length))
	s.add(Shape{Class: "axis", At: Point{left - 34, (top + bottom) / 2}, Size: smallSize, Anchor: Middle, Upward: true,
		Text: named(x.AxisY, x.Length), Fill: ink})
}

// scaleBar draws a round length.
func (x *Section) scaleBar(s *Scene, y, scale, wide float64) float64 {
	length := step(wide, 6)
	left := float64(margin + axisLeft)
	right := left + length*scale
	s.box("scale-bar", Point{left, y}, Point{right, y + 5}, ink, Colour{}, 0)
	s.box("scale-bar-half", Point{(left + right) / 2, y + 1}, Point{right - 1, y + 4}, paper, Colour{}, 0)
	s.text("scale-bar-text", Point{right + 6, y + 7}, smallSize, Start, WithUnit(Number(length), x.Length))
	return y + 8
}

// frame is a box on the page that a text takes.
type frame struct{ lo, hi Point }

func (f frame) meets(o frame) bool {
	return f.lo.X < o.hi.X && o.lo.X < f.hi.X && f.lo.Y < o.hi.Y && o.lo.Y < f.hi.Y
}

// sites marks the sites near the plane, and names those for whose name there is room:
// beside, above or below the mark, over no other mark and no other name.
func (x *Section) sites(s *Scene, p *Panel, v view) {
	const r = 3.2
	lo, hi := x.bounds()
	page := frame{v.place(Point{lo.X, hi.Y}), v.place(Point{hi.X, lo.Y})}
	var taken []frame
	for i := range p.Sites {
		at := v.place(p.Sites[i].At)
		taken = append(taken, frame{Point{at.X - r - 1, at.Y - r - 1}, Point{at.X + r + 1, at.Y + r + 1}})
	}
	left := 0
	for i := range p.Sites {
		site := &p.Sites[i]
		at := v.place(site.At)
		if !x.holds(site.At) {
			continue
		}
		s.add(Shape{Class: "site", Closed: true, Fill: ink, Stroke: paper, Line: 1, Paths: [][]Point{disc(at, r)},
			Data: []Attribute{{"id", site.ID}}, Tip: site.ID})
		label, anchor, box, ok := room(site.ID, at, r, page, taken)
		if !ok {
			left++
			continue
		}
		taken = append(taken, box)
		s.add(Shape{Class: "name", At: label, Anchor: anchor, Size: smallSize, Text: site.ID, Fill: ink, Halo: true})
	}
	x.partNames(s, p, v, page, taken)
	if left > 0 {
		verb := "names have"
		if left == 1 {
			verb = "name has"
		}
		note := fmt.Sprintf("%d %s no room on the map.", left, verb)
		if p.Heading != "" && len(x.Panels) > 1 {
			note = p.Heading + ": " + note
		}
		if !slices.Contains(x.Notes, note) {
			x.Notes = append(x.Notes, note)
		}
	}
}

// room finds a free place for a name about a mark.
func room(text string, at Point, r float64, page frame, taken []frame) (Point, Anchor, frame, bool) {
	w, h := width(text, smallSize, false), float64(smallSize)
	gap := r + 2
	for _, o := range [...]struct {
		dx, dy float64
		anchor Anchor
	}{{gap, h / 3, Start}, {-gap, h / 3, End}, {0, -gap, Middle}, {0, gap + h*0.75, Middle},
		{gap - 2, -gap + 1, Start}, {-gap + 2, -gap + 1, End}, {gap - 2, gap + h/2, Start}, {-gap + 2, gap + h/2, End}} {
		p := Point{at.X + o.dx, at.Y + o.dy}
		left := p.X - [...]float64{0, w / 2, w}[o.anchor]
		box := frame{Point{left - 1, p.Y - h*0.78}, Point{left + w + 1, p.Y + h*0.22}}
		if box.lo.X < page.lo.X || box.hi.X > page.hi.X || box.lo.Y < page.lo.Y || box.hi.Y > page.hi.Y ||
			slices.ContainsFunc(taken, box.meets) {
			continue
		}
		return p, o.anchor, box, true
	}
	return Point{}, 0, frame{}, false
}

// holds tells whether a place lies in the frame of the maps. In a plane that is not
// level, sites near it can lie beside what it cuts.
func (x *Section) holds(p Point) bool {
	lo, hi := x.bounds()
	return p.X >= lo.X && p.X <= hi.X && p.Y >= lo.Y && p.Y <= hi.Y
}

// partNames names the parts that count, each at its upper left where there is room:
// inside it, above or below it.
func (x *Section) partNames(s *Scene, p *Panel, v view, page frame, taken []frame) {
	for k, list := range p.Within {
		if len(list) == 0 {
			continue
		}
		lo, hi := Bounds(list)
		a, b := v.place(Point{lo.X, hi.Y}), v.place(Point{hi.X, lo.Y})
		name := fitted(x.Measured[k], b.X-a.X+24, smallSize, true)
		w := width(name, smallSize, true)
		for _, at := range [...]Point{{a.X + 4, a.Y + smallSize + 1}, {a.X, a.Y - 4}, {a.X, b.Y + smallSize + 2}, {b.X - w, a.Y - 4}} {
			box := frame{Point{at.X - 1, at.Y - smallSize*0.78}, Point{at.X + w + 1, at.Y + smallSize*0.22}}
			if box.lo.X < page.lo.X || box.hi.X > page.hi.X || box.lo.Y < page.lo.Y || box.hi.Y > page.hi.Y || slices.ContainsFunc(taken, box.meets) {
				continue
			}
			taken = append(taken, box)
			s.add(Shape{Class: "part-name", At: at, Size: smallSize, Bold: true, Text: name, Fill: ink, Halo: true})
			break
		}
	}
}

// disc is a round mark, as a polygon: one way to draw for all formats.
func disc(at Point, r float64) []Point {
	const corners = 12
	ring := make([]Point, corners)
	for i := range ring {
		sin, cos := math.Sincos(2 * math.Pi * float64(i) / corners)
		ring[i] = Point{at.X + float64(r*cos), at.Y + float64(r*sin)}
	}
	return ring
}

// legend draws the scale with its limits, and a swatch for each mark that is used.
func (x *Section) legend(s *Scene, y float64, scale *Scale) float64 {
	left, wide, high := float64(margin+axisLeft), 360.0, 14.0
	end := x.strip(s, named(x.Value, x.Unit)+x.method(), left, y, wide, y+30, high, scale)
	return x.swatches(s, left+wide+26, y+2, end)
}

// strip draws the scale itself, and gives where it ends.
func (x *Section) strip(s *Scene, title string, left, y, wide, top, high float64, scale *Scale) float64 {
	s.text("legend", Point{left, y + 6}, textSize, Start, fitted(title, s.Width-margin-left, textSize, false))
	const steps = 60
	for i := range steps {
		from, to := left+wide*float64(i)/steps, left+wide*float64(i+1)/steps
		fill := scale.at((float64(i) + 0.5) / steps)
		s.box("scale", Point{from, top}, Point{to, top + high}, fill, fill, 0.3)
	}
	s.add(Shape{Class: "scale-range", Closed: true, Stroke: ink, Line: 0.8, Data: []Attribute{{"from", exact(scale.Lo)}, {"to", exact(scale.Hi)}},
		Paths: [][]Point{{{left, top}, {left + wide, top}, {left + wide, top + high}, {left, top + high}}}})
	by := step(scale.Hi-scale.Lo, 8)
	for _, t := range ticks(scale.Lo, scale.Hi, 8) {
		at := left + float64(wide*scale.share(t))
		s.line("tick", ink, 0.8, Point{at, top + high}, Point{at, top + high + 4})
		s.text("number", Point{at, top + high + 15}, smallSize, Middle, tickText(t, by))
	}
	x.limitMarks(s, left, wide, top, high, scale)
	return top + high + 30
}

// swatch explains one mark, and gives where the next one stands.
func (s *Scene) swatch(left, y float64, h Hatch, text string) float64 {
	box := []Point{{left, y}, {left + 24, y}, {left + 24, y + 14}, {left, y + 14}}
	s.add(Shape{Class: "swatch", Closed: true, Fill: bare, Stroke: softer, Line: 0.6, Paths: [][]Point{box}})
	s.add(Shape{Class: "swatch-lines", Paths: hatched(h, []Polygon{{box}}), Stroke: ink, Line: 0.8})
	return s.words("legend", left+32, y+11, s.Width-margin-left-32, textSize, text) - 8
}

// limitMarks draws a line and a word over the scale for each limit.
func (x *Section) limitMarks(s *Scene, left, wide, top, high float64, scale *Scale) {
	end := math.Inf(-1)
	for _, l := range x.Limits {
		at := left + float64(wide*scale.share(l))
		text := "limit " + WithUnit(Number(l), x.Unit)
		half := width(text, smallSize, false) / 2
		y := top - 8
		if at-half < end+4 { // above the one before it
			y -= smallSize + 2
		}
		end = at + half
		s.add(Shape{Class: "limit", Paths: [][]Point{{{at, top - 6}, {at, top + high + 2}}}, Stroke: ink, Line: 2, Data: []Attribute{{"value", exact(l)}}})
		s.text("limit-text", Point{at, y}, smallSize, Middle, text)
	}
}

// swatches explain the marks beside the scale, and give where the legend ends.
func (x *Section) swatches(s *Scene, left, y, end float64) float64 {
	used := map[Hatch]bool{}
	sites, empty := false, false
	for i := range x.Panels {
		p := &x.Panels[i]
		for k := range p.Sites {
			sites = sites || x.holds(p.Sites[k].At)
		}
		empty = empty || len(p.Empty) > 0
		if x.Estimate == "" {
			for _, c := range p.Cells {
				used[x.hatch(c.Value, c.Missing)] = true
			}
		}
		for _, t := range p.Tiles {
			used[x.hatch(t.Value, t.Missing)] = true
		}
	}
	texts := [...]string{Rising: "over the limit", Falling: "under the limit", Level: "no value at the site", Upright: "out of the method's reach"}
	switch {
	case empty && used[Upright]:
		texts[Upright] += ", or no site in the zone"
	case empty:
		used[Upright], texts[Upright] = true, "no site in the zone"
	}
	for h := Rising; h <= Upright; h++ {
		if used[h] {
			y = s.swatch(left, y, h, texts[h])
		}
	}
	if len(x.Measured) > 0 {
		y = s.swatch(left, y, NoHatch, "outside the parts: does not count")
	}
	text := "site within " + WithUnit(Number(x.Near), x.Length) + " of the plane"
	if !sites {
		text = "no " + text
	} else {
		s.add(Shape{Class: "swatch", Closed: true, Fill: ink, Stroke: paper, Line: 1, Paths: [][]Point{disc(Point{left + 12, y + 7}, 3.2)}})
	}
	y = s.words("legend", left+32, y+11, s.Width-margin-left-32, textSize, text)
	return math.Max(y, end) + 8
}
