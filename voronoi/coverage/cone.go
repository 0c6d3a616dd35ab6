package coverage

// cone decides whether directions are left that no constraint forbids. It is the
// scratch of one goroutine.
type cone struct {
	c    []Vec // unit vectors; a direction u is allowed if c·u <= slack for all
	work []int // constraints that are looked at in pairs
}

// parallel is the sine below which two constraints count as parallel. Directions
// from steeper pairs are right to a hundred-millionth, which the slack exceeds.
const parallel = 1e-8

// isClosed tells that every unit vector u has c·u > slack for some constraint c:
// that the constraints surround the origin on all sides.
//
// If the allowed cone {u : c·u <= 0} is more than the origin, it holds a line where
// the constraints do not span space, or else an extreme ray, and both lie along the
// cross product of two constraints. Pairs are taken from a working set: an allowed
// direction of the set that breaks a constraint outside it brings that one in; one
// that breaks none is an answer. So thousands of sites on one sphere cost little.
func (k *cone) isClosed(slack float64) bool {
	if len(k.c) < 4 {
		return false // fewer never surround a point in space
	}
	k.work = append(k.work[:0], 0)
	for {
		u, ok := k.direction(slack)
		if !ok {
			return true
		}
		worst, most := -1, slack
		for i, c := range k.c {
			if s := dot(c, u); s > most {
				worst, most = i, s
			}
		}
		if worst < 0 {
			return false
		}
		k.work = append(k.work, worst)
	}
}

// direction is a unit vector that the working set allows, if there is one.
func (k *cone) direction(slack float64) (u Vec, ok bool) {
	flat := true // all pairs are parallel
	for i, p := range k.work {
		for _, q := range k.work[:i] {
			n := cross(k.c[p], k.c[q])
			l := length(n)
			if l < parallel {
				continue
			}
			flat = false
			n = scale(1/l, n)
			if k.allows(n, slack) {
				return n, true
			}
			if n = scale(-1, n); k.allows(n, slack) {
				return n, true
			}
		}
	}
	if !flat {
		return Vec{}, false
	}
	return normalTo(k.c[k.work[0]]), true
}

func (k *cone) allows(u Vec, slack float64) bool {
	for _, p := range k.work {
		if dot(k.c[p], u) > slack {
			return false
		}
	}
	return true
}

// normalTo is a unit vector at right angles to v.
func normalTo(v Vec) Vec {
	axis := Vec{X: 1}
	if v.X*v.X > 0.5 {
		axis = Vec{Y: 1}
	}
	n := cross(v, axis)
	return scale(1/length(n), n)
}
