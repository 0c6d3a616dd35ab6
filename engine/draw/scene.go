package draw

// Point is a place on the page: x to the right, y down, in quarters of a millimetre.
// In the data of a picture it is a place in the plane, y up.
type Point struct{ X, Y float64 }

// PageWidth is the width of every picture: 180 mm, the text of an A4 sheet.
const PageWidth = 720

// Units of a page in a millimetre.
const perMillimetre = 4

// Scene is a picture laid out.
type Scene struct {
	Width, Height float64
	Title         string // for those who cannot see it
	Description   string
	Shapes        []Shape
}

// Attribute is a fact about a shape that can be read back from the file.
type Attribute struct{ Name, Value string }

// Shape is a path, or a text where Text is not empty.
type Shape struct {
	Class string // what it is: "cell", "wall", "site", "limit"
	Data  []Attribute
	Tip   string // shown where the pointer rests

	Paths  [][]Point
	Closed bool
	Fill   Colour // zero: none
	Stroke Colour
	Line   float64 // width of the stroke
	Dash   []float64

	Text   string
	At     Point
	Size   float64
	Bold   bool
	Anchor Anchor
	Halo   bool // a light rim, to be read on any ground
	Upward bool // turned by a quarter, to be read from the right
}

// Anchor is where a text stands to its place.
type Anchor uint8

const (
	Start Anchor = iota
	Middle
	End
)

// Colours of what is not a value.
var (
	paper  = RGB(255, 255, 255)
	ink    = RGB(34, 34, 34)
	softer = RGB(96, 96, 96)
	faint  = RGB(208, 208, 208)
	bare   = RGB(238, 238, 238) // ground of a cell without a value
)

// Sizes of texts: 3 mm for most, which is 8.5 points.
const (
	titleSize = 17
	textSize  = 12
	smallSize = 10
	lineGap   = 16
)

func (s *Scene) add(x Shape) { s.Shapes = append(s.Shapes, x) }

func (s *Scene) line(class string, c Colour, width float64, points ...Point) {
	s.add(Shape{Class: class, Paths: [][]Point{points}, Stroke: c, Line: width})
}

func (s *Scene) box(class string, lo, hi Point, fill, stroke Colour, width float64) {
	s.add(Shape{Class: class, Closed: true, Fill: fill, Stroke: stroke, Line: width,
		Paths: [][]Point{{lo, {hi.X, lo.Y}, hi, {lo.X, hi.Y}}}})
}

func (s *Scene) text(class string, at Point, size float64, anchor Anchor, text string) {
	s.add(Shape{Class: class, At: at, Size: size, Anchor: anchor, Text: text, Fill: ink})
}

// words writes paragraphs from y down, broken at the width, and gives where the next
// line would stand.
func (s *Scene) words(class string, x, y, width, size float64, texts ...string) float64 {
	for _, t := range texts {
		for _, line := range broken(t, width, size, false) {
			s.text(class, Point{x, y}, size, Start, line)
			y += size + 4
		}
	}
	return y
}

// heading writes the title and what stands below it, and gives where the rest begins.
func (s *Scene) heading(title string, below ...string) float64 {
	y := 24.0
	for _, line := range broken(title, s.Width-2*margin, titleSize, true) {
		s.add(Shape{Class: "title", At: Point{margin, y}, Size: titleSize, Bold: true, Text: line, Fill: ink})
		y += titleSize + 4
	}
	return s.words("subtitle", margin, y, s.Width-2*margin, textSize, below...)
}

// margin is what is left free at the sides of the page.
const margin = 12

func newScene(title, description string) *Scene {
	return &Scene{Width: PageWidth, Title: title, Description: description}
}

// finish sets the height of the page and puts the paper under everything.
func (s *Scene) finish(height float64) *Scene {
	s.Height = height
	ground := Shape{Class: "paper", Closed: true, Fill: paper, Paths: [][]Point{{{0, 0}, {s.Width, 0}, {s.Width, height}, {0, height}}}}
	s.Shapes = append([]Shape{ground}, s.Shapes...)
	return s
}
