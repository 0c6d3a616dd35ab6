package draw

import (
	"math"
	"slices"
	"strings"
)

// Space is a picture of cells in space: as a still, and as the data of a page in which
// they can be turned.
type Space struct {
	Title  string
	Value  string // what shades it: "temp"
	Unit   string // of the value
	Length string // unit of the coordinates
	Volume string // unit of the volumes
	Limits []float64
	From   Spot // the direction that it is seen from; zero: DefaultFrom
	Bodies []Body
	Notes  []string
	Text   func(v float64) string // writes values and volumes as tables do
}

// DefaultFrom is a direction from which most rooms can be seen into: from the front,
// somewhat from the left, and above.
var DefaultFrom = Spot{-1, -2, 1.5}

// Spot is a place or a direction in space.
type Spot [3]float64

// Body is a cell, with the sites at its place: most have one.
type Body struct {
	Rows  []BodyRow
	At    Spot
	Hulls []Hull
}

// BodyRow is what the table of cells says of one site.
type BodyRow struct {
	ID      string
	Value   float64
	Missing bool
	Volume  float64
}

// Hull is a convex polyhedron.
type Hull struct {
	Corners []Spot
	Faces   []HullFace
}

// HullFace is a face of a hull.
type HullFace struct {
	Loop  []int32  // corners, counter-clockwise from outside
	Other int32    // the body on its other side, or Wall, or Seam
	Walls [][]Spot // of a Seam: the parts of it that are a wall all the same
}

// What is on the other side of a face, where it is no body.
const (
	Wall int32 = -1 // nothing: it is a wall of the room
	Seam int32 = -2 // another hull of the same body
)

// ID names a body by its sites.
func (b *Body) ID() string {
	ids := make([]string, len(b.Rows))
	for i := range b.Rows {
		ids[i] = b.Rows[i].ID
	}
	return strings.Join(ids, ", ")
}

// Shade is the value that a body is shaded by: of several sites at one place their mean.
func (b *Body) Shade() (value float64, missing bool) {
	sum, n := 0.0, 0
	for i := range b.Rows {
		if !b.Rows[i].Missing {
			sum += b.Rows[i].Value
			n++
		}
	}
	if n == 0 {
		return 0, true
	}
	return sum / float64(n), false
}

// Size is the volume of a body: that of its rows together.
func (b *Body) Size() float64 {
	sum := 0.0
	for i := range b.Rows {
		sum += b.Rows[i].Volume
	}
	return sum
}

