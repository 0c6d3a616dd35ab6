package draw

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// Shades of the terminal from low to high; those in ASCII for where nothing else is.
var (
	shades8   = []string{"·", "░", "▒", "▓", "█"}
	shadesOld = []string{".", ":", "-", "=", "*", "#", "@"}
)

// Characters of other marks.
const (
	charOver      = '^'
	charUnder     = 'v'
	charMissing   = '?'
	charUnreached = '~'
	charOutside   = ','
	charSite      = 'o'
)

// Characters is the map for a terminal of so many columns (0: 80), about twice as
// many characters wide as high for the same length. plain takes ASCII alone.
func (x *Section) Characters(columns int, plain bool) string {
	if columns <= 0 {
		columns = 80
	}
	columns = max(columns, 20)
	ramp := shades8
	if plain {
		ramp = shadesOld
	}
	classes := x.classes(len(ramp))
	var b strings.Builder
	write := func(text string) {
		if plain {
			text = ascii(text)
		}
		for _, line := range wrapped(text, columns) {
			b.WriteString(strings.TrimRight(line, " ") + "\n")
		}
	}
	write(x.Title + " " + x.Where + ", shaded by " + named(x.Value, x.Unit) + x.method())
	for i := range x.Panels {
		p := &x.Panels[i]
		if p.Heading != "" {
			b.WriteString("\n")
			write(p.Heading)
		}
		b.WriteString("\n")
		for _, line := range x.rows(p, columns, ramp, classes) {
			b.WriteString(strings.TrimRight(line, " ") + "\n")
		}
		b.WriteString("\n")
		write(x.Words(p))
		if len(x.Panels) == 1 {
			for _, line := range x.PartWords(p) {
				write("  " + line)
			}
		}
	}
	for _, line := range x.keys(ramp, classes) {
		write(line)
	}
	for _, n := range x.Notes {
		write(n)
	}
	return b.String()
}

// classes are the bounds of the shades: round numbers, one more than classes, as fine as
// the shades allow. Values beyond limits have signs of their own and need no shade.
func (x *Section) classes(most int) []float64 {
	var list []float64
	for _, v := range x.values() {
		if !over(v, x.Limits) && !under(v, x.Limits) {
			list = append(list, v)
		}
	}
	s := NewScale(list, nil)
	if len(list) == 0 && len(x.Limits) > 0 { // all are beyond
		s.Lo, s.Hi = x.Limits[0], x.Limits[len(x.Limits)-1]
	}
	if s.Lo == s.Hi {
		s.Lo, s.Hi = widened(s.Lo, s.Hi, 0)
	}
	by, lo, n := 0.0, 0.0, most+1
	for fine := 4 * most; n > most; fine-- {
		by = step(s.Hi-s.Lo, max(fine, 1))
		lo = math.Floor(s.Lo/by + 1e-9)
		n = int(math.Ceil(s.Hi/by-1e-9) - lo)
		if fine < 1 { // a range across a round number
			n = min(n, most)
		}
	}
	bounds := make([]float64, 0, n+1)
	for k := range n + 1 {
		bounds = append(bounds, (lo+float64(k))*by)
	}
	return bounds
}

// shadeOf is the class of a value; those beyond have the last one.
func shadeOf(v float64, classes []float64) int {
	for k := len(classes) - 2; k > 0; k-- {
		if v >= classes[k] {
			return k
		}
	}
	return 0
}

// shade is the character of class k of n.
func shade(ramp []string, k, n int) string {
	if n <= 1 {
		return ramp[len(ramp)/2]
	}
	return ramp[min(k*(len(ramp)-1)/(n-1), len(ramp)-1)]
}

// rows are the lines of a map.
func (x *Section) rows(p *Panel, columns int, ramp []string, classes []float64) []string {
	lo, hi := x.bounds()
	const tall = 2.0     // characters are about twice as high as wide
	const most = 45 * 1. // lines
	cell := math.Max((hi.X-lo.X)/float64(columns-1), (hi.Y-lo.Y)/(most*tall))
	wide, high := int(math.Ceil((hi.X-lo.X)/cell-1e-9)), int(math.Ceil((hi.Y-lo.Y)/(cell*tall)-1e-9))
	grid := make([][]string, high)
	for j := range grid {
		grid[j] = make([]string, wide)
		for i := range grid[j] {
			at := Point{lo.X + (float64(i)+0.5)*cell, hi.Y - (float64(j)+0.5)*cell*tall}
			grid[j][i] = x.character(p, at, ramp, classes)
		}
	}
	for _, s := range p.Sites {
		i, j := int((s.At.X-lo.X)/cell), int((hi.Y-s.At.Y)/(cell*tall))
		if i >= 0 && j >= 0 && i < wide && j < high {
			grid[j][i] = string(charSite)
		}
	}
	lines := make([]string, high)
	for j := range grid {
		lines[j] = strings.Join(grid[j], "")
	}
	return lines
}

