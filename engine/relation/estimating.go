package relation

import (
	"context"
	"math"
	"slices"
	"strings"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/field"
)

// Estimating are the clauses of relations that say what the sites let one expect
// elsewhere: METHOD, AT, ABOVE or BELOW, THRESHOLDS, STEP and the ends of a transect.
type Estimating struct {
	Method     field.Options
	MethodText string // as in notes: "SIBSON", "IDW(2)"

	At [3]int // columns x, y, z of the points, which are Beside[0]

	Below      bool
	Limits     []float64 // as given, that of ABOVE or BELOW first
	Thresholds []float64 // of THRESHOLDS alone

	Step     float64
	From, To voronoi.Vec
}

// MethodName is how the language writes a method.
func MethodName(m field.Method) string {
	switch m {
	case field.Sibson:
		return "SIBSON"
	case field.Laplace:
		return "LAPLACE"
	case field.Linear:
		return "LINEAR"
	case field.Nearest:
		return "NEAREST"
	}
	return "IDW"
}

// estimated reports whether an attribute is one that can be estimated: a number that is
// neither identifier nor position nor FOR EACH.
func (b *Bound) estimated(i int) bool { return b.averaged(i) }

// Attributes are the columns of the input that can be estimated.
func (b *Bound) Attributes() []int {
	var list []int
	for i := range b.Input {
		if b.estimated(i) {
			list = append(list, i)
		}
	}
	return list
}

// readings are the values of one attribute at the places of a part: of several rows in
// one place, their mean.
type readings struct {
	value []float64 // by site of the part
	count []int32   // rows of the site that have a value
	n     int       // sites with a value
	rows  int       // rows without one
}

// readingsOf gathers an attribute. The mean of several rows is taken in the order of
// their identifiers.
func (s *sites) readingsOf(p *Part, attribute int) *readings {
	r := &readings{value: make([]float64, len(p.Sites)), count: make([]int32, len(p.Sites))}
	v := &s.input.Cols[attribute]
	for k, row := range p.Rows {
		if v.IsNull(int(row)) {
			r.rows++
			continue
		}
		site := p.Site[k]
		r.value[site] += numberAt(v, int(row))
		r.count[site]++
	}
	for site, n := range r.count {
		if n > 0 {
			r.n++
		}
		if n > 1 {
			r.value[site] /= float64(n)
		}
	}
	return r
}

func numberAt(v *column.Vector, row int) float64 {
	if v.Type == column.Integer {
		return float64(v.I[row])
	}
	return v.F[row]
}

// speaking is the diagram of those sites of a part that have a value of an attribute:
// a site without a reading must not take space from those that have one.
type speaking struct {
	handle *diagram.Handle // nil: there is none
	field  *field.Field
	sites  []int32 // the part's site of each of the diagram; nil: the same
}

// site is the part's number of a site of the diagram.
func (s *speaking) site(i int32) int32 {
	if s.sites == nil {
		return i
	}
	return s.sites[i]
}

// number is the diagram's number of a site of the part, -1 where it has none.
func (s *speaking) number(site int32) int32 {
	if s.sites == nil {
		return site
	}
	if i, ok := slices.BinarySearch(s.sites, site); ok {
		return int32(i)
	}
	return -1
}

// speakers gives each pattern of missing values its diagram, once.
type speakers struct {
	s      *sites
	p      *Part
	all    *diagram.Handle
	kept   map[string]*speaking
	places int // that each will be asked about
}

func (s *sites) speakers(p *Part, all *diagram.Handle, places int) *speakers {
	return &speakers{s, p, all, map[string]*speaking{}, places}
}

// of is the diagram of the sites for which has is true.
func (x *speakers) of(ctx context.Context, has func(site int32) bool) (*speaking, error) {
	var key strings.Builder
	var list []int32
	word := byte(0)
	for site := range int32(len(x.p.Sites)) {
		if has(site) {
			list = append(list, site)
			word |= 1 << (site & 7)
		}
		if site&7 == 7 {
			key.WriteByte(word)
			word = 0
		}
	}
	key.WriteByte(word)
	if got := x.kept[key.String()]; got != nil {
		return got, nil
	}
	got := &speaking{}
	if err := x.open(ctx, got, list); err != nil {
		return nil, err
	}
	x.kept[key.String()] = got
	return got, nil
}

func (x *speakers) open(ctx context.Context, to *speaking, list []int32) error {
	switch {
	case len(list) == len(x.p.Sites):
		to.handle = x.all
	case len(list) == 0:
		return nil
	default:
		places := make([]voronoi.Vec, len(list))
		for i, site := range list {
			places[i] = x.p.Sites[site]
		}
		h, err := x.s.env.Diagrams.Get(ctx, places, x.s.options(x.p))
		if err != nil {
			return x.s.refused(err, x.p)
		}
		if h.Facts().Inside == 0 {
			return nil // those with a value all lie outside the solid
		}
		to.handle, to.sites = h, list
	}
	f, err := x.s.fieldOf(ctx, x.p, to.handle, x.s.b.Clauses.Method, x.places)
	to.field = f
	return err
}

