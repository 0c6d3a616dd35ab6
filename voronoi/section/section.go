package section

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// Options say how to cut. The zero value is good.
type Options struct {
	// Threads is how many goroutines cut; 0: as many as there are processors.
	Threads int
	// Progress is told now and then how many cells are done, from one goroutine at a time.
	Progress func(done, total int)
	// Within has what lies in each of these counted for itself.
	Within []solid.Solid
	// Outlines are wanted, not areas alone.
	Outlines bool
}

// Polygon is rings of corners in space without the first repeated: the outer one,
// counter-clockwise seen from above the plane, then holes, clockwise.
type Polygon [][]Vec

// Piece is what the plane cuts out of one cell.
type Piece struct {
	Site     int32     // the representative of its group
	Part     int32     // of Options.Within; -1: the whole
	Area     float64   // +Inf: Open
	Open     bool      // without end
	Polygons []Polygon // none if Open, or not wanted
}

// Section is a partition in a plane.
type Section struct {
	Foot, U, V, N Vec     // U, V and N are right-handed and of length 1; N points up
	Pieces        []Piece // by site, then part
	// Space is the solid in the plane and Area its area; +Inf and nothing without one.
	Space []Polygon
	Area  float64
	// InFaces tells that the plane lies in faces between cells, InWalls that it lies in
	// walls: then the rule of the package's text decided.
	InFaces, InWalls bool
}

// Flat gives the coordinates along U and V of a place in the plane, from Foot.
func (s *Section) Flat(p Vec) Vec2 {
	d := sub(p, s.Foot)
	return Vec2{X: dot(s.U, d), Y: dot(s.V, d)}
}

// ErrSites: the sites are not those of the diagram.
var ErrSites = errors.New("section: the sites are not those of the diagram")

// NoSurfaceError is a solid that does not give its surface.
type NoSurfaceError struct{ Kind string }

func (e *NoSurfaceError) Error() string {
	return fmt.Sprintf("section: a solid of the kind %q does not give its surface", e.Kind)
}

// Cut cuts a diagram. of are the sites whose cells are wanted; nil: all. The error is
// ErrPlane, a *[NoSurfaceError], one of voronoi.Diagram.Insert, or that of ctx.
func Cut(ctx context.Context, d *voronoi.Diagram, p Plane, of []int32, o Options) (*Section, error) {
	facts := d.Facts()
	f, err := newFrame(p, facts.Origin)
	if err != nil {
		return nil, err
	}
	j := &job{d: d, frame: f, wanted: o.Outlines}
	s := &Section{Foot: f.foot, U: f.u, V: f.v, N: f.n, Area: math.Inf(1)}
	lo, hi := facts.Lo, facts.Hi
	if body := d.Solid(); body != nil {
		lo, hi = body.Bounds()
	}
	j.size = length(sub(hi, lo))
	for _, r := range o.Within {
		a, b := r.Bounds()
		j.size = max(j.size, length(sub(b, a)))
	}
	j.tol = 1e-12 * j.size
	if f.axis < 0 {
		j.tol += 0x1p-50 * max(largest(lo), largest(hi))
	}
	if err := j.spaces(s, o); err != nil {
		return nil, err
	}
	s.Pieces, err = j.run(ctx, cellsOf(d, of), o)
	s.InFaces = j.inFaces.Load()
	return s, err
}

// cellsOf lists the sites that have a cell of their own, ascending.
func cellsOf(d *voronoi.Diagram, of []int32) []int32 {
	facts := d.Facts()
	skip := make([]bool, d.Len())
	for _, g := range facts.Groups {
		for _, i := range g.Members {
			skip[i] = i != g.Representative
		}
	}
	for _, i := range facts.Outside {
		skip[i] = true
	}
	if of != nil {
		first := make([]int32, d.Len())
		for i := range first {
			first[i] = int32(i)
		}
		for _, g := range facts.Groups {
			for _, i := range g.Members {
				first[i] = g.Representative
			}
		}
		asked := make([]bool, d.Len())
		for _, i := range of {
			asked[first[i]] = true
		}
		for i := range skip {
			skip[i] = skip[i] || !asked[i]
		}
	}
	var list []int32
	for i, out := range skip {
		if !out {
			list = append(list, int32(i))
		}
	}
	return list
}

