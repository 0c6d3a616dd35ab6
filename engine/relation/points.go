package relation

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/lang"
	"nearcell/voronoi"
)

// What ESTIMATES and WEIGHTS share: rows of points beside the sites.

// pointLayout puts the columns of FOR EACH first, then those of the points, then more.
// A point's column that has the name of one of the others is read as own_<name>, as a
// site's is.
func (b *Bound) pointLayout(more []Column) []Column {
	columns := make([]Column, 0, len(b.Clauses.Each)+len(more))
	own := b.ownColumns(nil)
	for _, i := range b.Clauses.Each {
		columns = append(columns, own[i])
	}
	taken := map[string]bool{}
	for _, c := range slices.Concat(columns, more) {
		taken[lang.Fold(c.Name)] = true
	}
	points := b.Beside[0].Input
	for _, f := range points {
		name := f.Name
		for taken[lang.Fold(name)] {
			name = "own_" + name
		}
		taken[lang.Fold(name)] = true
		f.Name = name
		columns = append(columns, Column{Field: f, Site: -1})
	}
	return append(columns, more...)
}

// points are the rows of AT and their places.
type points struct {
	table   *column.Table
	at      []voronoi.Vec // by row
	missing []bool        // rows without a position; nil: none
	nowhere int           // how many
}

// pointsOf reads the places of the points.
func pointsOf(b *Bound, t *column.Table) *points {
	p := &points{table: t, at: make([]voronoi.Vec, t.N)}
	x, y, z := &t.Cols[b.Clauses.At[0]], &t.Cols[b.Clauses.At[1]], &t.Cols[b.Clauses.At[2]]
	for row := range int32(t.N) {
		if x.IsNull(int(row)) || y.IsNull(int(row)) || z.IsNull(int(row)) {
			p.lose(row)
			continue
		}
		at := voronoi.Vec{X: coordinate(x, row), Y: coordinate(y, row), Z: coordinate(z, row)}
		if !(max(math.Abs(at.X), math.Abs(at.Y), math.Abs(at.Z)) <= 1e150) {
			p.lose(row)
			continue
		}
		p.at[row] = at
	}
	return p
}

func (p *points) lose(row int32) {
	if p.missing == nil {
		p.missing = make([]bool, p.table.N)
	}
	p.missing[row] = true
	p.nowhere++
}

// has tells whether a row has a position.
func (p *points) has(row int32) bool { return p.missing == nil || !p.missing[row] }

// chosen are rows of the points, in their order; nil are all of them.
type chosen []int32

// pointsOfZones divides the points among the zones as sites are: those of each zone,
// then those of none (without a position, too).
func (s *sites) pointsOfZones(p *points) (by []chosen, none chosen) {
	by = make([]chosen, len(s.b.Clauses.Zones))
	for row, at := range p.at {
		z := zonesAt{}
		if p.has(int32(row)) {
			z = s.b.zonesAt(at)
		}
		if len(z.in) == 0 {
			none = append(none, int32(row))
			continue
		}
		by[z.in[0]] = append(by[z.in[0]], int32(row))
	}
	return by, none
}

// visit calls do for each part that has rows to show with the points that lie in it.
// Behind the parts with one value of FOR EACH it calls rest, with the first of them and
// the points in no zone, or in one that has no site.
func (s *sites) visit(p *points, do func(i int, part *Part, of chosen, n int) error, rest func(part *Part, of chosen, vacant int) error) error {
	if len(s.b.Clauses.Zones) == 0 {
		for i, part := range s.parts {
			if !s.wanted(part) {
				continue
			}
			if err := do(i, part, nil, p.table.N); err != nil {
				return err
			}
		}
		return nil
	}
	by, none := s.pointsOfZones(p)
	for lo := 0; lo < len(s.parts); {
		hi := lo + 1
		for hi < len(s.parts) && s.order.samePart(s.parts[lo].Rows[0], s.parts[hi].Rows[0]) {
			hi++
		}
		left, wanted := slices.Clone(none), false
		present := make([]bool, len(by))
		for i := lo; i < hi; i++ {
			part := s.parts[i]
			present[part.Zone] = true
			if !s.wanted(part) {
				continue
			}
			wanted = true
			if of := by[part.Zone]; len(of) > 0 {
				if err := do(i, part, of, len(of)); err != nil {
					return err
				}
			}
		}
		vacant := 0
		for zone, of := range by {
			if !present[zone] {
				left = append(left, of...)
				vacant += len(of)
			}
		}
		slices.Sort(left)
		if wanted && len(left) > 0 {
			if err := rest(s.parts[lo], left, vacant); err != nil {
				return err
			}
		}
		lo = hi
	}
	return nil
}
