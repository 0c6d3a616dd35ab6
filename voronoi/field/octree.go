package field

import (
	"context"
	"errors"
	"math"
	"sync/atomic"

	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// How far the space is divided.
const (
	fineEnough  = 1e-3    // of the solid: so little space may stay undecided
	mostBoxes   = 1 << 15 // undecided ones, beside a few for each site
	boxesASite  = 4
	mostSamples = 1 << 13
	mostLevels  = 24
)

// SibsonAbove is Above for a field of the method Sibson in a solid. There is no closed
// form. But an estimate lies between the least and the greatest value of the natural
// neighbours of its place, and these are corners of tetrahedra whose circumspheres hold
// the place (or of a facet of the hull that the place is beyond). So the solid is
// divided into boxes, each with the tetrahedra whose spheres it meets: where all their
// corners are above the threshold the box is, where none is it is not, and else it is
// divided again. What is still undecided in the end lies between Lower and Upper, and
// samples of the field in it give Volume.
//
// within is as for LinearAbove. Without a solid the space is the convex hull of the sites;
// of a part that reaches out of it, what lies outside is in Space, not in Reached, and in Upper.
// Of sites in one plane nothing is reached then.
func (f *Field) SibsonAbove(ctx context.Context, within solid.Solid, value func(site int32) float64, thresholds []float64, r Run) (*Above, error) {
	e := f.extentOf(within)
	unreached := 0.0
	if f.body == nil {
		if f.facts.Dimension < 3 {
			space := 0.0
			if within != nil {
				space = within.Volume()
			}
			return f.allUnreached(space, len(thresholds)), nil
		}
		if err := f.needHull(ctx); err != nil {
			return nil, err
		}
		hull, err := f.hullBody(within)
		if err != nil {
			return nil, err
		}
		if within != nil {
			unreached = within.Volume()
		}
		if hull == nil { // the part lies outside the hull
			return f.allUnreached(within.Volume(), len(thresholds)), nil
		}
		e = extent{hull, false}
		unreached = max(0, unreached-hull.Volume())
	}
	n := len(thresholds)
	a := &Above{Volume: make([]float64, n), Lower: make([]float64, n), Upper: make([]float64, n), Doubt: make([]float64, n)}
	a.Reached = e.body.Volume()
	a.Space = a.Reached + unreached
	if f.facts.Dimension == 3 {
		if err := f.needHull(ctx); err != nil {
			return nil, err
		}
	}
	o := &octree{Field: f, extent: e, value: value, run: r}
	o.listBalls()
	for i, t := range thresholds {
		if err := o.divide(ctx, t); err != nil {
			return nil, err
		}
		a.Lower[i] = min(o.above.Value(), a.Reached)
		a.Upper[i] = min(a.Lower[i]+o.undecided(), a.Reached)
		estimate, doubt, err := o.sample(ctx, t)
		if err != nil {
			return nil, err
		}
		a.Volume[i] = min(max(a.Lower[i]+estimate, a.Lower[i]), a.Upper[i])
		a.Upper[i] += unreached
		a.Doubt[i] = doubt
	}
	return a, nil
}

// allUnreached is what is known of a space of which nothing is.
func (f *Field) allUnreached(volume float64, n int) *Above {
	a := &Above{Volume: make([]float64, n), Lower: make([]float64, n), Upper: make([]float64, n), Doubt: make([]float64, n), Space: volume}
	for i := range a.Upper {
		a.Upper[i] = volume
	}
	return a
}

// hullBody is the convex hull of the sites as a solid, or what of it lies in a part (nil:
// all); nil where that is nothing.
func (f *Field) hullBody(within solid.Solid) (solid.Solid, error) {
	number := map[int32]int32{}
	var v []Vec
	var t [][3]int32
	for _, c := range f.t.Hull() {
		var q [3]int32
		for i, s := range c {
			n, ok := number[s]
			if !ok {
				n = int32(len(v))
				number[s] = n
				v = append(v, f.d.Place(f.site(s)))
			}
			q[i] = n
		}
		t = append(t, q)
	}
	hull, _, err := mesh.New(v, t, mesh.Options{Kind: "hull"})
	if err != nil {
		return nil, err
	}
	if within == nil {
		return hull, nil
	}
	region, err := mesh.NewRegion(within, hull)
	var fault *mesh.Error
	if errors.As(err, &fault) && fault.Fault == mesh.NothingLeft {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	return region, nil
}

// ball is a tetrahedron's sphere with the least and the greatest value of its corners;
// of a ghost, the half-space n·x > d beyond its facet.
type ball struct {
	at      Vec // centre, or n
	radius2 float64
	d       float64
	half    bool
	lo, hi  float64
}

type octree struct {
	*Field
	extent
	value func(int32) float64
	run   Run
	balls []ball
	every bool // no tetrahedra: every site may be a neighbour anywhere
	least float64
	most  float64
	size  float64

	boxes []cube // undecided
	above voronoi.Sum
}

// cube is an undecided box and the balls that meet it.
type cube struct {
	lo, hi Vec
	volume float64 // in the solid
	cut    bool    // a wall passes through it
	meets  []int32
}

// listBalls collects the spheres, in coordinates moved by the origin. They are widened
// a little, so that rounding leaves no neighbour out.
func (o *octree) listBalls() {
	o.least, o.most = math.Inf(1), math.Inf(-1)
	for _, s := range o.everyone() {
		z := o.value(s)
		o.least, o.most = min(o.least, z), max(o.most, z)
	}
	lo, hi := o.extent.body.Bounds()
	o.size = length(sub(o.d.Local(hi), o.d.Local(lo)))
	o.every = o.facts.Dimension < 3
	if o.every {
		return
	}
	t := o.t
	for i := range t.NumTets() {
		c, r2 := t.Circumsphere(i)
		b := ball{at: c, lo: math.Inf(1), hi: math.Inf(-1)}
		// The centre errs by about 60 units in the last place times the flatness.
		r := math.Sqrt(r2)
		b.radius2 = r + float64(1e-13*flatness(t, i)*r) + float64(1e-9*o.size)
		b.radius2 *= b.radius2
		if math.IsNaN(b.radius2) || math.IsInf(c.X+c.Y+c.Z, 0) {
			b.radius2, b.at = math.Inf(1), Vec{} // too flat to tell: it may reach anywhere
		}
		o.bound(&b, t.Tet(i))
		o.balls = append(o.balls, b)
	}
	for i := t.NumTets(); i < t.NumTets()+t.NumGhosts(); i++ {
		c := o.facet(i)
		p, q, s := t.Site(int(c[0])), t.Site(int(c[1])), t.Site(int(c[2]))
		n := cross(sub(q, p), sub(s, p))
		n = scale(1/length(n), n)
		if inner := o.innerOf(i); dot(n, sub(inner, p)) > 0 {
			n = scale(-1, n)
		}
		b := ball{at: n, d: dot(n, p) - float64(1e-9*o.size), half: true, lo: math.Inf(1), hi: math.Inf(-1)}
		if math.IsNaN(n.X + n.Y + n.Z) {
			b = ball{radius2: math.Inf(1), lo: math.Inf(1), hi: math.Inf(-1)}
		}
		o.bound(&b, t.Tet(i))
		o.balls = append(o.balls, b)
	}
}

// flatness is |u||v||w| / (u·v×w) of the edges at the first corner.
func flatness(t *delaunay.T, i int) float64 {
	c := t.Tet(i)
	a := t.Site(int(c[0]))
	u, v, w := sub(t.Site(int(c[1])), a), sub(t.Site(int(c[2])), a), sub(t.Site(int(c[3])), a)
	return length(u) * length(v) * length(w) / math.Abs(dot(u, cross(v, w)))
}

// innerOf is the corner of the tetrahedron behind a ghost's facet that is not on it.
func (o *octree) innerOf(ghost int) Vec {
	for k, s := range o.t.Tet(ghost) {
		if s == delaunay.Ghost {
			n, corner := o.t.Neighbor(ghost, k)
			return o.t.Site(int(o.t.Tet(n)[corner]))
		}
	}
	return Vec{}
}

func (o *octree) bound(b *ball, corners [4]int32) {
	for _, s := range corners {
		if s != delaunay.Ghost {
			z := o.value(o.site(s))
			b.lo, b.hi = min(b.lo, z), max(b.hi, z)
		}
	}
}

// meets tells whether a box may have a place inside the ball.
func (b *ball) meets(lo, hi Vec) bool {
	if b.half {
		return float64(max(b.at.X*lo.X, b.at.X*hi.X))+float64(max(b.at.Y*lo.Y, b.at.Y*hi.Y))+float64(max(b.at.Z*lo.Z, b.at.Z*hi.Z)) > b.d
	}
	x := max(lo.X-b.at.X, b.at.X-hi.X, 0)
	y := max(lo.Y-b.at.Y, b.at.Y-hi.Y, 0)
	z := max(lo.Z-b.at.Z, b.at.Z-hi.Z, 0)
	return float64(x*x)+float64(y*y)+float64(z*z) <= b.radius2
}

// divide decides boxes against a threshold until little is left undecided.
func (o *octree) divide(ctx context.Context, t float64) error {
	lo, hi := o.extent.body.Bounds()
	o.above = voronoi.Sum{}
	o.boxes = nil
	all := make([]int32, len(o.balls))
	for i := range all {
		all[i] = int32(i)
	}
	whole := o.extent.body.Volume()
	start := cube{lo: lo, hi: hi, volume: whole, cut: o.extent.body.Facts().Kind != "box", meets: all}
	o.place(start, t)
	limit := mostBoxes + boxesASite*o.facts.Distinct
	for range mostLevels {
		if len(o.boxes) == 0 || 8*len(o.boxes) > limit || o.undecided() <= fineEnough*whole || o.every {
			return ctx.Err()
		}
		before := o.boxes
		o.boxes = nil
		parts := make([][8]cube, len(before))
		err := each(ctx, len(before), Run{Threads: o.run.Threads}, func(w *Work, i int) error {
			return o.split(&before[i], &parts[i], w)
		})
		if err != nil {
			return err
		}
		for i := range parts {
			for k := range parts[i] {
				if parts[i][k].volume > 0 {
					o.place(parts[i][k], t)
				}
			}
		}
	}
	return nil
}

// place puts a box where it belongs.
func (o *octree) place(c cube, t float64) {
	lo, hi := math.Inf(1), math.Inf(-1)
	if o.every {
		lo, hi = o.least, o.most
	}
	for _, i := range c.meets {
		lo, hi = min(lo, o.balls[i].lo), max(hi, o.balls[i].hi)
	}
	switch {
	case lo > t:
		o.above.Add(c.volume)
	case hi <= t:
	default:
		o.boxes = append(o.boxes, c)
	}
}

func (o *octree) undecided() float64 {
	var s voronoi.Sum
	for i := range o.boxes {
		s.Add(o.boxes[i].volume)
	}
	return s.Value()
}

// split divides a box in eight. A part without volume in the solid has volume 0.
func (o *octree) split(c *cube, to *[8]cube, w *Work) error {
	m := Vec{X: c.lo.X + (c.hi.X-c.lo.X)/2, Y: c.lo.Y + (c.hi.Y-c.lo.Y)/2, Z: c.lo.Z + (c.hi.Z-c.lo.Z)/2}
	for k := range to {
		p := cube{lo: c.lo, hi: m}
		if k&1 != 0 {
			p.lo.X, p.hi.X = m.X, c.hi.X
		}
		if k&2 != 0 {
			p.lo.Y, p.hi.Y = m.Y, c.hi.Y
		}
		if k&4 != 0 {
			p.lo.Z, p.hi.Z = m.Z, c.hi.Z
		}
		if err := o.measure(&p, c.cut, w); err != nil {
			return err
		}
		if p.volume > 0 {
			lo, hi := o.d.Local(p.lo), o.d.Local(p.hi)
			for _, i := range c.meets {
				if o.balls[i].meets(lo, hi) {
					p.meets = append(p.meets, i)
				}
			}
		}
		to[k] = p
	}
	return nil
}

// measure finds the volume of a box in the solid.
func (o *octree) measure(c *cube, cut bool, w *Work) error {
	e := sub(c.hi, c.lo)
	c.volume = float64(e.X*e.Y) * e.Z
	if !cut {
		return nil
	}
	m := add(c.lo, scale(0.5, e))
	if o.extent.body.Distance(m) > length(e)/2*(1+1e-9) {
		if o.extent.body.Side(m, 0) != solid.Inside {
			c.volume = 0
		}
		return nil
	}
	c.cut = true
	w.piece.SetBox(sub(c.lo, m), sub(c.hi, m), [6]int32{})
	v, err := o.extent.volumeOf(&w.piece, m, w)
	c.volume = v
	return err
}

// sample estimates how much of the undecided space is above t: the field is asked at
// a place by chance in each of some boxes spread evenly over it. The doubt is the standard error that this
// number of independent samples would have.
func (o *octree) sample(ctx context.Context, t float64) (volume, doubt float64, err error) {
	n := len(o.boxes)
	if n == 0 {
		return 0, 0, nil
	}
	if o.every {
		return o.sampleWhole(ctx, t)
	}
	step := (n + mostSamples - 1) / mostSamples
	var weight, over voronoi.Sum
	above := make([]float64, (n+step-1)/step) // 1, 0, -1: not known
	err = each(ctx, len(above), o.run, func(w *Work, i int) error {
		var err error
		above[i], err = o.ask(ctx, i*step, t, w)
		return err
	})
	if err != nil {
		return 0, 0, err
	}
	squares := voronoi.Sum{}
	for i, x := range above {
		if v := o.boxes[i*step].volume; x >= 0 {
			weight.Add(v)
			over.Add(float64(v * x))
			squares.Add(float64(v * v))
		}
	}
	return spread(o.undecided(), weight.Value(), over.Value(), squares.Value())
}

// spread turns samples into a volume and its standard error.
func spread(all, weight, over, squares float64) (volume, doubt float64, err error) {
	if !(weight > 0) {
		return all / 2, all / 2, nil
	}
	// The error is that of a share with one sample more on either side (Agresti and Coull
	// 1998): of samples that all agree it is not nothing.
	n := weight * weight / squares
	q := (over/weight*n + 1) / (n + 2)
	return float64(over / weight * all), all * math.Sqrt(float64(q*(1-q))/(n+2)), nil
}

// ask tells whether the field is above t at a place of a box, by chance; or where a wall cuts
// it and chance does not find the solid, at the centroid of what is in it: 1 or 0; -1 where
// it cannot be asked. (Middles of boxes would all lie on the same side of a level that runs
// along them.)
func (o *octree) ask(ctx context.Context, i int, t float64, w *Work) (float64, error) {
	c := &o.boxes[i]
	chance := dice(i)
	m := chance.in(c.lo, c.hi)
	for range 8 {
		if !c.cut || o.extent.body.Side(m, 0) == solid.Inside {
			break
		}
		m = chance.in(c.lo, c.hi)
	}
	if c.cut && o.extent.body.Side(m, 0) != solid.Inside {
		m = add(c.lo, scale(0.5, sub(c.hi, c.lo)))
		w.piece.SetBox(sub(c.lo, m), sub(c.hi, m), [6]int32{})
		lo, hi := o.extent.body.Bounds()
		if !clipBox(&w.piece, sub(lo, m), sub(hi, m)) {
			return -1, nil
		}
		if o.extent.convex {
			if o.extent.body.ClipConvex(&w.piece, m) == polyhedron.Empty {
				return -1, nil
			}
			v, first := w.piece.VolumeAndFirst()
			m = add(m, scale(1/v, first))
		} else {
			if err := o.extent.body.Measure(&w.piece, m, solid.WantCentroid, &w.solid, &w.measures); err != nil {
				return 0, err
			}
			m = add(m, scale(1/w.measures.Volume, w.measures.First))
		}
		if o.extent.body.Side(m, o.tol) == solid.Outside {
			return -1, nil
		}
	}
	at, weights, err := o.At(ctx, m, w)
	if err != nil || at > AtSite {
		return -1, err
	}
	if Estimate(weights, o.value) > t {
		return 1, nil
	}
	return 0, nil
}

// dice are numbers by chance, the same for the same seed (SplitMix64: Steele, Lea and Flood
// 2014).
type dice uint64

func (d *dice) next() float64 {
	*d += 0x9e3779b97f4a7c15
	z := uint64(*d)
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return float64((z^z>>31)>>11) * 0x1p-53
}

func (d *dice) in(lo, hi Vec) Vec {
	return Vec{X: lo.X + float64(d.next()*(hi.X-lo.X)), Y: lo.Y + float64(d.next()*(hi.Y-lo.Y)), Z: lo.Z + float64(d.next()*(hi.Z-lo.Z))}
}

// sampleWhole samples the whole solid, by chance in each cube of a grid: no part of it is
// decided.
func (o *octree) sampleWhole(ctx context.Context, t float64) (volume, doubt float64, err error) {
	c := o.boxes[0]
	const k = 20
	e := scale(1.0/k, sub(c.hi, c.lo))
	var inside, over atomic.Int64
	err = each(ctx, k*k*k, o.run, func(w *Work, i int) error {
		lo := Vec{X: c.lo.X + float64(float64(i%k)*e.X), Y: c.lo.Y + float64(float64(i/k%k)*e.Y), Z: c.lo.Z + float64(float64(i/k/k)*e.Z)}
		chance := dice(i)
		p := chance.in(lo, add(lo, e))
		if o.extent.body.Side(p, 0) == solid.Outside {
			return nil
		}
		at, weights, err := o.At(ctx, p, w)
		if err != nil || at > AtSite {
			return err
		}
		inside.Add(1)
		if Estimate(weights, o.value) > t {
			over.Add(1)
		}
		return nil
	})
	if err != nil {
		return 0, 0, err
	}
	n := float64(inside.Load())
	return spread(c.volume, n, float64(over.Load()), n)
}
