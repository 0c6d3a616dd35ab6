package draw

import (
	"encoding/xml"
	"math"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"
)

// TestTicks: ticks are multiples of one round step, in the range, and as few as asked.
func TestTicks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.Float64Range(-1e3, 1e3).Draw(t, "lo")
		hi := lo + rapid.Float64Range(0.1, 1e6).Draw(t, "length")
		most := rapid.IntRange(2, 12).Draw(t, "most")
		list := ticks(lo, hi, most)
		by := step(hi-lo, most)
		if len(list) == 0 && by <= hi-lo || len(list) > most+1 {
			t.Fatalf("%d ticks from %v to %v, up to %d wanted", len(list), lo, hi, most)
		}
		for _, v := range list {
			if v < lo-by*1e-6 || v > hi+by*1e-6 || math.Abs(v/by-math.Round(v/by)) > 1e-6 {
				t.Fatalf("tick %v from %v to %v by %v", v, lo, hi, by)
			}
		}
	})
}

// TestTimeTicks: a week has its midnights, a day its hours with one date below.
func TestTimeTicks(t *testing.T) {
	at := func(text string) float64 {
		v, err := time.Parse("2006-01-02 15:04", text)
		if err != nil {
			t.Fatal(err)
		}
		return float64(v.UnixMicro())
	}
	line := func(list []tick) string {
		var parts []string
		for _, x := range list {
			parts = append(parts, strings.TrimSpace(x.text+" "+x.below))
		}
		return strings.Join(parts, ", ")
	}
	if got, want := line(timeTicks(at("2031-04-07 00:00"), at("2031-04-13 23:45"), 9)),
		"7 Apr 2031, 8 Apr, 9 Apr, 10 Apr, 11 Apr, 12 Apr, 13 Apr"; got != want {
		t.Errorf("week: %s", got)
	}
	if got, want := line(timeTicks(at("2031-04-07 07:00"), at("2031-04-08 07:00"), 5)),
		"12:00 7 Apr 2031, 18:00, 00:00 8 Apr 2031, 06:00"; got != want {
		t.Errorf("day: %s", got)
	}
	if got, want := line(timeTicks(at("2031-01-20 00:00"), at("2032-02-01 00:00"), 5)), "Apr 2031, Jul 2031, Oct 2031, Jan 2032"; got != want {
		t.Errorf("year: %s", got)
	}
}

// TestHatched: the lines of a hatching lie in the polygon, and their length is its area
// over their distance.
func TestHatched(t *testing.T) {
	square := Polygon{{{0, 0}, {200, 0}, {200, 200}, {0, 200}}, {{50, 50}, {50, 150}, {150, 150}, {150, 50}}}
	for h := Rising; h <= Upright; h++ {
		length := 0.0
		for _, l := range hatched(h, []Polygon{square}) {
			length += math.Hypot(l[1].X-l[0].X, l[1].Y-l[0].Y)
			middle := Point{(l[0].X + l[1].X) / 2, (l[0].Y + l[1].Y) / 2}
			if !square.Holds(middle) {
				t.Errorf("hatching %d runs through %v, outside", h, middle)
			}
		}
		if want := 30000 / hatchings[h].apart; math.Abs(length-want) > 0.05*want {
			t.Errorf("hatching %d: %v of lines, want about %v", h, length, want)
		}
	}
	left, right := Polygon{{{0, 0}, {100, 0}, {100, 50}, {0, 50}}}, Polygon{{{100, 0}, {200, 0}, {200, 50}, {100, 50}}}
	if one, two := len(hatched(Level, []Polygon{left})), len(hatched(Level, []Polygon{left, right})); one != two {
		t.Errorf("lines that go on are one: %d of one square, %d of two", one, two)
	}
}

// TestWithin: the tiles of a polygon with a hole have its area.
func TestWithin(t *testing.T) {
	p := Polygon{{{0, 0}, {30, 0}, {30, 12}, {18, 12}, {18, 18}, {0, 18}}, {{5, 5}, {5, 9}, {11, 9}, {11, 5}}}
	sum := 0.0
	for i := range 13 {
		for j := range 8 {
			lo := Point{float64(i) * 2.4, float64(j) * 2.4}
			sum += p.Within(lo, Point{lo.X + 2.4, lo.Y + 2.4}).Area()
		}
	}
	if want := 30.*18 - 12*6 - 6*4; math.Abs(sum-want) > 1e-9 || math.Abs(p.Area()-want) > 1e-12 {
		t.Errorf("tiles have %v, the polygon %v, want %v", sum, p.Area(), want)
	}
	if m := (Polygon{{{2, 1}, {4, 1}, {4, 5}, {2, 5}}}).Middle(); math.Hypot(m.X-3, m.Y-3) > 1e-12 {
		t.Errorf("middle %v", m)
	}
}