// fieldOf is the field over a diagram of a part, for so many places.
func (s *sites) fieldOf(ctx context.Context, p *Part, h *diagram.Handle, o field.Options, places int) (*field.Field, error) {
	f, err := h.Field(ctx, s.b.Clauses.Tolerance, o, places, s.progress())
	if err != nil {
		return nil, s.tooLarge(err, p)
	}
	return f, nil
}

// tooLarge words the errors of a tetrahedralisation.
func (s *sites) tooLarge(err error, p *Part) error {
	return s.refused(err, p)
}

// reached counts the places that got no estimate, by the reason. Goroutines count at
// the same time.
type reached struct {
	places                   atomic.Int64
	hull, solid, alone, flat atomic.Int64
	nowhere                  int // points without a position
	vacant                   int // points in a zone without a site
	silent                   map[string]int
}

// has tells whether there is an estimate at a place, and counts those without.
func (r *reached) has(at field.Place) bool {
	r.places.Add(1)
	switch at {
	case field.OutsideHull:
		r.hull.Add(1)
	case field.OutsideSolid:
		r.solid.Add(1)
	case field.Alone:
		r.alone.Add(1)
	case field.Flat:
		r.flat.Add(1)
	default:
		return true
	}
	return false
}

// tell says what the estimates rest on and where there are none; of is what the places
// are called ("point", "site").
func (r *reached) tell(s *sites, of string) {
	b, add := s.b, func(format string, args ...any) { s.env.Notes.Add(note.Note, note.Cells, format, args...) }
	c := &b.Clauses
	n := func(x *atomic.Int64) int { return int(x.Load()) }
	natural := c.Method.Method == field.Sibson || c.Method.Method == field.Laplace
	if natural && b.Closed() && n(&r.places) > n(&r.solid)+n(&r.alone) {
		add("METHOD %s in %s uses cells that end at its walls, as if nothing passed through them: it is defined everywhere in it, and a field that rises evenly is flattened near a wall",
			c.MethodText, c.SolidName)
	}
	if c.Method.Method == field.Distance {
		near := c.Method.Near
		if near <= 0 {
			near = field.UsualNear
		}
		add("METHOD %s weighs the %d nearest sites; it reproduces no even rise and follows crowded sites", c.MethodText, near)
	}
	if k := n(&r.hull); k > 0 {
		way := "METHOD NEAREST goes on there"
		if !b.Closed() && natural {
			way = "WITHIN a solid, or METHOD NEAREST, goes on there"
		}
		if of == "site" {
			add("%s at the hull of %s %s outside that of the others: the estimate is NULL (METHOD %s; %s)", count(k, of), b.Name, verb(k, "lies", "lie"), c.MethodText, way)
		} else {
			add("%s %s outside the hull of the sites of %s: the estimates are NULL (METHOD %s; %s)", count(k, of), verb(k, "lies", "lie"), b.Name, c.MethodText, way)
		}
	}
	if k := n(&r.solid); k > 0 {
		add("%s %s outside %s: the estimates are NULL", count(k, of), verb(k, "lies", "lie"), c.SolidName)
	}
	if k := n(&r.alone); k > 0 {
		add("%s of %s %s no other to be estimated from", count(k, "site"), b.Name, verb(k, "has", "have"))
	}
	if k := n(&r.flat); k > 0 {
		add("the sites of %s lie in one plane: METHOD LINEAR has no tetrahedra there, and %s NULL", b.Name, verb(k, "one estimate is", "the estimates are"))
	}
	if r.vacant > 0 {
		add("%s %s in a zone without a site: the estimates are NULL", count(r.vacant, "point"), verb(r.vacant, "lies", "lie"))
	}
	if r.nowhere > 0 {
		add("%s %s no position and gets no estimate", count(r.nowhere, "point"), verb(r.nowhere, "has", "have"))
	}
}

// missed notes rows without a reading of an attribute.
func (r *reached) missed(s *sites, attribute, rows int) {
	if rows == 0 {
		return
	}
	if r.silent == nil {
		r.silent = map[string]int{}
	}
	name := s.b.Input[attribute].Name
	r.silent[name] = max(r.silent[name], rows)
}

func (r *reached) tellMissed(s *sites) {
	for name, k := range r.silent {
		where := ""
		if len(s.parts) > 1 {
			where = " in a partition"
			if k > 1 {
				where = " at most" + where
			}
		}
		s.env.Notes.Add(note.Note, note.Sites, "%s is missing at %s of %s%s: its estimates rest on the others alone, and the space is theirs",
			name, count(k, "site"), s.b.Name, where)
	}
}

// notInfinite refuses a reading that is infinite: nothing can be estimated from it.
func (s *sites) notInfinite(p *Part, attribute int) error {
	v := &s.input.Cols[attribute]
	if v.Type != column.Real {
		return nil
	}
	for _, row := range p.Rows {
		if !v.IsNull(int(row)) && math.IsInf(v.F[row], 0) {
			return problem.New("not-finite", s.b.Place, "%s of site %s of %s is %s: nothing can be estimated from it", s.b.Input[attribute].Name,
				idText(s.order.id, int(row)), s.b.Name, column.FormatReal(v.F[row])).
				WithHint("leave it out with OF (SELECT … WHERE …), or make it NULL")
		}
	}
	return nil
}
