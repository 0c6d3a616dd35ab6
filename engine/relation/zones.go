package relation

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi/solid"
)

// Zones: each solid of WITHIN (a, b) is divided among the sites in it alone. To a
// relation they are nothing but more parts: it takes Part.Solid for the solid, has its
// diagrams from sites.open, and says batches.now(p.Zone, …) before the rows of a part.
// The column zone then comes by itself.

// roles are the columns behind all others, present where their clause is.
func (b *Bound) roles() []Column {
	var list []Column
	for _, c := range roleColumns() {
		if len(b.named(c.Role)) > 0 {
			list = append(list, c)
		}
	}
	return list
}

// Roles are the columns that say where a row counts, which the rows of a relation have
// with WITHIN (a, b) or MEASURED IN alone.
func (d *Definition) Roles() []Column {
	var list []Column
	for _, c := range roleColumns() {
		if c.Role == ZoneRole && d.Zoned || c.Role == PartRole && d.takes("MEASURED IN") {
			list = append(list, c)
		}
	}
	return list
}

func roleColumns() []Column {
	return []Column{
		{Field: column.Field{Name: "part", Type: column.Text, Meaning: "with MEASURED IN: where this row counts; cells that do not reach into it have no row"}, Site: -1, Role: PartRole},
		{Field: column.Field{Name: "zone", Type: column.Text, Meaning: "with WITHIN (a, b): the one that the site lies in"}, Site: -1, Role: ZoneRole},
	}
}

// named are the regions whose names a role's column has.
func (b *Bound) named(r Role) []Region {
	if r == ZoneRole {
		return b.Clauses.Zones
	}
	return b.Clauses.Measured
}

// regions are the texts of a role's column, by number.
func (b *Bound) regions(r Role) *column.Dict {
	d := &column.Dict{}
	for _, g := range b.named(r) {
		d.Texts = append(d.Texts, g.Name)
	}
	return d
}

// zoned makes parts of rows with one value of FOR EACH each: one, or one for each zone
// with a site in it, in the order of the zones. Rows in no zone are found outside.
func zoned(b *Bound, input *column.Table, together [][]int32, said *findings) ([]*Part, error) {
	said.groups = len(together)
	var parts []*Part
	if len(b.Clauses.Zones) == 0 {
		for i, rows := range together {
			parts = append(parts, &Part{Rows: rows, Zone: -1, Group: int32(i), Solid: b.Clauses.Solid})
		}
		return parts, nil
	}
	said.vacant = make([]int, len(b.Clauses.Zones))
	seen := map[r3.Vec]zonesAt{}
	for i, rows := range together {
		before := len(parts)
		of := make([][]int32, len(b.Clauses.Zones))
		for _, row := range rows {
			at := position(b, input, row)
			z, known := seen[at]
			if !known {
				z = b.zonesAt(at)
				seen[at] = z
			}
			if len(z.in) == 0 {
				said.outside[row] = z.away
				continue
			}
			if len(z.in) > 1 {
				said.shared[row] = z.in
			}
			of[z.in[0]] = append(of[z.in[0]], row)
		}
		for zone, rows := range of {
			if len(rows) == 0 {
				said.vacant[zone]++
				continue
			}
			parts = append(parts, &Part{Rows: rows, Zone: int32(zone), Group: int32(i), Solid: b.Clauses.Zones[zone].Solid})
		}
		if len(parts) == before {
			said.lost = append(said.lost, rows)
		}
	}
	return parts, nil
}

// zonesAt are the zones that a place belongs to within the tolerance, its own first;
// where it belongs to none, the distance to the nearest.
type zonesAt struct {
	in   []int32
	away float64
}

