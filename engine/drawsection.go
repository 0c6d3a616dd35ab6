package engine

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/engine/draw"
	"nearcell/engine/exec"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
	"nearcell/voronoi/section"
)

// mostPanels is how many maps a picture has.
const mostPanels = 12

// sectionMap is a map on its way: what is asked for, the sites, and where to cut.
type sectionMap struct {
	st       *statement
	t        *lang.Draw
	plain    *lang.Relation // what SECTION is made of, as CELLS
	method   *lang.MethodClause
	measured *lang.MeasuredInClause
	each     []lang.Name
	plane    drawnPlane
	limits   []float64

	bound *relation.Bound
	rows  *column.Table // id, x, y, z, value, each …, zone
	zoned bool
	parts []relation.Region // of MEASURED IN
	out   *draw.Section
}

// drawnPlane is a plane and how the page shows it.
type drawnPlane struct {
	section.Plane
	where      string
	right, up  string
	u, v, n    r3.Vec
	from       r3.Vec // where both coordinates are 0
	axis       int    // 0, 1, 2 for x, y, z; -1 for others
	coordinate float64
	at         problem.Place
}

// flat gives the coordinates of a place on the page.
func (p *drawnPlane) flat(q r3.Vec) draw.Point {
	d := r3.Sub(q, p.from)
	return draw.Point{X: dot(d, p.u), Y: dot(d, p.v)}
}

// dot is the product with every term rounded on its own, alike in all builds.
func dot(a, b r3.Vec) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z) }

// sectionPicture is DRAW SECTION and SHOW SECTION.
func (s *Session) sectionPicture(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	m := &sectionMap{st: st, t: t}
	if err := s.readSection(m); err != nil {
		return nil, err
	}
	node, err := s.bindSection(m)
	if err != nil || s.checkOnly {
		return nil, err
	}
	if m.rows, err = exec.Collect(ctx, s.execEnv(st), node); err != nil {
		return nil, err
	}
	if m.rows.N == 0 {
		return nil, problem.New("no-sites", st.at(t.Relation), "%s has no sites: there is nothing to draw", m.bound.Title())
	}
	if err := s.cutSection(ctx, m); err != nil {
		return nil, err
	}
	return m.out, nil
}

// readSection takes the clauses of SECTION apart from those of the partition.
func (s *Session) readSection(m *sectionMap) (err error) {
	r := m.t.Relation
	m.plain = &lang.Relation{At: r.At, Noun: lang.Name{At: r.Noun.At, Text: "CELLS"}, Operand: r.Operand}
	placed := false
	for _, c := range r.Clauses {
		switch c := c.(type) {
		case *lang.AtPlaneClause, *lang.ThroughClause:
			if placed {
				return problem.New("clauses", m.st.at(c), "one plane is enough: AT and THROUGH say the same")
			}
			placed = true
			if m.plane, err = s.planeOf(m.st, c); err != nil {
				return err
			}
		case *lang.MethodClause:
			m.method = c
		case *lang.MeasuredInClause:
			m.measured = c
		case *lang.ForEachClause:
			m.each = c.Names
			m.plain.Clauses = append(m.plain.Clauses, c)
		default:
			m.plain.Clauses = append(m.plain.Clauses, c)
		}
	}
	if !placed {
		return problem.New("needs-clause", m.st.at(r), "SECTION needs a plane").WithHint("AT z = 1.1, or THROUGH (0, 0, 1) NORMAL (0, 1, 1)")
	}
	m.limits, err = s.pictureLimits(m.st, m.t)
	return err
}

