package draw

import (
	"bytes"
	"image/color"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgimg"
)

// dotsPerUnits is what the canvas takes for dots an inch, where it takes a unit of the
// page for a point: 72 units get so many dots, an inch on paper 200 of them.
const dotsPerUnits = 142

// PNG is the picture in dots.
func (s *Scene) PNG() ([]byte, error) {
	c := vgimg.NewWith(vgimg.UseWH(vg.Length(s.Width), vg.Length(s.Height)), vgimg.UseDPI(dotsPerUnits))
	for i := range s.Shapes {
		x := &s.Shapes[i]
		if x.Text != "" {
			s.paintText(c, x)
		} else {
			s.paintPaths(c, x)
		}
	}
	var b bytes.Buffer
	if _, err := (vgimg.PngCanvas{Canvas: c}).WriteTo(&b); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// place turns a place on the page into one on the canvas, whose y runs up.
func (s *Scene) place(p Point) vg.Point {
	return vg.Point{X: vg.Length(p.X), Y: vg.Length(s.Height - p.Y)}
}

func (s *Scene) paintPaths(c *vgimg.Canvas, x *Shape) {
	var path vg.Path
	for _, points := range x.Paths {
		for i, p := range points {
			if i == 0 {
				path.Move(s.place(p))
			} else {
				path.Line(s.place(p))
			}
		}
		if x.Closed && len(points) > 0 {
			path.Close()
		}
	}
	if len(path) == 0 {
		return
	}
	if !x.Fill.none() {
		c.SetColor(x.Fill.solid())
		c.Fill(path)
	}
	if !x.Stroke.none() {
		c.SetColor(x.Stroke.solid())
		c.SetLineWidth(vg.Length(x.Line))
		var dashes []vg.Length
		for _, d := range x.Dash {
			dashes = append(dashes, vg.Length(d))
		}
		c.SetLineDash(dashes, 0)
		c.Stroke(path)
	}
}

func (s *Scene) paintText(c *vgimg.Canvas, x *Shape) {
	f := sized(x.Size, x.Bold)
	at := s.place(x.At)
	c.Push()
	c.Translate(at)
	if x.Upward {
		c.Rotate(1.5707963267948966)
	}
	shift := vg.Length(0)
	switch x.Anchor {
	case Middle:
		shift = -f.Width(x.Text) / 2
	case End:
		shift = -f.Width(x.Text)
	}
	if x.Halo {
		c.SetColor(color.White)
		for _, d := range [...]vg.Point{{X: -1}, {X: 1}, {Y: -1}, {Y: 1}, {X: -0.7, Y: -0.7}, {X: 0.7, Y: 0.7}, {X: -0.7, Y: 0.7}, {X: 0.7, Y: -0.7}} {
			c.FillString(f, vg.Point{X: shift + d.X, Y: d.Y}, x.Text)
		}
	}
	c.SetColor(x.Fill.solid())
	c.FillString(f, vg.Point{X: shift}, x.Text)
	c.Pop()
}
