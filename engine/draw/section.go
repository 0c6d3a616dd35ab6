package draw

import (
	"fmt"
	"math"
	"strconv"
)

// Section is a map of a plane through a partition, one panel for each value of FOR EACH.
type Section struct {
	Title    string
	Where    string // "at z = 1.1 m"
	Value    string // what shades it: "temp"
	Unit     string // of the value
	Length   string // unit of the coordinates
	AxisX    string // what runs to the right, and up
	AxisY    string
	Limits   []float64 // one (an upper one) or two
	Estimate string    // how the shades are estimated: "Sibson"; "": each cell has its site's value
	Near     float64   // how far from the plane sites are marked
	Measured []string  // parts of the solid that alone count; none: all of it counts
	Panels   []Panel
	Notes    []string // further lines below
}

// Panel is one map.
type Panel struct {
	Heading string
	Cells   []Cell
	Tiles   []Tile // of an estimate, drawn in place of the cells' shades
	Walls   []Polygon
	Within  [][]Polygon // the outlines of Section.Measured
	Overlap bool        // some of them overlap
	Empty   []Polygon   // space of a zone without a site
	Sites   []Site
	Parts   []Part // whose areas add up to the section
}

// Polygon is a ring counter-clockwise (y up) and rings clockwise about its holes.
type Polygon [][]Point

// Cell is the cut through a cell.
type Cell struct {
	ID      string
	In      string // the part that it is measured in
	Value   float64
	Missing bool
	Area    float64
	Pieces  []Polygon
}

// Tile is a piece of an estimate.
type Tile struct {
	In      int // which of Section.Measured it lies in
	Value   float64
	Missing bool // out of reach
	Area    float64
	Pieces  []Polygon
}

// Site is a place to be marked.
type Site struct {
	ID string
	At Point
}

// Part is an area with a value.
type Part struct {
	Value   float64
	Missing bool
	Area    float64
	In      int // which of Section.Measured it lies in
}

// Shares are the parts of an area beyond limits, and without a value.
type Shares struct {
	Area, Under, Over, Missing float64
}

// SharesOf adds areas up.
func SharesOf(parts []Part, limits []float64) Shares {
	var s Shares
	for _, p := range parts {
		s.Area += p.Area
		switch {
		case p.Missing:
			s.Missing += p.Area
		case over(p.Value, limits):
			s.Over += p.Area
		case under(p.Value, limits):
			s.Under += p.Area
		}
	}
	return s
}

func over(v float64, limits []float64) bool {
	return len(limits) > 0 && v > limits[len(limits)-1]
}

func under(v float64, limits []float64) bool { return len(limits) == 2 && v < limits[0] }

// values are all values that are to be shaded.
func (x *Section) values() []float64 {
	var list []float64
	for i := range x.Panels {
		for _, c := range x.Panels[i].Cells {
			if !c.Missing && x.Estimate == "" {
				list = append(list, c.Value)
			}
		}
		for _, t := range x.Panels[i].Tiles {
			if !t.Missing {
				list = append(list, t.Value)
			}
		}
	}
	return list
}

// bounds are the extent of the maps.
func (x *Section) bounds() (lo, hi Point) {
	var walls []Polygon
	for i := range x.Panels {
		walls = append(walls, x.Panels[i].Walls...)
	}
	return Bounds(walls)
}

// Bounds is the extent of polygons; of none, +Inf to -Inf.
func Bounds(polygons []Polygon) (lo, hi Point) {
	lo, hi = Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	for _, w := range polygons {
		for _, p := range w[0] {
			lo = Point{math.Min(lo.X, p.X), math.Min(lo.Y, p.Y)}
			hi = Point{math.Max(hi.X, p.X), math.Max(hi.Y, p.Y)}
		}
	}
	return lo, hi
}

// view takes the plane of a panel to the page.
type view struct {
	lo    Point
	at    Point // of lo on the page
	scale float64
}

func (v view) place(p Point) Point {
	return Point{v.at.X + float64((p.X-v.lo.X)*v.scale), v.at.Y - float64((p.Y-v.lo.Y)*v.scale)}
}

func (v view) polygon(p Polygon) Polygon {
	out := make(Polygon, len(p))
	for i, ring := range p {
		out[i] = v.ring(ring)
	}
	return out
}

func (v view) ring(ring []Point) []Point {
	out := make([]Point, len(ring))
	for i, p := range ring {
		out[i] = v.place(p)
	}
	return out
}

// columns of panels on the page, by their number; a few maps much wider than high stand
// one below the other.
func columnsOf(panels int, aspect float64) int {
	switch {
	case panels == 1 || panels <= 4 && aspect > 2.5:
		return 1
	case panels <= 4:
		return 2
	}
	return 3
}

// Room beside a map: for the numbers of its axes, and its heading.
const (
	axisLeft   = 44
	axisBelow  = 40
	panelAbove = 20
	tallest    = 720
)

