package spatial

import (
	"context"
	"math"
	"math/rand/v2"
	"sync"
	"sync/atomic"
)

// Options of the permutations.
type Options struct {
	Permutations int    // 0: no probability
	Seed         uint64 //
	Threads      int    // goroutines, at least 1
}

// Global is what all places together say. What is undefined is NaN.
type Global struct {
	I, Expected, Variance, Z, P float64
	C                           float64 // Geary's
}

// alike is how much nearer to its expectation, in parts of the distance, an arrangement
// may come by rounding and still count as far as the observed one.
const alike = 1e-10

// Autocorrelation computes the statistics of values, one for each place of g. It fails
// only with ctx's error.
func Autocorrelation(ctx context.Context, g *Graph, values []float64, o Options) (Global, error) {
	nan := math.NaN()
	r := Global{nan, nan, nan, nan, nan, nan}
	n := float64(g.Len())
	if n >= 2 {
		r.Expected = -1 / (n - 1)
	}
	d, _ := deviations(values)
	if d == nil || len(g.to) == 0 {
		return r, nil
	}
	var m2, m4, cross, apart, s0, s1, s2 float64
	for i, x := range d {
		m2 += float64(x * x)
		m4 += float64(float64(x*x) * float64(x*x))
		cross += float64(x * g.lag(i, d))
		sum, squares, _ := g.weights(i)
		s0 += sum
		s1 += 2 * squares
		s2 += float64(4 * float64(sum*sum))
		for k := g.start[i]; k < g.start[i+1]; k++ {
			e := x - d[g.to[k]]
			apart += float64(g.weight[k] * float64(e*e))
		}
	}
	r.I = n / s0 * cross / m2
	r.C = (n - 1) / (2 * s0) * apart / m2
	if n < 4 {
		return r, nil
	}
	kurtosis := n * m4 / float64(m2*m2)
	first := n * (float64((n*n-3*n+3)*s1) - float64(n*s2) + 3*float64(s0*s0))
	second := kurtosis * (float64((n*n-n)*s1) - float64(2*n*s2) + 6*float64(s0*s0))
	square := (first - second) / ((n - 1) * (n - 2) * (n - 3) * float64(s0*s0))
	variance := square - float64(r.Expected*r.Expected)
	if variance < 1e-12*float64(r.Expected*r.Expected) {
		variance = 0 // every arrangement gives the same
	}
	r.Variance = variance
	if variance > 0 {
		r.Z = (r.I - r.Expected) / math.Sqrt(variance)
	}
	var err error
	if o.Permutations > 0 {
		r.P, err = g.permute(ctx, d, r, n/s0/m2, o)
	}
	return r, err
}

// permute deals the values to the places again and again.
func (g *Graph) permute(ctx context.Context, d []float64, r Global, scale float64, o Options) (float64, error) {
	observed := math.Abs(r.I-r.Expected) * (1 - alike)
	var far atomic.Int64
	err := each(ctx, o.Permutations, o.Threads, func() func(i int) {
		x := make([]float64, len(d))
		return func(i int) {
			copy(x, d)
			random := rand.New(rand.NewPCG(o.Seed, uint64(i)))
			random.Shuffle(len(x), func(a, b int) { x[a], x[b] = x[b], x[a] })
			cross := 0.0
			for i := range x {
				cross += float64(x[i] * g.lag(i, x))
			}
			if math.Abs(scale*cross-r.Expected) >= observed {
				far.Add(1)
			}
		}
	})
	return float64(1+far.Load()) / float64(1+o.Permutations), err
}

// each calls do for 0 … n-1 from several goroutines, each with a do of its own.
func each(ctx context.Context, n, threads int, worker func() func(i int)) error {
	var next atomic.Int64
	var all sync.WaitGroup
	for range min(max(1, threads), n) {
		all.Go(func() {
			do := worker()
			for ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= n {
					return
				}
				do(i)
			}
		})
	}
	all.Wait()
	return ctx.Err()
}
