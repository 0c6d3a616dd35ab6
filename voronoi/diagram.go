package voronoi

import (
	"math"
	"runtime"
	"slices"
	"sync"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Diagram is the Voronoi partition of a set of sites, in a solid or without one.
// It is immutable after New and can be used by any number of goroutines at once.
type Diagram struct {
	solid    solid.Solid // nil: none
	convex   bool        // the solid is convex
	isBox    bool        // the solid is its own bounding box
	lo, hi   Vec         // bounds of the solid
	labels   [6]int32    // of the sides of these bounds
	threads  int
	progress func(done, total int)

	key    [16]byte
	facts  Facts
	origin Vec

	// Distances are stretched; then the tree's points are, too, and places are where
	// the sites of the cells truly stand. plain is the index of these for true distances.
	stretched bool
	stretch   Vec
	places    []Vec
	plain     *index.Tree
	plainOf   []int32 // by cell: its number there

	// Distinct sites that take part are numbered by the tree's order, which depends
	// on their coordinates alone. In the code such a number is called a cell.
	tree  *index.Tree
	cell  []int32 // by site: its cell, -1 outside
	site  []int32 // by cell: the representative site
	count []int32 // by cell: sites at this place

	pool sync.Pool // of *builder

	memory   int64
	building sync.Mutex
	whole    *dual // guarded by building; nil: not built
	fresh    bool  // it was built, not recalled
	recall   func(sites []float64, threads int) *delaunay.T

	probe   sync.Once
	offered float64 // set by probe: sites held against a cell, on average
}

// New makes the diagram of the sites. It keeps no reference to them. Nothing but
// the index is computed.
func New(sites []Vec, o Options) (*Diagram, error) {
	if err := check(sites, o); err != nil {
		return nil, err
	}
	d := &Diagram{solid: o.Solid, threads: o.Threads, progress: o.Progress, memory: o.Memory,
		stretched: IsStretch(o.Stretch), stretch: o.Stretch}
	if d.threads <= 0 {
		d.threads = runtime.GOMAXPROCS(0)
	}
	d.key = contentKey(sites, o)
	d.facts = Facts{Sites: len(sites), Volume: math.Inf(1)}
	inside := make([]bool, len(sites))
	d.sort(sites, o.Tolerance, inside)
	first, groups := distinct(sites, inside)
	d.facts.Groups = groups
	if err := d.build(sites, first); err != nil {
		return nil, err
	}
	return d, nil
}

// check looks for input that has no partition.
func check(sites []Vec, o Options) error {
	if len(sites) == 0 {
		return ErrNoSites
	}
	if len(sites) > math.MaxInt32 {
		return ErrTooMany
	}
	for i, p := range sites {
		for axis, x := range [3]float64{p.X, p.Y, p.Z} {
			if !(math.Abs(x) <= 1e150) {
				return &NotFiniteError{i, axis, x}
			}
		}
	}
	if err := checkStretch(o.Stretch); err != nil {
		return err
	}
	if !(o.Tolerance >= 0) || math.IsInf(o.Tolerance, 0) {
		return &ToleranceError{o.Tolerance}
	}
	if o.Solid != nil {
		if v := o.Solid.Volume(); !(v > 0) || math.IsInf(v, 0) {
			return &NoVolumeError{v}
		}
	}
	return nil
}

// sort tells sites inside the solid from those left out.
func (d *Diagram) sort(sites []Vec, tolerance float64, inside []bool) {
	for i, p := range sites {
		if d.solid == nil {
			inside[i] = true
			continue
		}
		switch d.solid.Side(p, tolerance) {
		case solid.Inside:
			inside[i] = true
		case solid.On:
			inside[i] = true
			d.facts.OnWall = append(d.facts.OnWall, int32(i))
		default:
			d.facts.Outside = append(d.facts.Outside, int32(i))
			d.facts.OutsideDistance = append(d.facts.OutsideDistance, d.solid.Distance(p))
		}
	}
	d.facts.Inside = len(sites) - len(d.facts.Outside)
}

// build shifts the distinct sites and makes the index. first[i] is the
// representative of site i, -1 for a site outside.
func (d *Diagram) build(sites []Vec, first []int32) error {
	n := 0
	for i, f := range first {
		if f == int32(i) {
			n++
		}
	}
	places := make([]Vec, 0, n)
	representative := make([]int32, 0, n)
	for i, f := range first {
		if f == int32(i) {
			places = append(places, positive(sites[i]))
			representative = append(representative, f)
		}
	}
	d.facts.Distinct = n
	d.enclose(places)
	d.origin = exactOrigin(places)
	d.facts.Origin = d.origin
	for i := range places {
		places[i] = sub(places[i], d.origin)
	}
	d.survey(places)
	if d.stretched {
		if err := d.buildStretched(places, first, representative); err != nil {
			return err
		}
		return nil
	}
	d.tree = index.New(places)
	d.number(first, representative)
	return nil
}

// buildStretched makes the index of the stretched places, and beside it that of the
// places as they are.
func (d *Diagram) buildStretched(places []Vec, first, representative []int32) error {
	d.plain = index.New(places)
	truly := slices.Clone(places)
	if err := d.stretchAll(places, representative); err != nil {
		return err
	}
	d.tree = index.New(places)
	d.number(first, representative)
	n := d.tree.Len()
	back := make([]int32, n) // number among the places to that in plain
	for i := range int32(n) {
		back[d.plain.Original(i)] = i
	}
	d.places, d.plainOf = make([]Vec, n), make([]int32, n)
	for i := range int32(n) {
		k := d.tree.Original(i)
		d.places[i], d.plainOf[i] = add(truly[k], d.origin), back[k]
	}
	return nil
}

// number links sites and cells.
func (d *Diagram) number(first, representative []int32) {
	n := d.tree.Len()
	d.site, d.count = make([]int32, n), make([]int32, n)
	d.cell = make([]int32, len(first))
	for i := range n {
		s := representative[d.tree.Original(int32(i))]
		d.site[i] = s
		d.cell[s] = int32(i)
	}
	for i, f := range first {
		if f < 0 {
			d.cell[i] = -1
			continue
		}
		d.cell[i] = d.cell[f]
		d.count[d.cell[f]]++
	}
}

// enclose sets the bounds of the places and takes those of the solid over.
func (d *Diagram) enclose(places []Vec) {
	if len(places) > 0 {
		lo, hi := places[0], places[0]
		for _, p := range places[1:] {
			lo = Vec{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
			hi = Vec{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
		}
		d.facts.Lo, d.facts.Hi = lo, hi
	}
	if d.solid != nil {
		d.lo, d.hi = d.solid.Bounds()
		d.label()
		d.facts.Volume = d.solid.Volume()
	}
}

// label sets the labels of the sides of the bounding box: those of the walls that
// lie in them. It also finds out whether the solid is its own bounding box.
func (d *Diagram) label() {
	sides := [6]Vec{{X: -1}, {X: 1}, {Y: -1}, {Y: 1}, {Z: -1}, {Z: 1}}
	planes := d.solid.Planes()
	found := 0
	for i, side := range sides {
		// No wall lies in a side that the solid meets in an edge or a corner only;
		// the cut by the walls leaves no face of it, but a label is needed until then.
		d.labels[i] = polyhedron.Wall(int32(len(planes) + i))
		for _, p := range planes {
			if p.N == side {
				d.labels[i] = polyhedron.Wall(p.Wall)
				found++
			}
		}
	}
	d.convex = planes != nil
	d.isBox = found == 6 && len(planes) == 6
}

// Key identifies the diagram by its content: sites in their order, solid and
// tolerance.
func (d *Diagram) Key() [16]byte { return d.key }

// Facts are what can be said without computing a cell. Its slices are shared and
// not to be written to.
func (d *Diagram) Facts() Facts { return d.facts }

// Len is the number of sites given to New.
func (d *Diagram) Len() int { return len(d.cell) }

// Solid is the solid that closes the partition, nil without one.
func (d *Diagram) Solid() solid.Solid { return d.solid }

// Nearest is the site nearest to p among those that take part, the
// representative of its group, and the distance; -1 and +Inf if none takes part.
// Sites equally near are told apart by their coordinates alone. With stretched
// distances it is the site nearest in these; the distance is the true one.
func (d *Diagram) Nearest(p Vec) (site int32, distance float64) {
	i, d2 := d.tree.Nearest(d.local(p))
	if i < 0 {
		return -1, math.Inf(1)
	}
	if d.stretched {
		return d.site[i], length(sub(d.places[i], p))
	}
	return d.site[i], math.Sqrt(d2)
}
