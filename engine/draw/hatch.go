package draw

import (
	"math"
	"slices"
)

// Hatch says how an area is marked beside its colour.
type Hatch uint8

const (
	NoHatch Hatch = iota
	Rising        // over a limit
	Falling       // under one
	Level         // without a value
	Upright       // out of reach
)

// hatchings are directions of the lines, and how far they are apart.
var hatchings = [...]struct{ dx, dy, apart float64 }{
	Rising:  {math.Sqrt2 / 2, -math.Sqrt2 / 2, 8},
	Falling: {math.Sqrt2 / 2, math.Sqrt2 / 2, 8},
	Level:   {1, 0, 6},
	Upright: {0, 1, 6},
}

// hatched gives the lines of a hatching within polygons. Lines that go on from one
// polygon to the next are one, so that a large area of many cells stays small.
func hatched(h Hatch, polygons []Polygon) [][]Point {
	if h == NoHatch {
		return nil
	}
	d := hatchings[h]
	var lines [][]Point
	spans := map[int][][2]float64{}
	for _, rings := range polygons {
		for k, list := range crossings(rings, d.dx, d.dy, d.apart) {
			slices.Sort(list)
			for i := 0; i+1 < len(list); i += 2 {
				spans[k] = append(spans[k], [2]float64{list[i], list[i+1]})
			}
		}
	}
	keys := make([]int, 0, len(spans))
	for k := range spans {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	for _, k := range keys {
		off := (float64(k) + 0.5) * d.apart
		for _, s := range joined(spans[k]) {
			lines = append(lines, []Point{
				{float64(s[0]*d.dx) - float64(off*d.dy), float64(s[0]*d.dy) + float64(off*d.dx)},
				{float64(s[1]*d.dx) - float64(off*d.dy), float64(s[1]*d.dy) + float64(off*d.dx)},
			})
		}
	}
	return lines
}

// crossings are where the lines of a hatching cross rings, by number of the line.
func crossings(rings Polygon, dx, dy, apart float64) map[int][]float64 {
	found := map[int][]float64{}
	for _, ring := range rings {
		crossRing(found, ring, dx, dy, apart)
	}
	return found
}

func crossRing(found map[int][]float64, ring []Point, dx, dy, apart float64) {
	for i, p := range ring {
		q := ring[(i+1)%len(ring)]
		// Along the lines, and across them in units of their distance.
		pa, pc := float64(p.X*dx)+float64(p.Y*dy), (float64(p.Y*dx)-float64(p.X*dy))/apart-0.5
		qa, qc := float64(q.X*dx)+float64(q.Y*dy), (float64(q.Y*dx)-float64(q.X*dy))/apart-0.5
		if qc < pc {
			pa, pc, qa, qc = qa, qc, pa, pc
		}
		for k := math.Ceil(pc); k < qc; k++ { // an end counts on one side only
			found[int(k)] = append(found[int(k)], pa+float64((qa-pa)*((k-pc)/(qc-pc))))
		}
	}
}

// joined unites spans that touch.
func joined(spans [][2]float64) [][2]float64 {
	slices.SortFunc(spans, func(a, b [2]float64) int {
		switch {
		case a[0] < b[0]:
			return -1
		case a[0] > b[0]:
			return 1
		}
		return 0
	})
	var out [][2]float64
	for _, s := range spans {
		if n := len(out); n > 0 && s[0] <= out[n-1][1]+0.05 {
			out[n-1][1] = math.Max(out[n-1][1], s[1])
			continue
		}
		out = append(out, s)
	}
	return out
}
