package draw

import (
	"fmt"
	"math"
	"slices"
)

// Histogram is how values are distributed, by their number or by a weight.
type Histogram struct {
	Title      string
	Value      string
	Unit       string
	Weight     string // what weighs them; "": each counts as one
	WeightUnit string
	Values     []float64
	Weights    []float64 // one each
	Limits     []float64
	Notes      []string
}

// Bin is the weight of the values from From up to, but not including, To; the last bin
// includes it.
type Bin struct{ From, To, Weight float64 }

// Bins are about as wide as the rule of Freedman and Diaconis (1981) says, rounded to a
// round number, from 5 to 60 of them. Limits are where bins end.
func (h *Histogram) Bins() []Bin {
	lo, hi := rangeOf(h.Values)
	sorted := slices.Clone(h.Values)
	slices.Sort(sorted)
	n := len(sorted)
	rough := 2 * (sorted[n*3/4] - sorted[n/4]) / math.Cbrt(float64(n))
	if !(rough > (hi-lo)/60) {
		rough = (hi - lo) / 60
	}
	rough = math.Min(rough, (hi-lo)/5)
	if lo == hi {
		rough = math.Max(math.Abs(lo)/100, 0.1)
	}
	by := step(rough, 1)
	from := math.Floor(lo / by)
	if roundTo(from, by) > lo {
		from--
	}
	ends := []float64{roundTo(from, by)}
	for k := 1.0; k == 1 || ends[len(ends)-1] < hi; k++ { // the greatest value may end the last bin
		ends = append(ends, roundTo(from+k, by))
	}
	for _, l := range h.Limits {
		if l > ends[0] && l < ends[len(ends)-1] && !slices.Contains(ends, l) {
			ends = append(ends, l)
		}
	}
	slices.Sort(ends)
	bins := make([]Bin, len(ends)-1)
	for k := range bins {
		bins[k] = Bin{From: ends[k], To: ends[k+1]}
	}
	for i, v := range h.Values {
		k, _ := slices.BinarySearchFunc(bins, v, func(b Bin, v float64) int {
			switch {
			case b.To <= v:
				return -1
			case b.From > v:
				return 1
			}
			return 0
		})
		bins[min(k, len(bins)-1)].Weight += h.Weights[i]
	}
	return bins
}

// roundTo is k steps, as near to its decimal as can be.
func roundTo(k, by float64) float64 {
	if by < 1 {
		return k / math.Round(1/by)
	}
	return k * by
}

// Scene lays the histogram out. The area of a bar is its share, so that bins cut by a
// limit look right.
func (h *Histogram) Scene() *Scene {
	s := newScene(h.Title, h.Words())
	y := s.heading(h.Title)
	if len(h.Limits) > 1 {
		y += 10
	}
	bins := h.Bins()
	total, wide := 0.0, 0.0
	for _, b := range bins {
		total += b.Weight
		wide = math.Max(wide, b.To-b.From)
	}
	most := 0.0
	height := func(b Bin) float64 { return b.Weight / total * 100 * (wide / (b.To - b.From)) }
	for _, b := range bins {
		most = math.Max(most, height(b))
	}
	p := plot{left: margin + 58, right: s.Width - margin - 12, top: y + 14, bottom: y + 290,
		x0: math.Min(bins[0].From, minOf(h.Limits)), x1: math.Max(bins[len(bins)-1].To, maxOf(h.Limits)), y0: 0, y1: most * 1.05}
	p.x0, p.x1 = widened(p.x0, p.x1, 0.02) // so that a limit at an end is not the axis
	title := "share of the values"
	if h.Weight != "" {
		title = "share of " + h.Weight
	}
	s.beside(p, numberTicks(p.y0, p.y1, 7), title+", in "+Number(wide)+" "+orOf(h.Unit)+" [%]", false)
	marks := map[Hatch][]Polygon{}
	for _, b := range bins {
		lo, hi := Point{p.x(b.From), p.y(height(b))}, Point{p.x(b.To), p.bottom}
		ring := []Point{lo, {hi.X, lo.Y}, hi, {lo.X, hi.Y}}
		s.add(Shape{Class: "bar", Closed: true, Fill: RGB(150, 190, 215), Stroke: paper, Line: 0.8, Paths: [][]Point{ring},
			Data: []Attribute{{"from", exact(b.From)}, {"to", exact(b.To)}, {"weight", exact(b.Weight)}},
			Tip:  fmt.Sprintf("%s to %s: %s %%", Number(b.From), WithUnit(Number(b.To), h.Unit), Number(b.Weight/total*100))})
		switch {
		case len(h.Limits) > 0 && b.From >= h.Limits[len(h.Limits)-1]:
			marks[Rising] = append(marks[Rising], Polygon{ring})
		case len(h.Limits) == 2 && b.To <= h.Limits[0]:
			marks[Falling] = append(marks[Falling], Polygon{ring})
		}
	}
	s.hatchings(marks)
	s.below(p, numberTicks(p.x0, p.x1, 12), named(h.Value, h.Unit))
	s.limitUprights(p, h.Limits, h.Unit)
	y = s.words("words", margin, p.bottom+64, s.Width-2*margin, textSize, h.Words())
	notes := slices.Clone(h.Notes)
	if len(h.Limits) > 0 {
		notes = append(notes, "Bars beyond a limit are hatched; what equals the upper limit is not over it.")
	}
	y = s.words("note", margin, y+2, s.Width-2*margin, smallSize, notes...)
	return s.finish(y + 2)
}

func orOf(unit string) string {
	if unit == "" {
		return "of the axis"
	}
	return unit
}

func minOf(list []float64) float64 { lo, _ := rangeOf(list); return lo }
func maxOf(list []float64) float64 { _, hi := rangeOf(list); return hi }

// Words are the mean, the range and the shares beyond the limits.
func (h *Histogram) Words() string {
	var total, sum, above, below float64
	for i, v := range h.Values {
		w := h.Weights[i]
		total += w
		sum += float64(w * v)
		if over(v, h.Limits) {
			above += w
		}
		if under(v, h.Limits) {
			below += w
		}
	}
	lo, hi := rangeOf(h.Values)
	text := fmt.Sprintf("%d values from %s to %s, mean %s", len(h.Values), Number(lo), WithUnit(Number(hi), h.Unit), WithUnit(Number(sum/total), h.Unit))
	if h.Weight != "" {
		text += fmt.Sprintf(", weighted by %s (%s in all)", h.Weight, WithUnit(Number(total), h.WeightUnit))
	}
	if len(h.Limits) > 0 {
		text += fmt.Sprintf("; %s %% over %s", Number(math.Round(above/total*1e4)/100), WithUnit(Number(h.Limits[len(h.Limits)-1]), h.Unit))
	}
	if len(h.Limits) == 2 {
		text += fmt.Sprintf(", %s %% under %s", Number(math.Round(below/total*1e4)/100), WithUnit(Number(h.Limits[0]), h.Unit))
	}
	return text + "."
}
