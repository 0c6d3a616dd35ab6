package spatial

import (
	"cmp"
	"math"
	"slices"
)

// Link joins two different places. Weight is finite and more than 0.
type Link struct {
	A, B   int32
	Weight float64
}

// Graph is links between the places 0 … n-1, each of them once.
type Graph struct {
	start  []int32 // to[start[i]:start[i+1]] are the neighbours of place i, ascending
	to     []int32
	weight []float64 // of each, in parts of unit
	unit   float64   // the largest weight
}

// NewGraph makes a graph of n places. The order of the links does not matter.
func NewGraph(n int, links []Link) *Graph {
	links = slices.Clone(links)
	for i, l := range links {
		if l.A > l.B {
			links[i].A, links[i].B = l.B, l.A
		}
	}
	slices.SortFunc(links, func(x, y Link) int { return cmp.Or(cmp.Compare(x.A, y.A), cmp.Compare(x.B, y.B)) })
	g := &Graph{start: make([]int32, n+1), to: make([]int32, 2*len(links)), weight: make([]float64, 2*len(links))}
	for _, l := range links {
		g.start[l.A+1]++
		g.start[l.B+1]++
		g.unit = max(g.unit, l.Weight)
	}
	for i := range n {
		g.start[i+1] += g.start[i]
	}
	next := slices.Clone(g.start[:n])
	put := func(from, to int32, w float64) {
		g.to[next[from]], g.weight[next[from]] = to, w/g.unit
		next[from]++
	}
	// First the links to lower places, then those to higher ones: both ascend.
	for _, l := range links {
		put(l.B, l.A, l.Weight)
	}
	for _, l := range links {
		put(l.A, l.B, l.Weight)
	}
	return g
}

// Len is the number of places.
func (g *Graph) Len() int { return len(g.start) - 1 }

// Neighbours is the number of places that a place is linked to.
func (g *Graph) Neighbours(i int) int { return int(g.start[i+1] - g.start[i]) }

// lag is the weighted sum of x over the neighbours of place i.
func (g *Graph) lag(i int, x []float64) float64 {
	sum := 0.0
	for k := g.start[i]; k < g.start[i+1]; k++ {
		sum += float64(g.weight[k] * x[g.to[k]])
	}
	return sum
}

// weights of place i: their sum, the sum of their squares, the largest.
func (g *Graph) weights(i int) (sum, squares, most float64) {
	for _, w := range g.weight[g.start[i]:g.start[i+1]] {
		sum += w
		squares += float64(w * w)
		most = max(most, w)
	}
	return sum, squares, most
}

// deviations are the values less their mean, in parts of the largest of these, and that
// largest; 0 where all are equal.
func deviations(values []float64) (d []float64, scale float64) {
	if len(values) == 0 || slices.Min(values) == slices.Max(values) {
		return nil, 0
	}
	// From the middle of the range, so that large values lose nothing.
	middle := slices.Min(values)/2 + slices.Max(values)/2
	d = make([]float64, len(values))
	mean := 0.0
	for i, v := range values {
		d[i] = v - middle
		mean += d[i]
	}
	mean /= float64(len(d))
	for i := range d {
		d[i] -= mean
		scale = max(scale, math.Abs(d[i]))
	}
	for i := range d {
		d[i] /= scale
	}
	return d, scale
}
