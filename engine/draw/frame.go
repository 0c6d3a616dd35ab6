package draw

import (
	"math"
	"slices"
)

// plot is the field of a chart between its axes.
type plot struct {
	left, right, top, bottom float64 // on the page
	x0, x1, y0, y1           float64 // in the data
}

func (p plot) x(v float64) float64 { return p.left + (p.right-p.left)*((v-p.x0)/(p.x1-p.x0)) }
func (p plot) y(v float64) float64 { return p.bottom - (p.bottom-p.top)*((v-p.y0)/(p.y1-p.y0)) }

func (p plot) place(q Point) Point { return Point{p.x(q.X), p.y(q.Y)} }

// widened is a range with some room at both ends; of one value, about it.
func widened(lo, hi, by float64) (float64, float64) {
	if lo > hi {
		return 0, 1
	}
	if lo == hi {
		d := math.Max(math.Abs(lo)/20, 0.5)
		return lo - d, hi + d
	}
	return lo - (hi-lo)*by, hi + (hi-lo)*by
}

// rangeOf is the least and the greatest of lists of values.
func rangeOf(lists ...[]float64) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, list := range lists {
		for _, v := range list {
			lo, hi = math.Min(lo, v), math.Max(hi, v)
		}
	}
	return lo, hi
}

// below draws the axis at the bottom.
func (s *Scene) below(p plot, ticks []tick, title string) {
	s.line("axis-line", ink, 1, Point{p.left, p.bottom}, Point{p.right, p.bottom})
	for _, t := range ticks {
		at := p.x(t.at)
		s.line("tick", ink, 0.8, Point{at, p.bottom}, Point{at, p.bottom + 4})
		s.text("number", Point{at, p.bottom + 15}, smallSize, Middle, t.text)
		if t.below != "" {
			anchor := Middle
			if half := width(t.below, smallSize, false) / 2; at-half < margin {
				anchor = Start
			} else if at+half > s.Width-margin {
				anchor = End
			}
			s.text("number", Point{at, p.bottom + 27}, smallSize, anchor, t.below)
		}
	}
	y := p.bottom + 34
	if slices.ContainsFunc(ticks, func(t tick) bool { return t.below != "" }) {
		y += 9
	}
	s.text("axis", Point{(p.left + p.right) / 2, y}, textSize, Middle, title)
}

// beside draws an axis at the left, with lines through the field, or at the right.
func (s *Scene) beside(p plot, ticks []tick, title string, right bool) {
	at, out, anchor := p.left, -1.0, End
	if right {
		at, out, anchor = p.right, 1.0, Start
	}
	s.line("axis-line", ink, 1, Point{at, p.top}, Point{at, p.bottom})
	widest := 0.0
	for _, t := range ticks {
		y := p.y(t.at)
		if !right {
			s.line("grid", faint, 0.6, Point{p.left, y}, Point{p.right, y})
		}
		s.line("tick", ink, 0.8, Point{at, y}, Point{at + 4*out, y})
		s.text("number", Point{at + 7*out, y + 3.5}, smallSize, anchor, t.text)
		widest = math.Max(widest, width(t.text, smallSize, false))
	}
	x := at + out*(widest+14)
	if right {
		x += textSize * 0.8
	}
	s.add(Shape{Class: "axis", At: Point{x, (p.top + p.bottom) / 2}, Size: textSize, Anchor: Middle, Upward: true,
		Text: fitted(title, p.bottom-p.top, textSize, false), Fill: ink})
}

// limitLines draws limits across the field, each with its word, and whose they are where
// there are two axes.
func (s *Scene) limitLines(p plot, limits []float64, unit, whose string) {
	for _, l := range limits {
		y := p.y(l)
		s.add(Shape{Class: "limit", Paths: [][]Point{{{p.left, y}, {p.right, y}}}, Stroke: ink, Line: 1.6, Dash: []float64{9, 4}, Data: []Attribute{{"value", exact(l)}}})
		s.add(Shape{Class: "limit-text", At: Point{p.right - 4, y - 4}, Size: smallSize, Anchor: End, Text: "limit " + WithUnit(Number(l), unit) + whose, Fill: ink, Halo: true})
	}
}

// limitUprights draws limits of what runs to the right.
func (s *Scene) limitUprights(p plot, limits []float64, unit string) {
	end := math.Inf(-1)
	for _, l := range limits {
		x := p.x(l)
		text := "limit " + WithUnit(Number(l), unit)
		half := width(text, smallSize, false) / 2
		y := p.top - 5
		if x-half < end+4 {
			y -= smallSize + 2
		}
		end = x + half
		s.add(Shape{Class: "limit", Paths: [][]Point{{{x, p.top - 3}, {x, p.bottom}}}, Stroke: ink, Line: 1.6, Dash: []float64{9, 4}, Data: []Attribute{{"value", exact(l)}}})
		s.text("limit-text", Point{math.Min(math.Max(x, margin+half), s.Width-margin-half), y}, smallSize, Middle, text)
	}
}