// character is what stands for a place.
func (x *Section) character(p *Panel, at Point, ramp []string, classes []float64) string {
	value, missing, in := p.at(at)
	switch {
	case !in && holds(p.Empty, at):
		return string(charUnreached)
	case !in && len(x.Measured) > 0 && holds(p.Walls, at):
		return string(charOutside)
	case !in:
		return " "
	case missing && x.Estimate != "":
		return string(charUnreached)
	case missing:
		return string(charMissing)
	case over(value, x.Limits):
		return string(charOver)
	case under(value, x.Limits):
		return string(charUnder)
	}
	return shade(ramp, shadeOf(value, classes), len(classes)-1)
}

// at is the value at a place of the map.
func (p *Panel) at(q Point) (value float64, missing, in bool) {
	for i := range p.Cells {
		for _, piece := range p.Cells[i].Pieces {
			if piece.Holds(q) {
				return p.Cells[i].Value, p.Cells[i].Missing, true
			}
		}
	}
	for i := range p.Tiles {
		for _, piece := range p.Tiles[i].Pieces {
			if piece.Holds(q) {
				return p.Tiles[i].Value, p.Tiles[i].Missing, true
			}
		}
	}
	return 0, false, false
}

// holds tells whether a place lies in one of some polygons.
func holds(list []Polygon, q Point) bool {
	return slices.ContainsFunc(list, func(p Polygon) bool { return p.Holds(q) })
}

// keys explain the characters that are used.
func (x *Section) keys(ramp []string, classes []float64) []string {
	n := len(classes) - 1
	by := classes[1] - classes[0]
	var parts []string
	for k := range n {
		parts = append(parts, shade(ramp, k, n)+" "+tickText(classes[k], by)+" to "+tickText(classes[k+1], by))
	}
	lines := []string{named(x.Value, x.Unit) + ": " + strings.Join(parts, "   ")}
	parts = nil
	if len(x.Limits) > 0 {
		parts = append(parts, fmt.Sprintf("%c over %s", charOver, WithUnit(Number(x.Limits[len(x.Limits)-1]), x.Unit)))
	}
	if len(x.Limits) == 2 {
		parts = append(parts, fmt.Sprintf("%c under %s", charUnder, WithUnit(Number(x.Limits[0]), x.Unit)))
	}
	sites, missing, empty := 0, false, false
	for i := range x.Panels {
		sites += len(x.Panels[i].Sites)
		empty = empty || len(x.Panels[i].Empty) > 0
		missing = missing || slices.ContainsFunc(x.Panels[i].Cells, func(c Cell) bool { return c.Missing && x.Estimate == "" }) ||
			slices.ContainsFunc(x.Panels[i].Tiles, func(t Tile) bool { return t.Missing })
	}
	switch {
	case missing && x.Estimate != "":
		parts = append(parts, fmt.Sprintf("%c out of the method's reach", charUnreached))
	case missing:
		parts = append(parts, fmt.Sprintf("%c no value at the site", charMissing))
	}
	if empty {
		parts = append(parts, fmt.Sprintf("%c no site in the zone", charUnreached))
	}
	if len(x.Measured) > 0 {
		parts = append(parts, fmt.Sprintf("%c outside the parts: does not count", charOutside))
	}
	if sites > 0 {
		parts = append(parts, fmt.Sprintf("%c site within %s of the plane", charSite, WithUnit(Number(x.Near), x.Length)))
	}
	if len(parts) > 0 {
		lines = append(lines, strings.Join(parts, "   "))
	}
	return append(lines, x.AxisX+" to the right, "+x.AxisY+" up")
}

// wrapped breaks a text at blanks, in characters; blanks side by side stay.
func wrapped(text string, columns int) []string {
	var lines []string
	for len([]rune(text)) > columns {
		runes := []rune(text)
		at := columns
		for at > 0 && runes[at] != ' ' {
			at--
		}
		if at == 0 {
			at = columns
		}
		lines = append(lines, string(runes[:at]))
		text = strings.TrimLeft(string(runes[at:]), " ")
	}
	return append(lines, text)
}

// ascii writes the signs of units without their own characters.
func ascii(text string) string {
	text = strings.NewReplacer("°", "deg ", "²", "^2", "³", "^3", "µ", "u", "·", "*", "–", "-", "…", "...").Replace(text)
	return strings.Map(func(r rune) rune {
		if r > 126 {
			return '?'
		}
		return r
	}, text)
}
