package spatial

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
)

// Local is what one place and its neighbours say. What is undefined is NaN.
type Local struct {
	G float64 // G*, a z-score
	I float64 // local Moran, in the unit of the weights
	P float64 // of the neighbours' weighted sum
}

// Clusters computes the local statistics of values, one for each place of g. It fails only
// with ctx's error.
func Clusters(ctx context.Context, g *Graph, values []float64, o Options) ([]Local, error) {
	n := g.Len()
	out := make([]Local, n)
	for i := range out {
		out[i] = Local{math.NaN(), math.NaN(), math.NaN()}
	}
	d, _ := deviations(values)
	if d == nil || n < 3 {
		return out, nil
	}
	m2 := 0.0
	for _, x := range d {
		m2 += float64(x * x)
	}
	m2 /= float64(n)
	for i := range out {
		if g.Neighbours(i) == 0 {
			continue
		}
		lag := g.lag(i, d)
		out[i].I = g.unit * (d[i] / m2 * lag)
		out[i].G = g.star(i, d[i], lag, m2)
	}
	if n < 4 || o.Permutations <= 0 {
		return out, nil
	}
	err := each(ctx, n, o.Threads, func() func(i int) {
		w := newDealer(n)
		return func(i int) {
			if g.Neighbours(i) > 0 {
				out[i].P = w.deal(g, i, d, o)
			}
		}
	})
	return out, err
}

// star is G* of a place: the place itself counts with the largest of its weights.
func (g *Graph) star(i int, own, lag, m2 float64) float64 {
	n := float64(g.Len())
	sum, squares, most := g.weights(i)
	sum += most
	squares += float64(most * most)
	// n Σw² - (Σw)² is n² times the variance of the weights over all places, those of
	// weight 0 among them.
	spread := float64(n*squares) - float64(sum*sum)
	if !(spread > 1e-12*n*squares) {
		return math.NaN()
	}
	return (lag + float64(most*own)) / (math.Sqrt(m2) * math.Sqrt(spread/(n-1)))
}

// dealer deals values to the neighbours of one place after another.
type dealer struct {
	deck []int32 // places; always put back in order
	drew []int32 // positions swapped with 0, 1, 2 …
}

func newDealer(n int) *dealer {
	w := &dealer{deck: make([]int32, n)}
	for i := range w.deck {
		w.deck[i] = int32(i)
	}
	return w
}

// deal gives the probability that other places' values at the neighbours would lie as far
// from their expectation as those there do.
func (w *dealer) deal(g *Graph, i int, d []float64, o Options) float64 {
	n, last := len(w.deck), len(w.deck)-1
	weights := g.weight[g.start[i]:g.start[i+1]]
	w.drew = slices.Grow(w.drew[:0], len(weights))[:len(weights)]
	sum, _, _ := g.weights(i)
	expected := -d[i] * sum / float64(n-1) // the others' values add up to -d[i]
	observed := math.Abs(g.lag(i, d)-expected) * (1 - alike)
	// The place itself is out of the game.
	w.deck[i], w.deck[last] = w.deck[last], w.deck[i]
	var source rand.PCG
	source.Seed(o.Seed, uint64(i))
	random := rand.New(&source)
	far := 1
	for range o.Permutations {
		lag := 0.0
		for k, weight := range weights {
			j := k + int(random.Uint32N(uint32(last-k)))
			w.drew[k] = int32(j)
			w.deck[k], w.deck[j] = w.deck[j], w.deck[k]
			lag += float64(weight * d[w.deck[k]])
		}
		if math.Abs(lag-expected) >= observed {
			far++
		}
		for k := len(weights) - 1; k >= 0; k-- {
			j := w.drew[k]
			w.deck[k], w.deck[j] = w.deck[j], w.deck[k]
		}
	}
	w.deck[i], w.deck[last] = w.deck[last], w.deck[i]
	return float64(far) / float64(1+o.Permutations)
}

// Discoveries is how many of the probabilities, NaN left out, stand at a share of false
// discoveries of q (Benjamini and Hochberg 1995).
func Discoveries(p []float64, q float64) int {
	p = slices.DeleteFunc(slices.Clone(p), math.IsNaN)
	slices.Sort(p)
	for k := len(p); k > 0; k-- {
		if p[k-1] <= q*float64(k)/float64(len(p)) {
			return k
		}
	}
	return 0
}