// zonesAt decides which zone a place belongs to: the one that it lies strictly in; else
// the first, in the order of WITHIN, on whose surface it lies exactly; else the nearest
// within the tolerance, of several as near the first.
func (b *Bound) zonesAt(at r3.Vec) zonesAt {
	var z zonesAt
	best := struct {
		rank     int // 0 inside, 1 on the surface, 2 within the tolerance
		distance float64
	}{3, 0}
	for i, zone := range b.Clauses.Zones {
		rank, distance := 3, 0.0
		switch zone.Solid.Side(at, 0) {
		case solid.Inside:
			rank = 0
		case solid.On:
			rank = 1
		default:
			distance = zone.Solid.Distance(at)
			if zone.Solid.Side(at, b.Clauses.Tolerance) != solid.Outside {
				rank = 2
			}
		}
		if i == 0 || distance < z.away {
			z.away = distance
		}
		if rank == 3 {
			continue
		}
		if rank < best.rank || rank == best.rank && distance < best.distance {
			best.rank, best.distance = rank, distance
			z.in = slices.Insert(z.in, 0, int32(i))
			continue
		}
		z.in = append(z.in, int32(i))
	}
	return z
}

// tellZones writes the notes about zones.
func (s *sites) tellZones() {
	f, b := s.said, s.b
	for i, n := range f.vacant {
		z := b.Clauses.Zones[i]
		size := s.volume(z.Solid.Volume())
		switch {
		case n == 0:
		case n == f.groups:
			s.env.Notes.Add(note.Note, note.Sites, "the zone %s has no site of %s: its %s belong to nobody and are in no row", z.Name, b.Name, size)
		default:
			s.env.Notes.Add(note.Note, note.Sites, "the zone %s has no site in %d of %d partitions of %s: there its %s belong to nobody and are in no row",
				z.Name, n, f.groups, b.Name, size)
		}
	}
	s.tellShared()
}

// tellShared names the sites that more than one zone could have.
func (s *sites) tellShared() {
	if len(s.said.shared) == 0 {
		return
	}
	rows := make([]int32, 0, len(s.said.shared))
	for row := range s.said.shared {
		rows = append(rows, row)
	}
	slices.Sort(rows)
	rows = s.order.distinct(rows)
	var names []string
	for _, row := range rows {
		z := s.said.shared[row]
		var others []string
		for _, other := range z[1:] {
			others = append(others, s.b.Clauses.Zones[other].Name)
		}
		names = append(names, fmt.Sprintf("%s to %s, not %s", idText(s.order.id, int(row)), s.b.Clauses.Zones[z[0]].Name, strings.Join(others, " or ")))
	}
	within := ""
	if t := s.b.Clauses.Tolerance; t > 0 {
		within = " or within the tolerance " + s.length(t) + " of it"
	}
	n := len(rows)
	s.env.Notes.Add(note.Note, note.Sites, "%s of %s %s on a wall between zones%s: %s", count(n, "site"), s.b.Name,
		verb(n, "stands", "stand"), within, someOf(names))
}

// allOutsideZones is the error of sites of which none lies in any zone.
func (s *sites) allOutsideZones() error {
	nearest := int32(-1)
	for row, d := range s.said.outside {
		if nearest < 0 || d < s.said.outside[nearest] || d == s.said.outside[nearest] && s.order.byID(row, nearest) < 0 {
			nearest = row
		}
	}
	return problem.New("no-sites", s.b.Place, "no site of %s lies in %s, so their space belongs to nobody", s.b.Name, s.b.Clauses.SolidName).
		WithHint("the nearest is %s, %s outside: do the coordinates and the solids have one origin and one unit?",
			idText(s.order.id, int(nearest)), s.length(s.said.outside[nearest]))
}

// volume writes a volume for messages, to three digits.
func (s *sites) volume(v float64) string {
	digits := 0
	if a := math.Abs(v); a < 100 {
		digits = 2 - int(math.Floor(math.Log10(max(a, 1e-9))))
	}
	text := strconv.FormatFloat(v, 'f', max(0, digits), 64)
	if strings.Contains(text, ".") {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	if u := s.b.Clauses.Unit.Pow(3).String(); u != "" {
		return text + " " + u
	}
	return text
}