// Scene lays the map out.
func (x *Section) Scene() *Scene {
	s := newScene(x.Title, x.description())
	scale := NewScale(x.values(), x.Limits)
	y := s.heading(x.Title, x.Where+", shaded by "+named(x.Value, x.Unit)+x.method())
	y += 4
	lo, hi := x.bounds()
	columns := columnsOf(len(x.Panels), (hi.X-lo.X)/(hi.Y-lo.Y))
	room := (s.Width-2*margin)/float64(columns) - axisLeft - 8
	size := math.Min(room/(hi.X-lo.X), tallest/float64(columns)/(hi.Y-lo.Y))
	high := (hi.Y - lo.Y) * size
	for i := range x.Panels {
		p := &x.Panels[i]
		if i > 0 && i%columns == 0 {
			y += high + axisBelow + panelAbove
		}
		left := margin + axisLeft + float64(i%columns)*(s.Width-2*margin)/float64(columns)
		top := y
		if len(x.Panels) > 1 {
			s.add(Shape{Class: "panel", At: Point{left, y + 12}, Size: textSize, Bold: true, Text: fitted(p.Heading, room, textSize, true), Fill: ink})
			top += panelAbove
		}
		v := view{lo, Point{left, top + high}, size}
		x.panel(s, p, v, scale, hi)
	}
	if len(x.Panels) > 1 {
		y += panelAbove
	}
	y += high + axisBelow + 8
	y = x.scaleBar(s, y, size, hi.X-lo.X)
	y = x.legend(s, y+14, scale)
	for i := range x.Panels {
		p := &x.Panels[i]
		text := x.Words(p)
		if len(x.Panels) > 1 {
			text = p.Heading + ": " + text
		}
		y = s.words("words", margin, y, s.Width-2*margin, textSize, text)
		if len(x.Panels) == 1 {
			y = s.words("part-words", margin+8, y, s.Width-2*margin-8, textSize, x.PartWords(p)...)
		}
	}
	y = s.words("note", margin, y+2, s.Width-2*margin, smallSize, append(x.Notes, scale.Source+".")...)
	return s.finish(y + 2)
}

func (x *Section) method() string {
	if x.Estimate == "" {
		return " of the nearest site"
	}
	return " as estimated by " + x.Estimate
}

func (x *Section) description() string {
	text := x.Where + ", " + named(x.Value, x.Unit)
	for i := range x.Panels {
		text += ". "
		if len(x.Panels) > 1 {
			text += x.Panels[i].Heading + ": "
		}
		text += x.Words(&x.Panels[i])
	}
	return text
}

// Words say how much of a panel is beyond the limits.
func (x *Section) Words(p *Panel) string {
	if len(x.Measured) > 0 {
		return x.measuredWords(p)
	}
	return x.sharesInWords("Section of", SharesOf(p.Parts, x.Limits))
}

// sharesInWords is a sentence about the shares of an area.
func (x *Section) sharesInWords(what string, sh Shares) string {
	area := WithUnit(Number(sh.Area), square(x.Length))
	about := ""
	if x.Estimate != "" {
		about = "about "
	}
	share := func(part float64) string {
		if sh.Area == 0 {
			return "0 %"
		}
		percent := Number(math.Round(part/sh.Area*1e4) / 100)
		if percent == "0" && part > 0 {
			percent = "less than 0.01"
		}
		return about + percent + " % (" + WithUnit(Number(part), square(x.Length)) + ")"
	}
	text := what + " " + area
	switch len(x.Limits) {
	case 1:
		text += ": " + share(sh.Over) + " over " + WithUnit(Number(x.Limits[0]), x.Unit)
	case 2:
		text += ": " + share(sh.Over) + " over " + WithUnit(Number(x.Limits[1]), x.Unit) + ", " + share(sh.Under) + " under " +
			WithUnit(Number(x.Limits[0]), x.Unit)
	}
	if sh.Missing > 0 {
		text += "; " + share(sh.Missing) + " without a value"
	}
	return text + "."
}

func square(length string) string {
	if length == "" {
		return ""
	}
	return length + "²"
}