// TestScale: lightness falls along the scale of values, and limits lie on it.
func TestScale(t *testing.T) {
	s := NewScale([]float64{3, 9}, nil)
	last := math.Inf(1)
	for k := range 21 {
		c := s.Colour(3 + 6*float64(k)/20)
		if l := 0.2126*float64(c.R) + 0.7152*float64(c.G) + 0.0722*float64(c.B); l >= last {
			t.Errorf("step %d is no darker", k)
		} else {
			last = l
		}
	}
	d := NewScale([]float64{3, 9}, []float64{2, 8})
	if d.Lo != 1 || d.Hi != 9 {
		t.Errorf("from %v to %v, want 1 to 9 about the middle 5", d.Lo, d.Hi)
	}
	if c := d.Colour(5); max(c.R, c.G, c.B)-min(c.R, c.G, c.B) > 6 {
		t.Errorf("the middle between the limits is %s, not grey", c)
	}
	// The ends of the classes as ColorBrewer prints them: ffffd9 and 081d58.
	if a, b := s.Colour(3).String(), s.Colour(9).String(); a != "#ffffd9" || b != "#081d58" {
		t.Errorf("ends %s, %s", a, b)
	}
}

// TestBins: weights add up, every value is in its bin, and limits end bins.
func TestBins(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := &Histogram{Values: rapid.SliceOfN(rapid.Float64Range(-50, 50), 1, 60).Draw(t, "values")}
		total := 0.0
		for i := range h.Values {
			h.Weights = append(h.Weights, float64(i%7))
			total += float64(i % 7)
		}
		h.Limits = []float64{rapid.Float64Range(-60, 60).Draw(t, "limit")}
		sum := 0.0
		bins := h.Bins()
		for k, b := range bins {
			want := 0.0
			for i, v := range h.Values {
				if v >= b.From && (v < b.To || k == len(bins)-1 && v == b.To) {
					want += h.Weights[i]
				}
			}
			if b.Weight != want || b.To <= b.From {
				t.Fatalf("bin %v, want the weight %v", b, want)
			}
			if l := h.Limits[0]; b.From < l && l < b.To {
				t.Fatalf("the limit %v lies in bin %v", l, b)
			}
			sum += b.Weight
		}
		if sum != total {
			t.Fatalf("bins hold %v of %v", sum, total)
		}
	})
}

// TestLayers: three heights make three layers; weights add up; even ramps make slices.
func TestLayers(t *testing.T) {
	p := &Profile{Sites: []Height{{At: 0.4, Value: 4, Weight: 1}, {At: 6.9, Value: 6, Weight: 2}, {At: 0.5, Value: 5, Weight: 3}, {At: 3.5, Value: 5, Weight: 1}}}
	l := p.Layers()
	if len(l) != 3 || l[0].Mean != (4+15)/4. || l[0].From != 0.4 || l[0].To != 0.5 || l[2].Weight != 2 {
		t.Errorf("%+v", l)
	}
	p.Sites = nil
	for i := range 100 {
		p.Sites = append(p.Sites, Height{At: float64(i), Value: 1, Weight: 1})
	}
	if l := p.Layers(); len(l) != mostLayers || l[3].Sites != 10 {
		t.Errorf("a ramp: %d layers, %+v", len(l), l)
	}
}

// hostile is a section whose every text is hostile, with many sites in one place.
func hostile() *Section {
	bad := `<script>alert("&'")</script>` + "\x01"
	s := &Section{Title: bad, Where: bad, Value: bad, Unit: bad, Length: "m", AxisX: "x", AxisY: "y", Near: 1, Notes: []string{strings.Repeat("long", 200)}}
	ring := []Point{{0, 0}, {4, 0}, {4, 3}, {0, 3}}
	p := Panel{Walls: []Polygon{{ring}}, Cells: []Cell{{ID: bad, Value: 1, Area: 12, Pieces: []Polygon{{ring}}}}, Parts: []Part{{Value: 1, Area: 12}}}
	for i := range 30 {
		p.Sites = append(p.Sites, Site{ID: bad[:9], At: Point{2 + float64(i)/100, 1.5}})
	}
	s.Panels = []Panel{p}
	return s
}