// planeOf reads AT and THROUGH.
func (s *Session) planeOf(st *statement, c lang.Clause) (drawnPlane, error) {
	var numbers []float64
	read := func(what string, list ...lang.Expr) error {
		for _, e := range list {
			v, err := s.pictureNumber(st, e, what)
			if err == nil && (math.IsInf(v, 0) || math.Abs(v) > 1e150) {
				err = problem.New("not-finite", st.at(e), "%s is not finite", what)
			}
			if err != nil {
				return err
			}
			numbers = append(numbers, v)
		}
		return nil
	}
	switch c := c.(type) {
	case *lang.AtPlaneClause:
		axis := strings.Index("xyz", lang.Fold(c.Axis.Text))
		if axis < 0 || len(c.Axis.Text) != 1 {
			return drawnPlane{}, problem.New("plane", st.at(&c.Axis), "'%s' is no axis", c.Axis.Text).WithHint("AT x = …, AT y = … or AT z = …")
		}
		if err := read("the place of the plane", c.Value); err != nil {
			return drawnPlane{}, err
		}
		return acrossAxis(axis, numbers[0], st.at(c)), nil
	case *lang.ThroughClause:
		if err := read("the place of the plane", c.Point.X, c.Point.Y, c.Point.Z); err != nil {
			return drawnPlane{}, err
		}
		if err := read("the normal", c.Normal.X, c.Normal.Y, c.Normal.Z); err != nil {
			return drawnPlane{}, err
		}
	}
	p, n := numbers[:3], numbers[3:]
	for axis := range n {
		if n[axis] != 0 && n[(axis+1)%3] == 0 && n[(axis+2)%3] == 0 {
			return acrossAxis(axis, p[axis], st.at(c)), nil
		}
	}
	normal := r3.Vec{X: n[0], Y: n[1], Z: n[2]}
	if normal == (r3.Vec{}) {
		return drawnPlane{}, problem.New("plane", st.at(c), "a normal of length zero has no direction").WithHint("NORMAL (0, 0, 1) is a level plane")
	}
	at := r3.Vec{X: p[0], Y: p[1], Z: p[2]}
	normal = r3.Unit(normal)
	u := r3.Unit(r3.Vec{X: -normal.Y, Y: normal.X})
	return drawnPlane{Plane: section.Plane{At: at, Normal: normal}, u: u, v: r3.Cross(normal, u), n: normal, from: at, axis: -1, at: st.at(c),
		where: fmt.Sprintf("through (%s, %s, %s), normal (%s, %s, %s)", draw.Number(p[0]), draw.Number(p[1]), draw.Number(p[2]),
			draw.Number(n[0]), draw.Number(n[1]), draw.Number(n[2])),
		right: "level, from the point", up: "up the plane, from the point"}, nil
}

// acrossAxis is a plane across an axis, shown in the coordinates of the other two.
func acrossAxis(axis int, value float64, at problem.Place) drawnPlane {
	unit := [3]r3.Vec{{X: 1}, {Y: 1}, {Z: 1}}
	names := "xyz"
	u, v := [3]int{1, 0, 0}[axis], [3]int{2, 2, 1}[axis]
	return drawnPlane{Plane: section.Across(axis, value), where: "at " + names[axis:axis+1] + " = " + draw.Number(value),
		u: unit[u], v: unit[v], n: unit[axis], right: names[u : u+1], up: names[v : v+1], axis: axis, coordinate: value, at: at}
}

// bindSection binds the query that gives the sites with their values.
func (s *Session) bindSection(m *sectionMap) (plan.Node, error) {
	names := append([]lang.Name{{Text: "id"}, {Text: "x"}, {Text: "y"}, {Text: "z"}, m.t.Shaded}, m.each...)
	source := &lang.RelationSource{At: m.t.Relation.At, Relation: m.plain}
	node, err := s.prepare(m.st, selecting(m.t, source, names...))
	if err != nil {
		return nil, err
	}
	m.bound = boundIn(node)
	if m.bound == nil {
		return nil, problem.New("failed", m.st.at(m.t), "the plan of a section has no partition")
	}
	if err := numeric(m.st, m.t.Shaded, node.Schema()[4]); err != nil {
		return nil, err
	}
	if !m.bound.Closed() {
		return nil, problem.New("no-solid", m.st.at(m.t.Relation), "a picture of a section needs a solid: the cells of %s have no end", m.bound.Name).
			WithHint("WITHIN solid, in DRAW or in CREATE CAMPAIGN")
	}
	if m.measured != nil {
		if err := s.bindParts(m, names); err != nil {
			return nil, err
		}
	}
	if m.zoned = len(m.bound.Clauses.Zones) > 0; m.zoned {
		if node, err = s.prepare(m.st, selecting(m.t, source, append(names, lang.Name{Text: "zone"})...)); err != nil {
			return nil, err
		}
	}
	return node, nil
}

// boundIn is the relation that a plan reads its rows from.
func boundIn(n plan.Node) *relation.Bound {
	for n != nil {
		if r, ok := n.(*plan.Relation); ok {
			return r.Bound
		}
		inputs := n.Inputs()
		if len(inputs) != 1 {
			return nil
		}
		n = inputs[0]
	}
	return nil
}

// group is the rows of one value of FOR EACH.
type group struct {
	heading string
	rows    []int
}

