package draw

import (
	"fmt"
	"slices"
)

// Profile is values by height, or along another axis, with the mean of each layer.
type Profile struct {
	Title  string
	Value  string
	Unit   string
	Along  string // what runs up: "z"
	Length string
	Limits []float64
	Sites  []Height
	Notes  []string
}

// Height is a value at a height, with the space that it stands for.
type Height struct {
	ID                string
	At, Value, Weight float64
}

// Layer is the sites between two heights.
type Layer struct {
	From, To     float64
	Sites        int
	Weight, Mean float64
}

// mostLayers is how many layers of their own heights make; more are drawn as even
// slices.
const mostLayers = 10

// Layers are heights that lie close together: a new one begins where the next height is
// more than a twelfth of the whole extent away. Where that makes a single layer of
// different heights, or more than ten, they are ten slices of one thickness, those without a site left out.
func (p *Profile) Layers() []Layer {
	sites := slices.Clone(p.Sites)
	slices.SortStableFunc(sites, func(a, b Height) int {
		switch {
		case a.At < b.At:
			return -1
		case a.At > b.At:
			return 1
		}
		return 0
	})
	lo, hi := sites[0].At, sites[len(sites)-1].At
	var starts []int
	for i := range sites {
		if i == 0 || sites[i].At-sites[i-1].At > (hi-lo)/12 {
			starts = append(starts, i)
		}
	}
	if lo < hi && (len(starts) == 1 || len(starts) > mostLayers) {
		starts = nil
		last := -1
		for i := range sites {
			if k := min(int((sites[i].At-lo)/(hi-lo)*mostLayers), mostLayers-1); k != last {
				starts, last = append(starts, i), k
			}
		}
	}
	var list []Layer
	for k, from := range starts {
		to := len(sites)
		if k+1 < len(starts) {
			to = starts[k+1]
		}
		l := Layer{From: sites[from].At, To: sites[to-1].At, Sites: to - from}
		sum := 0.0
		for _, h := range sites[from:to] {
			l.Weight += h.Weight
			sum += float64(h.Weight * h.Value)
		}
		l.Mean = sum / l.Weight
		list = append(list, l)
	}
	return list
}

// Scene lays the profile out.
func (p *Profile) Scene() *Scene {
	s := newScene(p.Title, "")
	y := s.heading(p.Title)
	if len(p.Limits) > 1 {
		y += 10
	}
	var values, heights []float64
	for _, h := range p.Sites {
		values, heights = append(values, h.Value), append(heights, h.At)
	}
	f := plot{left: margin + 58, right: s.Width - margin - 12, top: y + 14, bottom: y + 330}
	f.x0, f.x1 = widened(first2(rangeOf(values, p.Limits)))
	f.y0, f.y1 = widened(first2(rangeOf(heights)))
	s.beside(f, numberTicks(f.y0, f.y1, 8), named(p.Along, p.Length), false)
	s.below(f, numberTicks(f.x0, f.x1, 10), named(p.Value, p.Unit))
	s.limitUprights(f, p.Limits, p.Unit)
	for _, h := range p.Sites {
		s.add(Shape{Class: "site", Closed: true, Fill: lineColours[4], Stroke: softer, Line: 0.6, Paths: [][]Point{disc(f.place(Point{h.Value, h.At}), 3)},
			Data: []Attribute{{"id", h.ID}, {"value", exact(h.Value)}, {"at", exact(h.At)}}, Tip: h.ID + ": " + WithUnit(Number(h.Value), p.Unit)})
	}
	layers := p.Layers()
	joined := Shape{Class: "profile", Paths: [][]Point{nil}, Stroke: lineColours[1], Line: 1.6}
	var words []string
	for _, l := range layers {
		at := f.place(Point{l.Mean, (l.From + l.To) / 2})
		joined.Paths[0] = append(joined.Paths[0], at)
		layer := "at " + WithUnit(Number(l.From), p.Length)
		if l.From != l.To {
			layer = "from " + Number(l.From) + " to " + WithUnit(Number(l.To), p.Length)
		}
		words = append(words, fmt.Sprintf("%s: mean %s (%s, %s)", layer, WithUnit(Number(l.Mean), p.Unit), counted(l.Sites, "site"), WithUnit(Number(l.Weight), cubic(p.Length))))
	}
	s.add(joined)
	for k, at := range joined.Paths[0] {
		l := layers[k]
		s.add(Shape{Class: "layer", Closed: true, Fill: lineColours[1], Stroke: paper, Line: 1,
			Paths: [][]Point{{{at.X, at.Y - 6}, {at.X + 6, at.Y}, {at.X, at.Y + 6}, {at.X - 6, at.Y}}},
			Data:  []Attribute{{"from", exact(l.From)}, {"to", exact(l.To)}, {"mean", exact(l.Mean)}, {"weight", exact(l.Weight)}}})
		s.add(Shape{Class: "mean", At: Point{at.X, at.Y - 10}, Anchor: Middle, Size: smallSize, Text: Number(l.Mean), Fill: ink, Bold: true, Halo: true})
	}
	y = s.words("note", margin, f.bottom+64, s.Width-2*margin, textSize, "Dots are sites, diamonds the means of layers, weighted by the volumes of the cells:")
	slices.Reverse(words) // as in the picture, the highest first
	y = s.words("words", margin+8, y, s.Width-2*margin-8, textSize, words...)
	for _, w := range words {
		s.Description += w + ". "
	}
	y = s.words("note", margin, y+2, s.Width-2*margin, smallSize, p.Notes...)
	return s.finish(y + 2)
}

func cubic(length string) string {
	if length == "" {
		return ""
	}
	return length + "³"
}

func counted(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}
