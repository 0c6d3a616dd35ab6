package delaunay

import (
	"errors"
	"fmt"
)

// Options say how a tetrahedralisation is built. The zero value is good.
type Options struct {
	// Threads is how many goroutines insert sites; 0: as many as there are
	// processors. The set of tetrahedra is the same for any number.
	Threads int
	// Progress is told now and then how many sites are in, from one goroutine at a
	// time. It may be nil.
	Progress func(done, total int)
	// Memory is the most bytes the build may take, see Estimate; 0: no limit.
	Memory int64
}

// Bytes a site, see Estimate.
const (
	tetsPerSite    = 7.2 // reserved; a Poisson process has 6.77
	tetBytes       = 64
	pointBytes     = 32
	indexBytes     = 8  // order and place
	sortBytes      = 16 // given back after the sort
	workerBytes    = 1 << 17
	mostSites      = 1 << 27
	ownershipBytes = 1
)

// Estimate returns how many bytes Build takes for n sites, those of the sites
// themselves not counted: about 540 a site. Sites that lie unusually (most of them on
// two curves, say) can have more tetrahedra than are reserved; then the build takes
// more and stops with a *MemoryError when the limit would be passed.
func Estimate(n int) int64 {
	return int64(float64(n)*(tetsPerSite*tetBytes+pointBytes+indexBytes+sortBytes+ownershipBytes)) + 2*workerBytes
}

// MemoryError says that a build was not begun or given up because it would have taken
// more memory than Options.Memory.
type MemoryError struct{ Need, Limit int64 }

func (e *MemoryError) Error() string {
	return fmt.Sprintf("delaunay: the tetrahedralisation needs %d bytes, more than the limit of %d", e.Need, e.Limit)
}

// CoordinateError says that a coordinate of a site is NaN or infinite.
type CoordinateError struct{ Site int }

func (e *CoordinateError) Error() string {
	return fmt.Sprintf("delaunay: site %d has a coordinate that is not finite", e.Site)
}

var (
	// ErrTooMany is returned for more sites than tetrahedra can be numbered for.
	ErrTooMany = errors.New("delaunay: more than 134 million sites")
	// ErrShape is returned for coordinates that do not come in threes.
	ErrShape = errors.New("delaunay: the number of coordinates is not a multiple of three")
)