// groups are the rows by the values of FOR EACH, in their order.
func (m *sectionMap) groups() []group {
	var list []group
	for i := range m.rows.N {
		var parts []string
		for k, n := range m.each {
			parts = append(parts, n.Text+" = "+m.rows.Cols[5+k].Value(i).String())
		}
		heading := strings.Join(parts, ", ")
		if len(list) == 0 || list[len(list)-1].heading != heading {
			list = append(list, group{heading: heading})
		}
		last := &list[len(list)-1]
		last.rows = append(last.rows, i)
	}
	return list
}

// spread are n of a list, the first and the last among them, evenly between.
func spread[T any](list []T, n int) []T {
	if len(list) <= n {
		return list
	}
	out := make([]T, n)
	for i := range out {
		out[i] = list[i*(len(list)-1)/(n-1)]
	}
	return out
}

// cutSection makes the panels.
func (s *Session) cutSection(ctx context.Context, m *sectionMap) error {
	b := m.bound
	length := ""
	if b.Clauses.Unit != nil {
		length = b.Clauses.Unit.String()
	}
	field := m.rows.Schema[4]
	m.out = &draw.Section{Title: "Section of " + b.Name, Where: m.plane.where, Value: field.Name, Unit: field.Unit.String(),
		Length: length, AxisX: m.plane.right, AxisY: m.plane.up, Limits: m.limits}
	if b.Name == "(query)" {
		m.out.Title = "Section"
	}
	if m.plane.axis >= 0 {
		m.out.Where = draw.WithUnit(m.plane.where, length)
	}
	m.out.Near = m.near()
	for _, r := range m.parts {
		m.out.Measured = append(m.out.Measured, r.Name)
	}
	groups := m.groups()
	if kept := spread(groups, mostPanels); len(kept) < len(groups) {
		s.noted(m.st, &m.out.Notes, "%d of the %d values of %s are drawn, evenly spread from the first to the last", len(kept), len(groups), m.each[0].Text)
		if m.method != nil {
			return problem.New("clauses", m.st.at(m.method), "METHOD draws up to %d values of FOR EACH, and there are %d", mostPanels, len(groups)).
				WithHint("choose some with WHERE in OF (query)")
		}
		groups = kept
	}
	for _, g := range groups {
		if err := s.cutPanel(ctx, m, g); err != nil {
			return err
		}
	}
	if m.method != nil {
		return s.estimateSection(ctx, m, groups)
	}
	return nil
}

// solids are where the section lies: the solid or the zones.
func (m *sectionMap) solids() []relation.Region {
	if zones := m.bound.Clauses.Zones; len(zones) > 0 {
		return zones
	}
	return []relation.Region{{Name: m.bound.Clauses.SolidName, Solid: m.bound.Clauses.Solid}}
}

// extent is how far the solids reach along the plane's normal, from the plane.
func (m *sectionMap) extent() (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, region := range m.solids() {
		a, b := region.Solid.Bounds()
		for k := range 8 {
			corner := a
			if k&1 != 0 {
				corner.X = b.X
			}
			if k&2 != 0 {
				corner.Y = b.Y
			}
			if k&4 != 0 {
				corner.Z = b.Z
			}
			d := dot(r3.Sub(corner, m.plane.At), m.plane.n)
			lo, hi = math.Min(lo, d), math.Max(hi, d)
		}
	}
	return lo, hi
}

// near is how far from the plane sites are marked: at most a sixth of the solid's
// extent across it, as a round number.
func (m *sectionMap) near() float64 {
	lo, hi := m.extent()
	return draw.Round((hi - lo) / 6)
}

// outside is the problem of a plane that misses the solid.
func (m *sectionMap) outside() error {
	lo, hi := m.extent()
	p := problem.New("plane", m.plane.at, "the plane %s misses the solid %s", m.plane.where, m.solids()[0].Name)
	if m.plane.axis >= 0 {
		return p.WithHint("it lies between %s and %s", draw.Number(lo+m.plane.coordinate), draw.Number(hi+m.plane.coordinate))
	}
	return p.WithHint("along the normal the solid lies between %s and %s from the point", draw.Number(lo), draw.Number(hi))
}