// Neighbours are the bodies that a body touches, in their order.
func (b *Body) Neighbours() []int32 {
	var list []int32
	for i := range b.Hulls {
		for _, f := range b.Hulls[i].Faces {
			if f.Other >= 0 {
				list = append(list, f.Other)
			}
		}
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// Scale is the scale of the bodies' values.
func (x *Space) Scale() *Scale {
	var values []float64
	for i := range x.Bodies {
		if v, missing := x.Bodies[i].Shade(); !missing && !math.IsInf(v, 0) {
			values = append(values, v)
		}
	}
	return NewScale(values, x.Limits)
}

// Mark is how a body is marked beside its colour.
func (x *Space) Mark(b *Body) Hatch {
	v, missing := b.Shade()
	switch {
	case missing:
		return Level
	case over(v, x.Limits):
		return Rising
	case under(v, x.Limits):
		return Falling
	}
	return NoHatch
}

// Fill is the colour of a body.
func (x *Space) Fill(s *Scale, b *Body) Colour {
	v, missing := b.Shade()
	if missing {
		return bare
	}
	return s.Colour(v)
}

// MarkWords say what the marks mean, in legends.
func (x *Space) MarkWords() map[Hatch]string {
	return map[Hatch]string{Rising: "over the limit", Falling: "under the limit", Level: "no value at the site"}
}

// Marks are those that are used, in their order.
func (x *Space) Marks() []Hatch {
	var list []Hatch
	for h := Rising; h <= Level; h++ {
		if slices.ContainsFunc(x.Bodies, func(b Body) bool { return x.Mark(&b) == h }) {
			list = append(list, h)
		}
	}
	return list
}

// Shaded says what the colours are of.
func (x *Space) Shaded() string { return "shaded by " + named(x.Value, x.Unit) }

// Words say how much of the space is beyond the limits.
func (x *Space) Words() string {
	var parts []Part
	for i := range x.Bodies {
		for _, r := range x.Bodies[i].Rows {
			parts = append(parts, Part{Value: r.Value, Missing: r.Missing, Area: r.Volume})
		}
	}
	sh := SharesOf(parts, x.Limits)
	share := func(part float64) string {
		if sh.Area == 0 {
			return "0 %"
		}
		return Number(math.Round(part/sh.Area*1e4)/100) + " % (" + WithUnit(Number(part), x.Volume) + ")"
	}
	text := cellsWord(len(x.Bodies)) + " of " + WithUnit(Number(sh.Area), x.Volume) + " together"
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
	lo, hi := x.Bounds()
	return text + ". They reach from (" + spotText(lo) + ") to (" + WithUnit(spotText(hi)+")", x.Length) + "."
}

func cellsWord(n int) string {
	if n == 1 {
		return "One cell"
	}
	return Number(float64(n)) + " cells"
}

func spotText(p Spot) string {
	return Number(p[0]) + ", " + Number(p[1]) + ", " + Number(p[2])
}

// Bounds is the box of all corners.
func (x *Space) Bounds() (lo, hi Spot) {
	for k := range 3 {
		lo[k], hi[k] = math.Inf(1), math.Inf(-1)
	}
	for i := range x.Bodies {
		for _, h := range x.Bodies[i].Hulls {
			for _, c := range h.Corners {
				for k := range 3 {
					lo[k], hi[k] = math.Min(lo[k], c[k]), math.Max(hi[k], c[k])
				}
			}
		}
	}
	return lo, hi
}

// Seen is the direction that the still is seen from, and its words.
func (x *Space) Seen() (from Spot, words string) {
	from = x.From
	if from == (Spot{}) {
		from = DefaultFrom
	}
	return from, "seen from the direction (" + spotText(from) + ")"
}

// Description says in words what is in the picture.
func (x *Space) Description() string {
	_, seen := x.Seen()
	return x.Shaded() + ", " + seen + ". " + x.Words()
}

// Vectors.

func minus(a, b Spot) Spot { return Spot{a[0] - b[0], a[1] - b[1], a[2] - b[2]} }

func times(a, b Spot) float64 {
	return float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
}

func crossed(a, b Spot) Spot {
	return Spot{float64(a[1]*b[2]) - float64(a[2]*b[1]), float64(a[2]*b[0]) - float64(a[0]*b[2]), float64(a[0]*b[1]) - float64(a[1]*b[0])}
}

func length(a Spot) float64 { return math.Sqrt(times(a, a)) }

func toLength1(a Spot) Spot {
	l := length(a)
	return Spot{a[0] / l, a[1] / l, a[2] / l}
}

// between is the place between a and b at a share of the way.
func between(a, b Spot, share float64) Spot {
	return Spot{a[0] + float64((b[0]-a[0])*share), a[1] + float64((b[1]-a[1])*share), a[2] + float64((b[2]-a[2])*share)}
}

// areaNormal is the normal of a plane polygon as long as its area.
func areaNormal(p []Spot) (n Spot) {
	for k := 2; k < len(p); k++ {
		c := crossed(minus(p[k-1], p[0]), minus(p[k], p[0]))
		for i := range 3 {
			n[i] += c[i] / 2
		}
	}
	return n
}

// ScaleTick is a round value on a scale, at its share of the way from Lo to Hi.
type ScaleTick struct {
	Share float64
	Text  string
}

// Ticks are round values on the scale, about so many.
func (s *Scale) Ticks(most int) []ScaleTick {
	by := step(s.Hi-s.Lo, most)
	var list []ScaleTick
	for _, v := range ticks(s.Lo, s.Hi, most) {
		list = append(list, ScaleTick{s.share(v), tickText(v, by)})
	}
	return list
}

// LimitTicks are the limits on the scale.
func (s *Scale) LimitTicks(unit string) []ScaleTick {
	var list []ScaleTick
	for _, l := range s.Limits {
		list = append(list, ScaleTick{s.share(l), "limit " + WithUnit(Number(l), unit)})
	}
	return list
}

// At is the colour at a share of the scale.
func (s *Scale) At(share float64) Colour { return s.at(share) }
