package delaunay

import "math"

// Fingerprint is a number made of the coordinates of the tetrahedra's corners that
// does not depend on any numbering or order: equal sets of tetrahedra have equal
// fingerprints. A coordinate is taken as the bits of its float64, -0 as +0. A point's
// hash starts at 0 and takes in x, y and z in turn: h = mix(h + c + bits), with
// c = 0x9e3779b97f4a7c15 and mix the finaliser of splitmix64. A tetrahedron's hash is
// mix of the sum of its corners' hashes, and the fingerprint the sum of those of all
// real tetrahedra; sums are modulo 2^64.
func (t *T) Fingerprint() uint64 {
	hashes := make([]uint64, len(t.pts))
	for p := 1; p < len(t.pts); p++ {
		s := t.sites[3*int(t.order[p-1]):]
		h := uint64(0)
		for _, x := range s[:3] {
			h = mix(h + 0x9e3779b97f4a7c15 + math.Float64bits(x+0))
		}
		hashes[p] = h
	}
	sum := uint64(0)
	for i := range t.tets[:t.real] {
		v := &t.tets[i].v
		sum += mix(hashes[v[0]] + hashes[v[1]] + hashes[v[2]] + hashes[v[3]])
	}
	return sum
}
