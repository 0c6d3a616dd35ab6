package voronoi

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

// circumcentre is the centre of the sphere through a and three more places, seen from
// a. With u, v, w these places seen from a it is
//
//	(|u|²v×w + |v|²w×u + |w|²u×v) / (2 u·v×w)
//
// The bits depend on the order of the places.
func circumcentre(a, b, c, d Vec) Vec {
	ux, uy, uz := b.X-a.X, b.Y-a.Y, b.Z-a.Z
	vx, vy, vz := c.X-a.X, c.Y-a.Y, c.Z-a.Z
	wx, wy, wz := d.X-a.X, d.Y-a.Y, d.Z-a.Z
	uu := float64(ux*ux) + float64(uy*uy) + float64(uz*uz)
	vv := float64(vx*vx) + float64(vy*vy) + float64(vz*vz)
	ww := float64(wx*wx) + float64(wy*wy) + float64(wz*wz)
	px, py, pz := float64(vy*wz)-float64(vz*wy), float64(vz*wx)-float64(vx*wz), float64(vx*wy)-float64(vy*wx)
	det := float64(ux*px) + float64(uy*py) + float64(uz*pz)
	if !(float64(uu*vv)*ww < float64(plainKappa2*det)*det) {
		return fineCircumcentre(a, b, c, d)
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

// fineCircumcentre is circumcentre in two words a number.
func fineCircumcentre(a, b, c, d Vec) Vec {
	u, v, w := difference(b, a), difference(c, a), difference(d, a)
	vw := v.cross(w)
	n := vw.times(u.dot(u)).add(w.cross(u).times(v.dot(v))).add(u.cross(v).times(w.dot(w)))
	det := u.dot(vw)
	det = det.add(det)
	return Vec{X: n.x.over(det), Y: n.y.over(det), Z: n.z.over(det)}
}

// finite tells whether no coordinate is infinite or NaN.
func finite(p Vec) bool { return (p.X-p.X)+(p.Y-p.Y)+(p.Z-p.Z) == 0 }
