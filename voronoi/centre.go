package voronoi

import "math"

// centre is the circumcentre of a tetrahedron: a Voronoi vertex.
type centre struct {
	o    Vec   // seen from the corner with the lowest number,
	from int32 // which is this
	out  uint8 // bit w is set when it lies beyond side w of the box; spoilt
}

// spoilt is the bit of centre.out that says that it could not be computed: something
// was too large or too small.
const spoilt = 1 << 7

// plainKappa2 is the square of the ratio |u||v||w| / (u·v×w) of the edges at a corner
// from which a tetrahedron is too flat for plain arithmetic. The centre errs by up to
// about 60 ulp times that ratio.
const plainKappa2 = 0x1p16

// fineKappa2 is the same for two words a number: what is flatter than that, two sites
// 10^-20 apart with two far ones, has no centre that could be relied on.
const fineKappa2 = 0x1p104

// circumcentre is the centre of the sphere through a and three more places, seen from
// a. With u, v, w these places seen from a it is
//
//	(|u|²v×w + |v|²w×u + |w|²u×v) / (2 u·v×w)
//
// The bits depend on the order of the places. It is NaN where the tetrahedron is too
// flat.
func circumcentre(a, b, c, d Vec) Vec {
	ux, uy, uz := b.X-a.X, b.Y-a.Y, b.Z-a.Z
	vx, vy, vz := c.X-a.X, c.Y-a.Y, c.Z-a.Z
	wx, wy, wz := d.X-a.X, d.Y-a.Y, d.Z-a.Z
	uu := float64(ux*ux) + float64(uy*uy) + float64(uz*uz)
	vv := float64(vx*vx) + float64(vy*vy) + float64(vz*vz)
	ww := float64(wx*wx) + float64(wy*wy) + float64(wz*wz)
	px, py, pz := float64(vy*wz)-float64(vz*wy), float64(vz*wx)-float64(vx*wz), float64(vx*wy)-float64(vy*wx)
	det := float64(ux*px) + float64(uy*py) + float64(uz*pz)
	if p2 := float64(uu*vv) * ww; !(p2 < float64(plainKappa2*det)*det) {
		o, fine := fineCircumcentre(a, b, c, d)
		if !(p2 < float64(fineKappa2*fine)*fine) {
			return Vec{X: math.NaN()}
		}
		return o
	}
	qx, qy, qz := float64(wy*uz)-float64(wz*uy), float64(wz*ux)-float64(wx*uz), float64(wx*uy)-float64(wy*ux)
	rx, ry, rz := float64(uy*vz)-float64(uz*vy), float64(uz*vx)-float64(ux*vz), float64(ux*vy)-float64(uy*vx)
	s := 0.5 / det
	return Vec{
		X: float64((float64(uu*px) + float64(vv*qx) + float64(ww*rx)) * s),
		Y: float64((float64(uu*py) + float64(vv*qy) + float64(ww*ry)) * s),
		Z: float64((float64(uu*pz) + float64(vv*qz) + float64(ww*rz)) * s),
	}
}

// fineCircumcentre is circumcentre in two words a number; det is u·v×w.
func fineCircumcentre(a, b, c, d Vec) (o Vec, det float64) {
	u, v, w := difference(b, a), difference(c, a), difference(d, a)
	vw := v.cross(w)
	n := vw.times(u.dot(u)).add(w.cross(u).times(v.dot(v))).add(u.cross(v).times(w.dot(w)))
	six := u.dot(vw)
	twice := six.add(six)
	return Vec{X: n.x.over(twice), Y: n.y.over(twice), Z: n.z.over(twice)}, six.high
}

// finite tells whether no coordinate is infinite or NaN.
func finite(p Vec) bool { return (p.X-p.X)+(p.Y-p.Y)+(p.Z-p.Z) == 0 }
