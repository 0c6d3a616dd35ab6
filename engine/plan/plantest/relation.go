package plantest

import (
	"context"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/relation"
	"nearcell/voronoi"
)

// Crowd is a relation without geometry that keeps the manners of one: rows in
// the order of part and identifier, a measure ("volume") that depends on all
// sites of the part whether shown or not (it is their number and a quarter), an
// own column that it may rename. Its rows are its sites.
var Crowd = &relation.Definition{
	Noun:     "CROWD",
	RowIs:    "site",
	Own:      true,
	Computed: []relation.Column{volume, partners},
	Open:     openCrowd,
}

var (
	volume = relation.Column{Field: column.Field{Name: "volume", Type: column.Real}, Site: -1,
		Measures: voronoi.Volume, Extensive: true}
	partners = relation.Column{Field: column.Field{Name: "partners", Type: column.Integer}, Site: -1,
		Measures: voronoi.Neighbours}
)

// Bound is Crowd over sites with the columns of schema: id identifies them and
// each is the FOR EACH column, -1 for none.
func Bound(schema column.Schema, id, position, each int) *relation.Bound {
	b := &relation.Bound{Def: Crowd, Name: "sites", Input: schema, ID: id, X: position, Y: position, Z: position}
	if each >= 0 {
		b.Clauses.Each = []int{each}
	}
	for i, f := range schema {
		if strings.EqualFold(f.Name, "volume") || strings.EqualFold(f.Name, "partners") {
			f.Name = "own_" + f.Name
		}
		b.Columns = append(b.Columns, relation.Column{Field: f, Site: i})
	}
	b.Columns = append(b.Columns, Crowd.Computed...)
	return b
}

type crowdRows struct {
	b     *relation.Bound
	input *column.Table
	r     relation.Request
	rows  []int32
	part  map[string]int // size
}

func openCrowd(b *relation.Bound, _ *relation.Env, input *column.Table, r relation.Request) (relation.Rows, error) {
	c := &crowdRows{b: b, input: input, r: r, part: map[string]int{}}
	for row := range int32(input.N) {
		c.rows = append(c.rows, row)
		c.part[c.partOf(row)]++
	}
	slices.SortStableFunc(c.rows, func(x, y int32) int {
		if p := strings.Compare(c.partOf(x), c.partOf(y)); p != 0 {
			return p
		}
		return strings.Compare(c.text(b.ID, x), c.text(b.ID, y))
	})
	return c, nil
}

func (c *crowdRows) text(col int, row int32) string {
	if c.input.Cols[col].IsNull(int(row)) {
		return "NULL"
	}
	return c.input.Cols[col].Value(int(row)).String()
}

func (c *crowdRows) partOf(row int32) string {
	s := ""
	for _, e := range c.b.Clauses.Each {
		s += c.text(e, row) + "\x00"
	}
	return s
}

func (c *crowdRows) Cost() (voronoi.Cost, error) { return voronoi.Cost{}, nil }

func (c *crowdRows) Run(_ context.Context, emit func(*column.Batch) error) error {
	var shown []int32
	for _, row := range c.rows {
		if c.r.Wanted == nil || column.Bit(c.r.Wanted, int(row)) {
			shown = append(shown, row)
		}
	}
	for lo := 0; lo < len(shown); lo += 100 { // batches need not be full
		part := shown[lo:min(lo+100, len(shown))]
		b := &column.Batch{N: len(part)}
		for i, col := range c.b.Columns {
			b.Cols = append(b.Cols, c.column(i, col, part))
		}
		if err := emit(b); err != nil {
			return err
		}
	}
	return nil
}

func (c *crowdRows) column(i int, col relation.Column, rows []int32) column.Vector {
	if !c.r.Need[i] {
		return column.Vector{Type: column.Null, N: len(rows)}
	}
	if i < len(c.b.Input) {
		return column.Gather(&c.input.Cols[i], rows)
	}
	v := column.New(col.Type, col.Unit, len(rows))
	for k, row := range rows {
		if n := c.part[c.partOf(row)]; col.Type == column.Real {
			v.F[k] = float64(n) + 0.25
		} else {
			v.I[k] = int64(n - 1)
		}
	}
	return v
}
