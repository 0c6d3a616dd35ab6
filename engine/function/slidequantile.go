package function

import (
	"cmp"
	"slices"
)

// slideQuantile is QUANTILE and MEDIAN over frames. The rows of a partition are
// leaves of a tree in the order of their values; a node holds the number of its rows
// that are in the frame, and their weight. Moving a frame by a row costs the depth of the
// tree, and so does finding the quantile. Sums of weights are made anew from the
// leaves up, never taken off: nothing cancels.
func slideQuantile(s Setup, r Rows) (Sliders, error) {
	p := 0.5
	if len(s.Args) > 1 {
		p, _ = constReal(s.Consts[1])
	}
	on, weights, err := r.counting(r.Args[:1])
	if err != nil {
		return Sliders{}, err
	}
	keys := orderKeys(&r.Args[0], r.N)
	return Sliders{Picks: true, New: func(*Slid) Slider {
		return &quantileSlider{p: p, on: on, keys: keys, weights: weights}
	}}, nil
}

type quantileSlider struct {
	p       float64
	on      []uint64
	keys    []int64
	weights []float64

	sorted []int32 // rows of the partition that count, by value
	leaf   []int32 // of each row of the partition, -1: does not count
	leaves int     // a power of two
	count  []int32 // of each node; node i has the children 2i and 2i+1
	sum    []dd
}

func (q *quantileSlider) Slide(rows, lo, hi []int32, out *Slid, stop func() error) error {
	q.prepare(rows)
	from, to := int32(0), int32(0)
	for k, row := range rows {
		if k%stopEvery == 0 {
			if err := stop(); err != nil {
				return err
			}
		}
		if k > 0 && lo[k] == lo[k-1] && hi[k] == hi[k-1] {
			out.copy(row, rows[k-1])
			continue
		}
		for ; from < min(lo[k], to); from++ {
			q.set(from, 0)
		}
		from = lo[k]
		for to = max(to, from); to < hi[k]; to++ {
			q.set(to, 1)
		}
		out.Pick[row] = q.find()
	}
	return nil
}

// prepare makes a tree of the rows of a partition, none of them in the frame.
func (q *quantileSlider) prepare(rows []int32) {
	q.sorted = q.sorted[:0]
	q.leaf = slices.Grow(q.leaf[:0], len(rows))[:len(rows)]
	order := make([]int32, 0, len(rows))
	for k, row := range rows {
		q.leaf[k] = -1
		if counts(q.on, row) {
			order = append(order, int32(k))
		}
	}
	slices.SortFunc(order, func(a, b int32) int {
		x, y := rows[a], rows[b]
		c := cmp.Compare(q.keys[x], q.keys[y])
		if c == 0 && q.weights != nil {
			c = cmp.Compare(q.weights[x], q.weights[y])
		}
		return cmp.Or(c, cmp.Compare(x, y))
	})
	for at, k := range order {
		q.leaf[k] = int32(at)
		q.sorted = append(q.sorted, rows[k])
	}
	q.leaves = 1
	for q.leaves < len(order) {
		q.leaves *= 2
	}
	q.count = slices.Grow(q.count[:0], 2*q.leaves)[:2*q.leaves]
	clear(q.count)
	if q.weights != nil {
		q.sum = slices.Grow(q.sum[:0], 2*q.leaves)[:2*q.leaves]
		clear(q.sum)
	}
}

// set takes row k of the partition into the frame, or out of it.
func (q *quantileSlider) set(k, n int32) {
	at := q.leaf[k]
	if at < 0 {
		return
	}
	node := q.leaves + int(at)
	if q.weights == nil {
		change := n - q.count[node]
		for ; node > 0; node /= 2 {
			q.count[node] += change
		}
		return
	}
	q.count[node], q.sum[node] = n, dd{}
	if n > 0 {
		q.sum[node].hi = q.weights[q.sorted[at]]
	}
	for node /= 2; node > 0; node /= 2 {
		q.count[node] = q.count[2*node] + q.count[2*node+1]
		q.sum[node] = q.sum[2*node].add(q.sum[2*node+1])
	}
}

// find is the row with the quantile of the frame, -1 where it has no rows.
func (q *quantileSlider) find() int32 {
	n := q.count[1]
	switch {
	case len(q.sorted) == 0 || n == 0:
		return -1
	case q.weights == nil:
		return q.ranked(int32(rankOf(q.p, int(n))))
	case q.p >= 1:
		return q.ranked(n)
	}
	target := q.sum[1].times(q.p).add(q.sum[1].times(-weightSlack))
	var before dd
	node := 1
	for node < q.leaves {
		node *= 2
		upTo := before.add(q.sum[node])
		if q.count[node] > 0 && upTo.add(target.negative()).hi >= 0 || q.count[node+1] == 0 {
			continue
		}
		before = upTo
		node++
	}
	return q.sorted[node-q.leaves]
}

// ranked is the r-th row of the frame by value, from 1.
func (q *quantileSlider) ranked(r int32) int32 {
	node := 1
	for node < q.leaves {
		node *= 2
		if q.count[node] < r {
			r -= q.count[node]
			node++
		}
	}
	return q.sorted[node-q.leaves]
}
