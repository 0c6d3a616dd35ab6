package delaunay

// tet is a tetrahedron, one cache line. Vertices are internal numbers (1 is the first
// in the order of insertion) and 0 is the ghost, the vertex at infinity. The sign bit
// of v[0] marks a tetrahedron of the cavity at work, and afterwards a free record.
//
// A real tetrahedron is positive: det(v1-v0, v2-v0, v3-v0) > 0. A ghost has one
// vertex 0; with a point strictly outside its facet in place of 0 it is positive.
type tet struct {
	v [4]int32
	n [4]uint32 // over the face opposite v[k]: 4*tetrahedron + its face
	// c is the circumcentre; a point nearer than √lo lies inside the sphere, one
	// farther than √hi outside, and what is between is for the exact stage to say. When
	// they are equal the sphere is exact, and so is the point between on it.
	c      [3]float64
	lo, hi float32
}

const (
	marked  = -1 << 31
	ownMask = 1<<31 - 1
)

// Values of lo that no squared distance is below; hi is +Inf with both.
const (
	loGhost = -2 // the tetrahedron is a ghost
	loIll   = -1 // its sphere is too ill-conditioned to be stored
)

// point is a site in internal coordinates.
type point struct {
	x, y, z float64
	tet     uint32 // one of its tetrahedra; noTet: the site is no vertex
	local   uint32 // its number in the last cavity (a sparse set's index)
}

const noTet = 1<<32 - 1

// faceOf lists the vertices of face k so that (p, face) is positive for a point p on
// the inner side; faceBack the same seen from outside.
var (
	faceOf   = [4][3]uint8{{1, 2, 3}, {0, 3, 2}, {0, 1, 3}, {0, 2, 1}}
	faceBack = [4][3]uint8{{1, 3, 2}, {0, 2, 3}, {0, 3, 1}, {0, 1, 2}}
)

// mesh is the tetrahedralisation as the builders see it.
type mesh struct {
	frame *frame
	sites []float64 // as they came, three a site
	order []uint32  // order[p-1] is the site of point p
	pts   []point   // pts[0] is the ghost
	tets  []tet
	used  int64 // records of tets in use, on a free list or in a worker's block

	whole   bool // coordinates are multiples of 2^-bits for bits <= maxBits
	fine    bool // coordinates have many bits, but are not rounded
	exact   bool // coordinates have so few bits that spheres of near sites are stored exactly
	limits  limits
	boxTies *[512]uint64 // see oneBox
}

// worker inserts points; every goroutine has its own.
type worker struct {
	m      *mesh
	queue  []uint32 // the cavity's tetrahedra, each 4*t + the face it was entered by
	rim    []uint32 // faces of tetrahedra outside the cavity that look into it
	head   int
	dead   int // queue[:dead] is the cavity
	edge   int // rim[:edge] is its boundary
	locals []local
	facets []facet
	table  []uint32
	stride uint32
	hash   edgeHash
	free   []uint32
	next   uint32 // records next..end-1 are the worker's own
	end    uint32
	hint   uint32 // a real tetrahedron to walk from
	ghost  uint32 // the last ghost that was made
	twins  []twin

	// With other workers at work:
	owner []uint8
	me    uint8
	spare uint32 // a record that takes writes meant for no tetrahedron
	seed  uint64
}

// local is a vertex of the cavity's boundary seen from the new point.
type local struct {
	x, y, z, q float64
	v          int32
}

func (l *local) set(q *point, px, py, pz float64, v int32) {
	x, y, z := q.x-px, q.y-py, q.z-pz
	l.x, l.y, l.z, l.q, l.v = x, y, z, x*x+y*y+z*z, v
}

type facet struct{ a, b, c, id uint32 }

// twin is a point found equal to a vertex.
type twin struct{ point, vertex int32 }

func newWorker(m *mesh) *worker {
	w := &worker{m: m}
	w.queue = make([]uint32, 256)
	w.rim = make([]uint32, 512)
	w.resizeTable(64)
	return w
}