// exact writes a number so that it reads back to the same bits.
func exact(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// panel draws one map.
func (x *Section) panel(s *Scene, p *Panel, v view, scale *Scale, hi Point) {
	x.axes(s, v, hi)
	marks := map[Hatch][]Polygon{}
	x.grounds(s, p, v, marks)
	for i := range p.Cells {
		c := &p.Cells[i]
		shape := Shape{Class: "cell", Closed: true, Tip: x.tip(c), Data: []Attribute{{"id", c.ID}, {"area", exact(c.Area)}}}
		var pieces []Polygon
		for _, piece := range c.Pieces {
			pieces = append(pieces, v.polygon(piece))
			shape.Paths = append(shape.Paths, pieces[len(pieces)-1]...)
		}
		switch {
		case x.Estimate != "":
			continue
		case c.Missing:
			shape.Fill = bare
		default:
			shape.Fill = scale.Colour(c.Value)
			shape.Data = append(shape.Data, Attribute{"value", exact(c.Value)})
		}
		if c.In != "" {
			shape.Data = append(shape.Data, Attribute{"part", c.In})
		}
		s.add(shape)
		if h := x.hatch(c.Value, c.Missing); h != NoHatch {
			marks[h] = append(marks[h], pieces...)
		}
	}
	x.tiles(s, p, v, scale, marks)
	s.hatchings(marks)
	x.borders(s, p, v)
	x.sites(s, p, v)
}

// grounds fills what lies under the cells where they leave some of the solid free: its
// parts that do not count, and zones without a site.
func (x *Section) grounds(s *Scene, p *Panel, v view, marks map[Hatch][]Polygon) {
	fill := func(class string, colour Colour, list []Polygon) {
		ground := Shape{Class: class, Closed: true, Fill: colour}
		for _, w := range list {
			ground.Paths = append(ground.Paths, v.polygon(w)...)
		}
		s.add(ground)
	}
	if len(x.Measured) > 0 {
		fill("not-measured", bare, p.Walls)
	}
	if len(p.Empty) > 0 {
		fill("empty", bare, p.Empty)
		for _, w := range p.Empty {
			marks[Upright] = append(marks[Upright], v.polygon(w))
		}
	}
}

// hatchings draws the marks of areas. Each line has a light rim, to be seen on dark ground too.
func (s *Scene) hatchings(marks map[Hatch][]Polygon) {
	for h := Rising; h <= Upright; h++ {
		if lines := hatched(h, marks[h]); len(lines) > 0 {
			s.add(Shape{Class: hatchNames[h] + "-rim", Paths: lines, Stroke: paper, Line: 1.6})
			s.add(Shape{Class: hatchNames[h], Paths: lines, Stroke: ink, Line: 0.8})
		}
	}
}

var hatchNames = [...]string{Rising: "over", Falling: "under", Level: "missing", Upright: "unreached"}

func (x *Section) hatch(value float64, missing bool) Hatch {
	switch {
	case missing && x.Estimate != "":
		return Upright
	case missing:
		return Level
	case over(value, x.Limits):
		return Rising
	case under(value, x.Limits):
		return Falling
	}
	return NoHatch
}

func (x *Section) tip(c *Cell) string {
	value := "no value"
	if !c.Missing {
		value = WithUnit(Number(c.Value), x.Unit)
	}
	id := c.ID
	if c.In != "" {
		id += " in " + c.In
	}
	return fmt.Sprintf("%s: %s, %s", id, value, WithUnit(Number(c.Area), square(x.Length)))
}

// tiles draws an estimate: tiles of one colour in a shape, so that the file stays small.
func (x *Section) tiles(s *Scene, p *Panel, v view, scale *Scale, marks map[Hatch][]Polygon) {
	if len(p.Tiles) == 0 {
		return
	}
	last := Shape{}
	for i := range p.Tiles {
		t := &p.Tiles[i]
		fill := bare
		if !t.Missing {
			fill = scale.Colour(t.Value)
		}
		var rings [][]Point
		h := x.hatch(t.Value, t.Missing)
		for _, piece := range t.Pieces {
			polygon := v.polygon(piece)
			rings = append(rings, polygon...)
			if h != NoHatch {
				marks[h] = append(marks[h], polygon)
			}
		}
		if fill != last.Fill {
			s.add(last)
			last = Shape{Class: "tile", Closed: true, Fill: fill, Stroke: fill, Line: 0.4}
		}
		last.Paths = append(last.Paths, rings...)
	}
	s.add(last)
}

// borders draws the borders of cells, and the walls over them.
func (x *Section) borders(s *Scene, p *Panel, v view) {
	var thin [][]Point
	for i := range p.Cells {
		for _, piece := range p.Cells[i].Pieces {
			for _, ring := range piece {
				for k, a := range ring {
					b := ring[(k+1)%len(ring)]
					if a.X < b.X || a.X == b.X && a.Y < b.Y { // its neighbour draws the others
						thin = append(thin, v.ring([]Point{a, b}))
					}
				}
			}
		}
	}
	if len(thin) > 0 {
		colour := softer
		if x.Estimate != "" {
			colour = faint
		}
		s.add(Shape{Class: "border", Paths: thin, Stroke: colour, Line: 0.6})
	}
	outlines := func(class string, width float64, list []Polygon) {
		shape := Shape{Class: class, Closed: true, Stroke: ink, Line: width}
		for _, w := range list {
			shape.Paths = append(shape.Paths, v.polygon(w)...)
		}
		s.add(shape)
	}
	outlines("wall", 2.4, p.Walls)
	for _, list := range p.Within {
		outlines("part", 1.6, list)
	}
}