// job is what the goroutines that cut share.
type job struct {
	d         *voronoi.Diagram
	frame     frame
	size, tol float64
	convex    bool   // cells are cut by the solid already, or there is none
	space     *space // of the solid; nil: none
	parts     []*space
	wanted    bool // outlines
	inFaces   atomic.Bool
}

// spaces cuts the solid and the parts.
func (j *job) spaces(s *Section, o Options) error {
	body := j.d.Solid()
	j.convex = body == nil || body.Planes() != nil
	if body != nil {
		surfaced, ok := body.(Surfaced)
		if !ok {
			return &NoSurfaceError{body.Facts().Kind}
		}
		j.space = newSpace(&j.frame, surfaced, j.tol)
		var sum voronoi.Sum
		var pieces [][]Vec2
		for _, list := range [2][]trapezoid{j.space.above, j.space.only} {
			for k := range list {
				c := list[k].corners()
				if len(c) >= 3 {
					sum.Add(area(c))
					pieces = append(pieces, c)
				}
			}
		}
		s.Area = sum.Value()
		s.InWalls = j.space.inWall()
		if o.Outlines && len(pieces) > 0 {
			s.Space = j.raise(outline(pieces, weldWithin*j.size))
		}
	}
	for _, r := range o.Within {
		surfaced, ok := r.(Surfaced)
		if !ok {
			return &NoSurfaceError{r.Facts().Kind}
		}
		j.parts = append(j.parts, newSpace(&j.frame, surfaced, j.tol))
	}
	return nil
}

// inWall tells whether the plane lies in walls: the solid is another from above than from below.
func (s *space) inWall() bool {
	total := func(list []trapezoid) float64 {
		var sum voronoi.Sum
		for k := range list {
			sum.Add(area(list[k].corners()))
		}
		return sum.Value()
	}
	above, below, only := total(s.above), total(s.below), total(s.only)
	scale := 1e-9 * max(above, below)
	return only > scale || math.Abs(above-below) > scale
}

// weldWithin is the share of the extent within which corners of an outline are one.
const weldWithin = 1e-10

func (j *job) raise(flat [][][]Vec2) []Polygon {
	out := make([]Polygon, len(flat))
	for i, rings := range flat {
		out[i] = make(Polygon, len(rings))
		for k, ring := range rings {
			out[i][k] = make([]Vec, len(ring))
			for c, p := range ring {
				out[i][k][c] = add(j.frame.raise(p), Vec{}) // -0 + 0 is 0
			}
		}
	}
	return out
}

// chunkSize is how many cells a goroutine takes at a time.
const chunkSize = 64

// run cuts all cells; what it gives does not depend on the number of threads.
func (j *job) run(ctx context.Context, sites []int32, o Options) ([]Piece, error) {
	n := len(sites)
	chunks := (n + chunkSize - 1) / chunkSize
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	found := make([][]Piece, chunks)
	var next, done atomic.Int64
	var guard sync.Mutex
	var failure error
	work := func() {
		k := &cutter{job: j}
		for {
			chunk := int(next.Add(1)) - 1
			if chunk >= chunks {
				return
			}
			var err error
			for i := chunk * chunkSize; i < min(n, (chunk+1)*chunkSize) && err == nil; i++ {
				if err = ctx.Err(); err == nil {
					err = k.cut(sites[i])
				}
			}
			if err != nil {
				guard.Lock()
				failure = err
				guard.Unlock()
				next.Store(int64(chunks))
				return
			}
			found[chunk], k.found = k.found, nil
			if o.Progress != nil {
				guard.Lock()
				o.Progress(min(n, int(done.Add(1))*chunkSize), n)
				guard.Unlock()
			}
		}
	}
	if threads = min(threads, chunks); threads <= 1 {
		work()
	} else {
		var all sync.WaitGroup
		for range threads {
			all.Go(work)
		}
		all.Wait()
	}
	if failure != nil {
		return nil, failure
	}
	var all []Piece
	for _, f := range found {
		all = append(all, f...)
	}
	return all, nil
}
