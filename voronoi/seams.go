package voronoi

import "slices"

// A side of a convex part of the solid can lie in a wall, between two parts, or partly in
// both. Where another piece of the same cell lies against it, it is a seam; the rest is
// wall.

// seams decides it for the sides of the pieces of one cell. Planes that are within tol of
// each other are one.
func seams(pieces []Piece, tol float64) {
	for i := range pieces {
		for k := range pieces[i].Faces {
			f := &pieces[i].Faces[k]
			if f.Kind != SeamFace {
				continue
			}
			outline := pieces[i].corners(f)
			walls, met := [][]Vec{outline}, false
			n := unit(areaVector(outline))
			for j := range pieces {
				if j == i {
					continue
				}
				for m := range pieces[j].Faces {
					g := &pieces[j].Faces[m]
					if g.Kind == ContactFace {
						continue
					}
					other := pieces[j].corners(g)
					if !against(n, outline[0], other, tol) {
						continue
					}
					slices.Reverse(other) // now it turns as the outline does
					var touched bool
					walls, touched = without(walls, other, n, tol)
					met = met || touched
				}
			}
			switch {
			case !met:
				f.Kind = WallFace
			default:
				f.Walls = walls
			}
		}
	}
}

// corners are those of a face, in a new slice.
func (p *Piece) corners(f *PieceFace) []Vec {
	list := make([]Vec, len(f.Loop))
	for i, c := range f.Loop {
		list[i] = p.Corners[c]
	}
	return list
}

// areaVector is the area of a plane polygon times its normal.
func areaVector(p []Vec) (a Vec) {
	for k := 2; k < len(p); k++ {
		a = add(a, scaled(cross(sub(p[k-1], p[0]), sub(p[k], p[0])), 0.5))
	}
	return a
}

func unit(v Vec) Vec { return scaled(v, 1/length(v)) }

// against tells whether a polygon lies in the plane through at with the normal n, and turns
// the other way.
func against(n, at Vec, p []Vec, tol float64) bool {
	if dot(unit(areaVector(p)), n) > -0.5 {
		return false
	}
	for _, q := range p {
		if d := dot(n, sub(q, at)); d > tol || d < -tol {
			return false
		}
	}
	return true
}

// without is what of convex polygons in the plane with the normal n lies outside another
// convex one that turns as they do, as convex polygons, and whether that took anything
// away. Strips narrower than tol are nothing.
func without(list [][]Vec, cut []Vec, n Vec, tol float64) (rest [][]Vec, took bool) {
	for _, p := range list {
		inside := p
		var outside [][]Vec
		for k := range cut {
			a, b := cut[k], cut[(k+1)%len(cut)]
			inward := cross(n, sub(b, a))
			if l := length(inward); l > tol {
				inward = scaled(inward, 1/l)
			} else {
				continue
			}
			if beyond := half(inside, a, scaled(inward, -1), tol); beyond != nil {
				outside = append(outside, beyond)
			}
			if inside = half(inside, a, inward, tol); inside == nil {
				break
			}
		}
		if inside == nil {
			rest = append(rest, p)
			continue
		}
		took = true
		rest = append(rest, outside...)
	}
	return rest, took
}

// half is what of a convex polygon lies on the side of a line through at to which the unit
// vector n in the plane of both points; nil where that is no wider than tol.
func half(p []Vec, at, n Vec, tol float64) []Vec {
	var out []Vec
	widest := 0.0
	for k, a := range p {
		b := p[(k+1)%len(p)]
		da, db := dot(n, sub(a, at)), dot(n, sub(b, at))
		widest = max(widest, da)
		if da >= 0 {
			out = append(out, a)
		}
		if da > 0 && db < 0 || da < 0 && db > 0 {
			out = append(out, add(a, scaled(sub(b, a), da/(da-db))))
		}
	}
	if widest <= tol || len(out) < 3 {
		return nil
	}
	return out
}
