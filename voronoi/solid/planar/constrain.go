package planar

import "nearcell/voronoi/predicate"

// Constrain turns diagonals until every segment, given by the numbers of its ends, is a
// side. The error is ErrCrossing.
func (m *Mesh) Constrain(segments [][2]int32) error {
	at := make([]int32, len(m.P)) // a triangle at each point
	for i := range at {
		at[i] = -1
	}
	for t, c := range m.T {
		for _, p := range c {
			at[p] = int32(t)
		}
	}
	fixed := make(map[[2]int32]bool, len(segments))
	for _, s := range segments {
		if err := m.force(s[0], s[1], at, fixed); err != nil {
			return err
		}
		fixed[[2]int32{min(s[0], s[1]), max(s[0], s[1])}] = true
	}
	return nil
}

// force makes the segment from p to q a side: the sides that it crosses wait in a queue;
// each is turned when its two triangles are convex together, and waits again if it is
// crossed still.
func (m *Mesh) force(p, q int32, at []int32, fixed map[[2]int32]bool) error {
	queue, err := m.crossed(p, q, at, fixed)
	if err != nil {
		return err
	}
	for budget := 64 + 8*len(queue)*(len(queue)+1); len(queue) > 0; budget-- {
		if budget == 0 {
			return ErrCrossing
		}
		a, b := queue[0][0], queue[0][1]
		queue = queue[1:]
		t, k := m.find(a, b, at)
		a, b = m.T[t][k], m.T[t][(k+1)%3]
		u := m.Next[t][k]
		j := m.across(u, t)
		c, d := m.T[t][(k+2)%3], m.T[u][(j+2)%3]
		if predicate.Orient2D(m.P[c], m.P[d], m.P[b]) <= 0 || predicate.Orient2D(m.P[c], m.P[d], m.P[a]) >= 0 {
			queue = append(queue, [2]int32{a, b})
			continue
		}
		m.flip(t, k)
		for _, x := range [2]int32{t, u} {
			for _, i := range m.T[x] {
				at[i] = x
			}
		}
		if c != p && c != q && d != p && d != q &&
			predicate.Orient2D(m.P[p], m.P[q], m.P[c])*predicate.Orient2D(m.P[p], m.P[q], m.P[d]) < 0 {
			queue = append(queue, [2]int32{c, d})
		}
	}
	return nil
}

// crossed lists the sides that the segment from p to q crosses.
func (m *Mesh) crossed(p, q int32, at []int32, fixed map[[2]int32]bool) ([][2]int32, error) {
	t, k, done := m.leave(p, q, at)
	if done {
		return nil, nil
	}
	var list [][2]int32
	for t >= 0 {
		a, b := m.T[t][k], m.T[t][(k+1)%3]
		u := m.Next[t][k]
		if u < 0 || fixed[[2]int32{min(a, b), max(a, b)}] {
			return nil, ErrCrossing
		}
		list = append(list, [2]int32{a, b})
		d := m.T[u][(m.across(u, t)+2)%3]
		if d == q {
			return list, nil
		}
		if predicate.Orient2D(m.P[p], m.P[q], m.P[d]) == 0 {
			return nil, ErrCrossing
		}
		t, k = u, m.crossedAt(u, d, p, q)
	}
	return nil, ErrCrossing
}

// crossedAt is the side of t at its corner d that the line pq crosses.
func (m *Mesh) crossedAt(t, d, p, q int32) int {
	for k := range 3 {
		a, b := m.T[t][k], m.T[t][(k+1)%3]
		if a != d && b != d {
			continue
		}
		if predicate.Orient2D(m.P[p], m.P[q], m.P[a])*predicate.Orient2D(m.P[p], m.P[q], m.P[b]) < 0 {
			return k
		}
	}
	panic("planar: a line that enters a triangle does not leave it")
}

// find is a triangle with the side from a to b or back, and the side's number.
func (m *Mesh) find(a, b int32, at []int32) (t int32, k int) {
	first := at[a]
	for _, forward := range [2]bool{true, false} {
		for t := first; t >= 0; {
			i := 0
			for m.T[t][i] != a {
				i++
			}
			if m.T[t][(i+1)%3] == b {
				return t, i
			}
			if m.T[t][(i+2)%3] == b {
				return t, (i + 2) % 3
			}
			if forward {
				t = m.Next[t][(i+2)%3]
			} else {
				t = m.Next[t][i]
			}
			if t == first {
				break
			}
		}
	}
	panic("planar: no such side")
}

// leave finds the triangle at p that the segment to q leaves through side k, opposite p.
// done tells that the segment is a side already; t is -1 where it passes through a point.
func (m *Mesh) leave(p, q int32, at []int32) (t int32, k int, done bool) {
	first := at[p]
	if first < 0 {
		return -1, 0, false
	}
	for _, forward := range [2]bool{true, false} {
		for t := first; t >= 0; {
			i := 0
			for m.T[t][i] != p {
				i++
			}
			a, b := m.T[t][(i+1)%3], m.T[t][(i+2)%3]
			if a == q || b == q {
				return t, 0, true
			}
			sa, sb := predicate.Orient2D(m.P[p], m.P[a], m.P[q]), predicate.Orient2D(m.P[p], m.P[b], m.P[q])
			if sa > 0 && sb < 0 {
				return t, (i + 1) % 3, false
			}
			if forward {
				t = m.Next[t][(i+2)%3]
			} else {
				t = m.Next[t][i]
			}
			if t == first {
				break
			}
		}
	}
	return -1, 0, false
}
