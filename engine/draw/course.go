package draw

import (
	"fmt"
	"math"
)

// Course is values along time, or along anything that grows.
type Course struct {
	Title  string
	Along  string // the name of what they run along
	Unit   string // of it
	Time   bool   // it is microseconds since 1970
	Gap    float64
	Limits []float64 // of the first line's unit
	Lines  []Line
	Notes  []string
}

// Line is one course. Where Missing is set there is no value: the line is open there,
// as it is across a step of more than Course.Gap.
type Line struct {
	Name, Unit string
	At, Value  []float64
	Missing    []bool
}

// units are the different units of the lines, by their first line.
func (c *Course) units() []string {
	var list []string
	for i := range c.Lines {
		known := false
		for _, u := range list {
			known = known || u == c.Lines[i].Unit
		}
		if !known {
			list = append(list, c.Lines[i].Unit)
		}
	}
	return list
}

// values are those of the lines of a unit, and where they run.
func (c *Course) values(unit string) (list, along []float64) {
	for i := range c.Lines {
		l := &c.Lines[i]
		along = append(along, l.At...)
		for k, v := range l.Value {
			if l.Unit == unit && !l.Missing[k] {
				list = append(list, v)
			}
		}
	}
	return list, along
}

// Scene lays the course out; there are one or two units.
func (c *Course) Scene() *Scene {
	s := newScene(c.Title, "")
	y := s.heading(c.Title) + 2
	y = c.key(s, y)
	units := c.units()
	p := plot{left: margin + 58, right: s.Width - margin - 12, top: y + 6, bottom: y + 290}
	if len(units) > 1 {
		p.right -= 52
	}
	first, along := c.values(units[0])
	p.x0, p.x1 = rangeOf(along)
	if p.x0 == p.x1 {
		p.x0, p.x1 = widened(p.x0, p.x1, 0)
	}
	p.y0, p.y1 = widened(first2(rangeOf(first, c.Limits)))
	room := int((p.right - p.left) / 62)
	marks, unit := numberTicks(p.x0, p.x1, room), c.Unit
	if c.Time {
		marks, unit = timeTicks(p.x0, p.x1, room), "UTC"
	}
	s.beside(p, numberTicks(p.y0, p.y1, 7), c.axis(units[0]), false)
	planes := []plot{p}
	if len(units) > 1 {
		q := p
		second, _ := c.values(units[1])
		q.y0, q.y1 = roundEnds(rangeOf(second))
		s.beside(q, numberTicks(q.y0, q.y1, 7), c.axis(units[1]), true)
		planes = append(planes, q)
	}
	s.below(p, marks, named(c.Along, unit))
	whose := ""
	if len(units) > 1 {
		whose = " (left axis)"
	}
	s.limitLines(p, c.Limits, units[0], whose)
	for i := range c.Lines {
		plane := planes[0]
		if c.Lines[i].Unit != units[0] {
			plane = planes[1]
		}
		c.draw(s, i, plane)
	}
	words := c.Words()
	for _, w := range words {
		s.Description += w + " "
	}
	y = s.words("words", margin, p.bottom+64, s.Width-2*margin, textSize, words...)
	y = s.words("note", margin, y+2, s.Width-2*margin, smallSize, c.Notes...)
	return s.finish(y + 2)
}

// roundEnds widens a range to ticks, with a step more at the top. The second axis has such
// ends, so that its lines do not seem to touch the limits of the first one where both
// fill their field; values that are not negative begin at no less than 0.
func roundEnds(lo, hi float64) (float64, float64) {
	if lo >= hi {
		lo, hi = widened(lo, hi, 0)
	}
	by := step(hi-lo, 7)
	return by * math.Floor(lo/by+1e-9), by * (math.Ceil(hi/by-1e-9) + 1)
}

func first2(lo, hi float64) (float64, float64, float64) { return lo, hi, 0.06 }

// axis names the lines of a unit.
func (c *Course) axis(unit string) string {
	names := ""
	for i := range c.Lines {
		if c.Lines[i].Unit == unit {
			if names != "" {
				names += ", "
			}
			names += c.Lines[i].Name
		}
	}
	return named(names, unit)
}

// key shows each line with its name.
func (c *Course) key(s *Scene, y float64) float64 {
	x := float64(margin)
	for i := range c.Lines {
		text := fitted(named(c.Lines[i].Name, c.Lines[i].Unit), s.Width-2*margin-50, textSize, false)
		wide := 40 + width(text, textSize, false) + 18
		if x > margin && x+wide > s.Width-margin {
			x, y = margin, y+lineGap
		}
		s.add(Shape{Class: "key", Paths: [][]Point{{{x, y - 4}, {x + 34, y - 4}}}, Stroke: lineColours[i%len(lineColours)], Line: 2, Dash: lineDashes[i%len(lineDashes)]})
		s.text("legend", Point{x + 40, y}, textSize, Start, text)
		x += wide
	}
	return y + lineGap
}

// draw draws one line in its stretches; a single reading between gaps is a dot.
func (c *Course) draw(s *Scene, i int, p plot) {
	l := &c.Lines[i]
	shape := Shape{Class: "line", Stroke: lineColours[i%len(lineColours)], Line: 1.6, Dash: lineDashes[i%len(lineDashes)], Tip: l.Name,
		Data: []Attribute{{"name", l.Name}}}
	dots := Shape{Class: "line-dots", Closed: true, Fill: shape.Stroke}
	var stretch []Point
	end := func() {
		switch {
		case len(stretch) == 1:
			dots.Paths = append(dots.Paths, disc(stretch[0], 2))
		case len(stretch) > 1:
			shape.Paths = append(shape.Paths, stretch)
		}
		stretch = nil
	}
	for k, at := range l.At {
		if k > 0 && c.Gap > 0 && at-l.At[k-1] > c.Gap {
			end()
		}
		if l.Missing[k] {
			end()
			continue
		}
		stretch = append(stretch, p.place(Point{at, l.Value[k]}))
	}
	end()
	s.add(shape)
	s.add(dots)
}

// Words say how far the lines reach, and how many of their rows are beyond the limits.
func (c *Course) Words() []string {
	var list []string
	unit := c.units()[0]
	for i := range c.Lines {
		l := &c.Lines[i]
		n, above, below := 0, 0, 0
		lo, hi := math.Inf(1), math.Inf(-1)
		for k, v := range l.Value {
			if l.Missing[k] {
				continue
			}
			n++
			lo, hi = math.Min(lo, v), math.Max(hi, v)
			if over(v, c.Limits) {
				above++
			}
			if under(v, c.Limits) {
				below++
			}
		}
		if n == 0 {
			list = append(list, l.Name+": no values.")
			continue
		}
		text := fmt.Sprintf("%s: %d values from %s to %s", l.Name, n, Number(lo), WithUnit(Number(hi), l.Unit))
		if l.Unit == unit && len(c.Limits) > 0 {
			text += fmt.Sprintf("; %d of them over %s", above, WithUnit(Number(c.Limits[len(c.Limits)-1]), unit))
			if len(c.Limits) == 2 {
				text += fmt.Sprintf(", %d under %s", below, WithUnit(Number(c.Limits[0]), unit))
			}
		}
		if missing := len(l.Value) - n; missing > 0 {
			text += fmt.Sprintf("; %d rows without a value are left open", missing)
		}
		list = append(list, text+".")
	}
	return list
}
