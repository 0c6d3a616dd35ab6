package voronoi

import (
	"errors"
	"fmt"
)

var (
	// ErrNoSites: a diagram needs at least one site.
	ErrNoSites = errors.New("voronoi: no sites")
	// ErrTooMany: sites are numbered by int32.
	ErrTooMany = errors.New("voronoi: more than 2^31-1 sites")
)

// NotFiniteError is a site with a coordinate that is NaN, infinite or too large
// to be squared (1e150).
type NotFiniteError struct {
	Site int
	Axis int // 0, 1, 2 for x, y, z
	X    float64
}

func (e *NotFiniteError) Error() string {
	return fmt.Sprintf("voronoi: site %d has the coordinate %c = %v", e.Site, 'x'+rune(e.Axis), e.X)
}

// NoVolumeError is a solid whose volume is not a positive number.
type NoVolumeError struct{ Volume float64 }

func (e *NoVolumeError) Error() string {
	return fmt.Sprintf("voronoi: a solid with the volume %v", e.Volume)
}

// ToleranceError is a tolerance that is negative, infinite or NaN.
type ToleranceError struct{ Tolerance float64 }

func (e *ToleranceError) Error() string {
	return fmt.Sprintf("voronoi: the tolerance %v", e.Tolerance)
}

// NoSuchSiteError is a request for a site that was not given to New.
type NoSuchSiteError struct{ Site, Sites int }

func (e *NoSuchSiteError) Error() string {
	return fmt.Sprintf("voronoi: there is no site %d among %d", e.Site, e.Sites)
}
