package delaunay

import (
	"fmt"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/predicate"
)

// Validate checks everything that makes t a Delaunay tetrahedralisation and returns
// the first fault: neighbours agree, real tetrahedra are positive, the sphere of no
// tetrahedron contains the vertex across a face (with the perturbation, so that
// cospherical sites have their one triangulation), the hull is convex, all vertices
// are there, and Euler's relation holds. The predicates are asked about the sites as
// they came, not about the coordinates the build worked with. It takes about a
// second a million sites.
func (t *T) Validate() error {
	if t.dimension < 3 {
		if len(t.tets) > 0 {
			return fmt.Errorf("delaunay: %d tetrahedra in dimension %d", len(t.tets), t.dimension)
		}
		return nil
	}
	for i := range t.tets {
		if err := t.validateTet(i); err != nil {
			return err
		}
	}
	for i := range t.tets {
		for k := range 4 {
			if err := t.validateFace(i, k); err != nil {
				return err
			}
		}
	}
	return t.validateVertices()
}

func (t *T) vectors(i int) (c [4]r3.Vec) {
	for k, v := range t.tets[i].v {
		if v != 0 {
			c[k] = t.Site(int(t.order[v-1]))
		}
	}
	return c
}

func (t *T) validateTet(i int) error {
	q := &t.tets[i]
	ghosts := 0
	for k, v := range q.v {
		if v < 0 || int(v) >= len(t.pts) {
			return fmt.Errorf("delaunay: tetrahedron %d has no vertex %d", i, v)
		}
		if v == 0 {
			ghosts++
		} else if t.pts[v].tet == noTet {
			return fmt.Errorf("delaunay: tetrahedron %d names point %d, which is no vertex", i, v)
		}
		r := q.n[k]
		if int(r>>2) >= len(t.tets) || t.tets[r>>2].n[r&3] != uint32(i)<<2|uint32(k) {
			return fmt.Errorf("delaunay: tetrahedra %d and %d disagree about their common face", i, r>>2)
		}
		// The face as its two sides see it: the same vertices, turned once.
		mine, other := faceOf[k], faceBack[r&3]
		a := [3]int32{q.v[mine[0]], q.v[mine[1]], q.v[mine[2]]}
		o := &t.tets[r>>2].v
		b := [3]int32{o[other[0]], o[other[1]], o[other[2]]}
		if a != b && a != [3]int32{b[1], b[2], b[0]} && a != [3]int32{b[2], b[0], b[1]} {
			return fmt.Errorf("delaunay: tetrahedra %d and %d have different vertices at their common face", i, r>>2)
		}
	}
	if want := i >= t.real; ghosts > 1 || (ghosts == 1) != want || (q.lo == loGhost) != want {
		return fmt.Errorf("delaunay: tetrahedron %d: ghost and real mixed up", i)
	}
	if c := t.vectors(i); ghosts == 0 && predicate.Orient3D(c[0], c[1], c[2], c[3]) <= 0 {
		return fmt.Errorf("delaunay: tetrahedron %d is not positive", i)
	}
	return nil
}

// validateFace looks across face k of tetrahedron i.
func (t *T) validateFace(i, k int) error {
	r := t.tets[i].n[k]
	if int(r>>2) < i && int(r>>2) < t.real && i < t.real {
		return nil // seen from the other side
	}
	p := t.tets[r>>2].v[r&3]
	if p == 0 {
		return nil
	}
	e := t.Site(int(t.order[p-1]))
	c := t.vectors(i)
	if i < t.real {
		if predicate.InSpherePerturbed(c[0], c[1], c[2], c[3], e) > 0 {
			return fmt.Errorf("delaunay: the sphere of tetrahedron %d contains site %d", i, t.order[p-1])
		}
		return t.validateSphere(i, e)
	}
	g := ghostIn(&t.tets[i].v)
	if k == g {
		return nil // the real tetrahedron behind is positive
	}
	c[g] = e
	if predicate.Orient3D(c[0], c[1], c[2], c[3]) > 0 {
		return fmt.Errorf("delaunay: the hull is not convex at ghost %d", i)
	}
	return nil
}

// validateSphere checks that the stored sphere would not answer wrongly for e, which
// is outside.
func (t *T) validateSphere(i int, e r3.Vec) error {
	q := &t.tets[i]
	f := t.frame
	x := float64((e.X-f.x0)*f.scale)*f.scale2 - q.c[0]
	y := float64((e.Y-f.y0)*f.scale)*f.scale2 - q.c[1]
	z := float64((e.Z-f.z0)*f.scale)*f.scale2 - q.c[2]
	if x*x+y*y+z*z < float64(q.lo) {
		return fmt.Errorf("delaunay: the stored sphere of tetrahedron %d is wrong", i)
	}
	return nil
}

func (t *T) validateVertices() error {
	seen := make([]bool, len(t.pts))
	vertices := 0
	hull := make([]bool, len(t.pts))
	onHull := 0
	for i := range t.tets {
		for _, v := range t.tets[i].v {
			if !seen[v] {
				seen[v] = true
				vertices++
			}
			if i >= t.real && v != 0 && !hull[v] {
				hull[v] = true
				onHull++
			}
		}
	}
	vertices-- // the ghost
	if vertices != t.NumVertices() {
		return fmt.Errorf("delaunay: %d vertices for %d places", vertices, t.NumVertices())
	}
	for p := 1; p < len(t.pts); p++ {
		i := t.pts[p].tet
		if i == noTet {
			continue
		}
		if int(i) >= len(t.tets) || !has(t.tets[i].v[:], nil, int32(p)) {
			return fmt.Errorf("delaunay: point %d is not at its tetrahedron %d", p, i)
		}
	}
	for s, p := range t.place {
		if p != 0 && t.Site(s) != t.Site(int(t.order[p-1])) {
			return fmt.Errorf("delaunay: site %d is not where its vertex is", s)
		}
	}
	if ghosts := t.NumGhosts(); ghosts != 2*onHull-4 {
		return fmt.Errorf("delaunay: %d hull facets for %d hull vertices", ghosts, onHull)
	}
	return t.validateEdges(vertices)
}

// validateEdges checks V - E + F - T = 1, with the edges counted.
func (t *T) validateEdges(vertices int) error {
	edges := 0
	var link, next []int32
	for p := 1; p < len(t.pts); p++ {
		if t.pts[p].tet == noTet {
			continue
		}
		link = link[:0]
		next = t.star(int32(p), next[:0])
		for _, i := range next {
			for _, q := range t.tets[i].v {
				if int(q) > p {
					link = append(link, q)
				}
			}
		}
		sortInts(link)
		for i := range link {
			if i == 0 || link[i] != link[i-1] {
				edges++
			}
		}
	}
	faces := (4*t.real + t.NumGhosts()) / 2
	if vertices-edges+faces-t.real != 1 {
		return fmt.Errorf("delaunay: %d vertices, %d edges, %d faces, %d tetrahedra: not Euler's relation", vertices, edges, faces, t.real)
	}
	return nil
}