// cutPanel cuts the partition of one value of FOR EACH.
func (s *Session) cutPanel(ctx context.Context, m *sectionMap, g group) error {
	p := draw.Panel{Heading: g.heading}
	for _, region := range m.solids() {
		rows := g.rows
		if m.zoned {
			rows = nil
			zone := &m.rows.Cols[len(m.rows.Cols)-1]
			for _, i := range g.rows {
				if zone.Text(i) == region.Name {
					rows = append(rows, i)
				}
			}
		}
		if err := s.cutRegion(ctx, m, &p, region, rows); err != nil {
			return err
		}
	}
	if len(p.Walls) == 0 {
		return m.outside()
	}
	m.out.Panels = append(m.out.Panels, p)
	return nil
}

// cutRegion cuts the partition of a solid among its sites.
func (s *Session) cutRegion(ctx context.Context, m *sectionMap, p *draw.Panel, region relation.Region, rows []int) error {
	if m.parts != nil {
		if err := m.outlineParts(ctx, p, region); err != nil {
			return err
		}
	}
	if len(rows) == 0 {
		return m.emptyZone(ctx, p, region)
	}
	sites := make([]voronoi.Vec, len(rows))
	for k, i := range rows {
		sites[k] = r3.Vec{X: number(&m.rows.Cols[1], i), Y: number(&m.rows.Cols[2], i), Z: number(&m.rows.Cols[3], i)}
	}
	c := m.bound.Clauses
	d, err := voronoi.New(sites, voronoi.Options{Solid: region.Solid, Tolerance: c.Tolerance, Stretch: c.Stretch, Threads: s.o.Threads, Memory: s.o.Memory})
	if err != nil {
		return err
	}
	cut, err := section.Cut(ctx, d, m.plane.Plane, nil, section.Options{Threads: s.o.Threads, Outlines: true, Within: m.partSolids()})
	if err != nil {
		return m.cutProblem(err, region)
	}
	s.planeNotes(m, cut, region)
	for _, w := range cut.Space {
		p.Walls = append(p.Walls, m.flatten(w))
	}
	m.cells(p, cut, rows, sites)
	for k, i := range rows {
		if math.Abs(dot(r3.Sub(sites[k], m.plane.At), m.plane.n)) <= m.out.Near {
			p.Sites = append(p.Sites, draw.Site{ID: m.rows.Cols[0].Value(i).String(), At: m.plane.flat(sites[k])})
		}
	}
	return nil
}

// cells takes the pieces over. Sites in one place share theirs: it is shaded by their
// mean, and counts for each of them in equal parts.
func (m *sectionMap) cells(p *draw.Panel, cut *section.Section, rows []int, sites []voronoi.Vec) {
	together := map[voronoi.Vec][]int{}
	for k, at := range sites {
		at = r3.Vec{X: at.X + 0, Y: at.Y + 0, Z: at.Z + 0} // -0 is 0
		together[at] = append(together[at], rows[k])
	}
	value := &m.rows.Cols[4]
	for _, piece := range cut.Pieces {
		at := sites[piece.Site]
		group := together[r3.Vec{X: at.X + 0, Y: at.Y + 0, Z: at.Z + 0}]
		c := draw.Cell{Area: piece.Area, Missing: true}
		part := max(0, int(piece.Part))
		if piece.Part >= 0 {
			c.In = m.parts[part].Name
		}
		var ids []string
		sum, n := 0.0, 0
		for _, i := range group {
			ids = append(ids, m.rows.Cols[0].Value(i).String())
			share := draw.Part{Area: piece.Area / float64(len(group)), Missing: value.IsNull(i), In: part}
			if !share.Missing {
				share.Value = number(value, i)
				sum += share.Value
				n++
			}
			p.Parts = append(p.Parts, share)
		}
		slices.Sort(ids)
		c.ID = strings.Join(ids, ", ")
		if n > 0 {
			c.Value, c.Missing = sum/float64(n), false
		}
		for _, polygon := range piece.Polygons {
			c.Pieces = append(c.Pieces, m.flatten(polygon))
		}
		p.Cells = append(p.Cells, c)
	}
}

// flatten brings a polygon onto the page's plane, its outer ring counter-clockwise.
func (m *sectionMap) flatten(polygon section.Polygon) draw.Polygon {
	out := make(draw.Polygon, len(polygon))
	for i, ring := range polygon {
		for _, q := range ring {
			out[i] = append(out[i], m.plane.flat(q))
		}
	}
	if out[:1].Area() < 0 {
		for i := range out {
			slices.Reverse(out[i])
		}
	}
	return out
}

// number is a value of a numeric column.
func number(v *column.Vector, i int) float64 {
	if v.Type == column.Integer {
		return float64(v.I[i])
	}
	return v.F[i]
}
