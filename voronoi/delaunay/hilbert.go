package delaunay

// The Hilbert curve of the cube as a machine with 24 states (Hamilton and
// Rau-Chaplin 2008): a state is the corner where the curve enters a cube and the
// axis along which it leaves; each octant has a digit along the curve and a state of
// its own. Three levels are folded into one step.

// hilbertBits is the number of bits an axis; the code has three times as many.
const hilbertBits = 15

const (
	hilbertStates = 24
	hilbertRows   = hilbertStates * 512
)

// hilbertStep maps state*512 + (nine interleaved bits) to digits<<5 | next state.
var hilbertStep = makeHilbertStep()

func makeHilbertStep() (step [hilbertRows]uint16) {
	var digit, next [hilbertStates][8]int
	for s := range digit {
		entry, axis := s%8, s/8
		for octant := range 8 {
			l := rotateRight3(octant^entry, axis+1)
			w := grayInverse3(l)
			digit[s][octant] = w
			e := entry ^ rotateLeft3(grayEntry(w), axis+1)
			next[s][octant] = e + 8*((axis+grayAxis(w)+1)%3)
		}
	}
	for s := range hilbertStates {
		for nine := range 512 {
			state, code := s, 0
			for level := 6; level >= 0; level -= 3 {
				octant := nine >> level & 7
				code = code<<3 | digit[state][octant]
				state = next[state][octant]
			}
			step[s*512+nine] = uint16(code<<5 | state)
		}
	}
	return step
}

func rotateRight3(b, n int) int { n %= 3; return (b>>n | b<<(3-n)) & 7 }
func rotateLeft3(b, n int) int  { n %= 3; return (b<<n | b>>(3-n)) & 7 }

func grayInverse3(g int) int {
	g ^= g >> 1
	return (g ^ g>>2) & 7
}

// grayEntry is the corner where the curve enters the i-th octant.
func grayEntry(i int) int {
	if i == 0 {
		return 0
	}
	j := (i - 1) / 2 * 2
	return j ^ j>>1
}

// grayAxis is the axis along which the curve crosses the i-th octant.
func grayAxis(i int) int {
	if i == 0 {
		return 0
	}
	if i%2 == 0 {
		i--
	}
	n := 0
	for ; i&1 == 1; i >>= 1 {
		n++
	}
	return n % 3
}

// hilbertCode is the place along the curve of the cell x, y, z; each needs
// hilbertBits bits.
func hilbertCode(x, y, z uint32) uint64 {
	m := spread(x) | spread(y)<<1 | spread(z)<<2
	var state uint64
	var code uint64
	for shift := 3*hilbertBits - 9; shift >= 0; shift -= 9 {
		step := uint64(hilbertStep[(state*512+(m>>uint(shift)&511))%hilbertRows])
		code = code<<9 | step>>5
		state = step & 31
	}
	return code
}

// zCode is the place of a cell along the Z-order curve (Morton 1966), x before y before
// z. It jumps where the Hilbert curve does not, but never goes down in one coordinate
// while the others stay: of two sites of a lattice's cell that differ along an axis the
// one with the larger coordinate comes later. The perturbation of inSphere has the
// larger outside, so that a site added in this order is seldom in conflict with a
// tetrahedron that it is cospherical with, and cavities of lattices are smaller by a
// sixth.
func zCode(x, y, z uint32) uint64 { return spread(x)<<2 | spread(y)<<1 | spread(z) }

// spread puts two empty bits between the bits of x.
func spread(x uint32) uint64 {
	v := uint64(x) & 0x1fffff
	v = (v | v<<32) & 0x1f00000000ffff
	v = (v | v<<16) & 0x1f0000ff0000ff
	v = (v | v<<8) & 0x100f00f00f00f00f
	v = (v | v<<4) & 0x10c30c30c30c30c3
	v = (v | v<<2) & 0x1249249249249249
	return v
}