// TestTextsEscaped: an SVG is well-formed whatever its texts, has no script, and no text
// reaches beyond the page.
func TestTextsEscaped(t *testing.T) {
	scene := hostile().Scene()
	d := xml.NewDecoder(strings.NewReader(string(scene.SVG())))
	for {
		token, err := d.Token()
		if token == nil {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if e, ok := token.(xml.StartElement); ok && e.Name.Local == "script" {
			t.Fatal("a text became an element")
		}
	}
	for _, x := range scene.Shapes {
		if x.Text == "" || x.Upward {
			continue
		}
		left := x.At.X - width(x.Text, x.Size, x.Bold)*[...]float64{0, 0.5, 1}[x.Anchor]
		if right := left + width(x.Text, x.Size, x.Bold); left < 0 || right > scene.Width || x.At.Y > scene.Height {
			t.Errorf("%s %q from %v to %v leaves the page", x.Class, x.Text, left, right)
		}
	}
}

// TestNamesApart: names on a map overlap neither one another nor a mark; those without
// room are counted.
func TestNamesApart(t *testing.T) {
	scene := hostile().Scene()
	var boxes []frame
	names, left := 0, ""
	for _, x := range scene.Shapes {
		switch {
		case x.Class == "site":
			c := x.Paths[0][0]
			boxes = append(boxes, frame{Point{c.X - 3.2, c.Y - 1}, Point{c.X, c.Y + 1}})
		case x.Class == "name":
			names++
			w := width(x.Text, x.Size, false)
			from := x.At.X - w*[...]float64{0, 0.5, 1}[x.Anchor]
			b := frame{Point{from, x.At.Y - 7}, Point{from + w, x.At.Y + 2}}
			for _, o := range boxes {
				if b.meets(o) {
					t.Errorf("the name at %v lies over another", x.At)
				}
			}
			boxes = append(boxes, b)
		case x.Class == "note" && strings.Contains(x.Text, "no room"):
			left = x.Text
		}
	}
	if names == 0 || names >= 30 || !strings.Contains(left, "names have no room") {
		t.Errorf("%d of 30 names, and the note %q", names, left)
	}
}

// TestCharacters: in ASCII, within the width, and the share of each character is that of
// its area.
func TestCharacters(t *testing.T) {
	s := &Section{Title: "Section", Where: "at z = 1", Value: "temp", Unit: "°C", Length: "m", AxisX: "x", AxisY: "y", Limits: []float64{2, 8}}
	quarter := func(x float64, v float64, missing bool) Cell {
		return Cell{ID: "c", Value: v, Missing: missing, Area: 8, Pieces: []Polygon{{{{x, 0}, {x + 2, 0}, {x + 2, 4}, {x, 4}}}}}
	}
	p := Panel{Walls: []Polygon{{{{0, 0}, {8, 0}, {8, 4}, {0, 4}}}},
		Cells: []Cell{quarter(0, 1, false), quarter(2, 5, false), quarter(4, 9, false), quarter(6, 0, true)}}
	for _, c := range p.Cells {
		p.Parts = append(p.Parts, Part{Value: c.Value, Missing: c.Missing, Area: c.Area})
	}
	s.Panels = []Panel{p}
	for _, columns := range []int{20, 41, 81} {
		text := s.Characters(columns, true)
		for _, line := range strings.Split(text, "\n") {
			if len(line) > columns {
				t.Errorf("%d columns: %q", columns, line)
			}
		}
		for _, r := range text {
			if r > 126 {
				t.Errorf("%q is no ASCII", r)
			}
		}
		body := strings.Split(text, "\n\n")[1]
		for _, c := range []string{"v", "^", "?"} {
			if share := float64(strings.Count(body, c)) / float64(len(strings.ReplaceAll(body, "\n", ""))); math.Abs(share-0.25) > 0.08 {
				t.Errorf("%d columns: %s has the share %v, want a quarter\n%s", columns, c, share, body)
			}
		}
	}
}

// TestCourseGaps: a line is open where a value is missing and where a step is too wide.
func TestCourseGaps(t *testing.T) {
	c := &Course{Title: "c", Along: "t", Gap: 1.5, Lines: []Line{{Name: "a", At: []float64{0, 1, 2, 3, 6, 7, 9}, Value: []float64{1, 2, 0, 3, 4, 5, 6},
		Missing: []bool{false, false, true, false, false, false, false}}}}
	lines, dots := -1, -1
	for _, x := range c.Scene().Shapes {
		switch x.Class {
		case "line":
			lines = len(x.Paths)
		case "line-dots":
			dots = len(x.Paths)
		}
	}
	if lines != 2 || dots != 2 { // 0-1 and 6-7; 3 and 9 stand alone
		t.Errorf("%d stretches and %d single values, want 2 and 2", lines, dots)
	}
}

// TestCourseAxes: where units differ each line is drawn to the axis of its unit, the second
// one at the right, and the limits say which axis is theirs.
func TestCourseAxes(t *testing.T) {
	c := &Course{Title: "c", Along: "t", Limits: []float64{2, 8}, Lines: []Line{
		{Name: "mean", Unit: "°C", At: []float64{0, 1, 2}, Value: []float64{4, 6, 5}, Missing: make([]bool, 3)},
		{Name: "over", At: []float64{0, 1, 2}, Value: []float64{0, 0.187, 0.1}, Missing: make([]bool, 3)}}}
	s := c.Scene()
	axes := map[Anchor][]Shape{}
	var lines []Shape
	limits := 0
	for _, x := range s.Shapes {
		switch {
		case x.Class == "number" && x.Anchor != Middle:
			axes[x.Anchor] = append(axes[x.Anchor], x)
		case x.Class == "line":
			lines = append(lines, x)
		case x.Class == "limit-text" && strings.HasSuffix(x.Text, "(left axis)"):
			limits++
		}
	}
	if len(lines) != 2 || len(axes[End]) < 3 || len(axes[Start]) < 3 || limits != 2 {
		t.Fatalf("%d lines, %d and %d numbers at the axes, %d limits", len(lines), len(axes[End]), len(axes[Start]), limits)
	}
	for k, anchor := range []Anchor{End, Start} {
		first, last := axes[anchor][0], axes[anchor][len(axes[anchor])-1]
		v0, _ := strconv.ParseFloat(first.Text, 64)
		v1, _ := strconv.ParseFloat(last.Text, 64)
		for i, p := range lines[k].Paths[0] {
			read := v0 + (p.Y-first.At.Y+3.5)/(last.At.Y-first.At.Y)*(v1-v0)
			if want := c.Lines[k].Value[i]; math.Abs(read-want) > 1e-6 {
				t.Errorf("%s reads as %v at its axis, want %v", c.Lines[k].Name, read, want)
			}
		}
	}
}

// TestShadeClasses: the shades of the terminal are bounded by round numbers that hold all
// values within the limits, and are as many as there are characters for, or half as many.
func TestShadeClasses(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.Float64Range(-100, 100).Draw(t, "lo")
		hi := lo + rapid.Float64Range(0.01, 1000).Draw(t, "length")
		most := rapid.IntRange(4, 9).Draw(t, "most")
		x := &Section{Panels: []Panel{{Cells: []Cell{{Value: lo}, {Value: hi}, {Value: hi + 1e6}}}}, Limits: []float64{hi}}
		list := x.classes(most)
		n := len(list) - 1
		if n > most || n < 2 || list[0] > lo+1e-6 || list[n] < hi-1e-6 {
			t.Fatalf("%d classes %v of %v to %v, up to %d wanted", n, list, lo, hi, most)
		}
		if by := list[1] - list[0]; by > (hi-lo)*1.01 {
			t.Fatalf("steps of %v for %v to %v", by, lo, hi)
		}
	})
	for _, limits := range [][]float64{{2, 8}, {8}} {
		x := &Section{Panels: []Panel{{Cells: []Cell{{Value: 20}}}}, Limits: limits}
		if n := len(x.classes(5)); n < 2 || n > 6 {
			t.Errorf("%d bounds where all are over the limit", n)
		}
	}
}
