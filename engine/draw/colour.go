package draw

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/palette"
	"gonum.org/v1/plot/palette/brewer"
	"gonum.org/v1/plot/palette/moreland"
)

// Colour is an opaque colour; the zero value is none.
type Colour struct {
	R, G, B uint8
	is      bool
}

// RGB is the colour with these parts.
func RGB(r, g, b uint8) Colour { return Colour{r, g, b, true} }

func (c Colour) none() bool         { return !c.is }
func (c Colour) solid() color.Color { return color.RGBA{c.R, c.G, c.B, 255} }

// String is how SVG writes it.
func (c Colour) String() string {
	if !c.is {
		return "none"
	}
	return fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B)
}

// Scale gives values their colours.
type Scale struct {
	Lo, Hi float64 // what the scale shows
	Limits []float64
	Source string // of the colours, as the legend names it
	at     func(share float64) Colour
}

// NewScale is a scale for these values, wide enough for the limits. Two limits make it
// diverge from the middle between them, which then is its own middle.
func NewScale(values, limits []float64) *Scale {
	s := &Scale{Lo: math.Inf(1), Hi: math.Inf(-1), Limits: limits}
	for _, list := range [][]float64{values, limits} {
		for _, v := range list {
			s.Lo, s.Hi = math.Min(s.Lo, v), math.Max(s.Hi, v)
		}
	}
	if s.Lo > s.Hi {
		s.Lo, s.Hi = 0, 1
	}
	if len(limits) == 2 {
		middle := (limits[0] + limits[1]) / 2
		reach := math.Max(s.Hi-middle, middle-s.Lo)
		s.Lo, s.Hi = middle-reach, middle+reach
		s.Source = "Colours: diverging, after Moreland 2009"
		s.at = shades(moreland.SmoothBlueRed(), false)
	} else {
		s.Source = "Colours: YlGnBu, Harrower and Brewer 2003"
		s.at = shades(yellowToBlue(), true)
	}
	if s.Lo == s.Hi {
		by := math.Max(math.Abs(s.Lo)/100, 0.5)
		s.Lo, s.Hi = s.Lo-by, s.Hi+by
	}
	return s
}

// yellowToBlue interpolates the nine classes of YlGnBu, dark to light.
func yellowToBlue() palette.ColorMap {
	p, err := brewer.GetPalette(brewer.TypeSequential, "YlGnBu", 9)
	if err != nil {
		panic("draw: " + err.Error())
	}
	classes := p.Colors()
	dark := make([]color.Color, len(classes))
	for i, c := range classes {
		r, g, b, _ := c.RGBA() // the classes' own type keeps a letter beside the colour
		dark[len(classes)-1-i] = color.RGBA{uint8(r >> 8), uint8(g >> 8), uint8(b >> 8), 255}
	}
	m, err := moreland.NewLuminance(dark)
	if err != nil {
		panic("draw: " + err.Error())
	}
	return m
}

func shades(m palette.ColorMap, turned bool) func(float64) Colour {
	m.SetMin(0)
	m.SetMax(1)
	if d, ok := m.(palette.DivergingColorMap); ok {
		d.SetConvergePoint(0.5)
	}
	return func(share float64) Colour {
		share = math.Max(0, math.Min(1, share))
		if turned {
			share = 1 - share
		}
		c, err := m.At(share)
		if err != nil {
			panic(fmt.Sprintf("draw: no colour for the share %v: %v", share, err))
		}
		r, g, b, _ := c.RGBA()
		return RGB(uint8(r>>8), uint8(g>>8), uint8(b>>8))
	}
}

// share is where on the scale a value stands, from 0 to 1.
func (s *Scale) share(v float64) float64 { return (v - s.Lo) / (s.Hi - s.Lo) }

// Colour is the colour of a value; what lies beyond the scale has that of its end.
func (s *Scale) Colour(v float64) Colour { return s.at(s.share(v)) }

// lineColours are those of Okabe and Ito (2008) that are dark enough for lines on white.
var lineColours = []Colour{RGB(0, 114, 178), RGB(213, 94, 0), RGB(0, 158, 115), RGB(204, 121, 167), RGB(86, 180, 233), RGB(34, 34, 34), RGB(230, 159, 0)}

// lineDashes tell lines apart without colours.
var lineDashes = [][]float64{nil, {8, 4}, {2, 3}, {10, 3, 2, 3}, {14, 5}, {5, 2}, {1, 2}}
