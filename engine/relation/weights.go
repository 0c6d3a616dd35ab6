package relation

import (
	"context"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/voronoi"
	"nearcell/voronoi/field"
)

// weights is WEIGHTS OF c AT points: one row for each point and each site with a share
// in its estimates, so that an estimate can be audited.
var weights = &Definition{
	Noun:    "WEIGHTS",
	RowIs:   "point and neighbour",
	Meaning: "the sites that an estimate rests on, each with its weight; those of a point add up to 1",
	Example: `SELECT neighbour, weight
FROM WEIGHTS OF hall AT (SELECT 5 AS x, 5 AS y, 1 AS z) ORDER BY weight DESC;`,
	Clauses: []string{"AT", "METHOD", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openWeights,
	layout:  layoutWeights,
}

// The computed columns of WEIGHTS behind those of FOR EACH and of the points.
const (
	weightNeighbour = iota
	weightWeight
	weightDistance
)

func init() {
	weights.Computed = []Column{
		weightNeighbour: measure("neighbour", column.Text, 0, 0, "identifier of a site with a share in the estimates at the point"),
		weightWeight:    measure("weight", column.Real, 0, 0, "its share; those of a point add up to 1"),
		weightDistance:  measure("distance", column.Real, 1, 0, "distance from the point to the site"),
	}
}

func layoutWeights(b *Bound) []Column {
	computed := b.computed()
	id := b.Input[b.ID]
	computed[weightNeighbour].Type, computed[weightNeighbour].Unit = id.Type, id.Unit
	return b.pointLayout(computed)
}

type weightRows struct {
	*sites
	points  *points
	from    int // columns of FOR EACH and of the points
	reached reached
}

func openWeights(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &weightRows{sites: s, points: pointsOf(b, r.Beside[0]), from: len(b.Clauses.Each) + len(b.Beside[0].Input)}, nil
}

func (w *weightRows) Cost() (voronoi.Cost, error) {
	return voronoi.Cost{OneByOne: true, Cells: w.points.table.N,
		Seconds: float64(w.points.table.N) * secondsPerNatural / float64(max(1, w.env.Threads))}, nil
}

// Forecast takes each point to have the usual number of neighbours.
func (w *weightRows) Forecast(context.Context) (*Forecast, error) {
	c, err := w.Cost()
	f := &Forecast{Cost: c, Parts: float64(len(w.parts)), Diagrams: float64(len(w.parts)), Counted: true,
		Measures: []string{w.b.Clauses.MethodText + " weights"}}
	many := typicalContacts
	switch w.b.Clauses.Method.Method {
	case field.Linear:
		many = 4
	case field.Nearest:
		many = 1
	case field.Distance:
		many = field.UsualNear
	}
	for _, p := range w.parts {
		f.Rows += float64(w.points.table.N) * min(many, float64(len(p.Sites)))
	}
	return f, err
}

// weightBatch is the batch at hand: for each row its point and the row of the input that
// the neighbour stands for.
type weightBatch struct {
	*batches
	points, rows []int32
	each         []int32
}

func (w *weightRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer func() {
		w.sites.tell()
		w.reached.nowhere = w.points.nowhere
		w.reached.tell(w.sites, "point")
	}()
	out := &weightBatch{batches: newBatches(w.b, w.r.Need, w.from, emit)}
	out.columns[w.from+weightNeighbour] = column.Vector{} // gathered from the input
	err := w.visit(w.points, func(i int, p *Part, of chosen, n int) error {
		defer w.partDone(i)
		return w.part(ctx, p, of, n, out)
	}, func(_ *Part, of chosen, vacant int) error {
		w.reached.vacant += vacant
		w.reached.solid.Add(int64(len(of) - vacant - w.points.nowhere))
		return nil
	})
	if err != nil {
		return err
	}
	return w.flush(out)
}

func (w *weightRows) part(ctx context.Context, p *Part, of chosen, n int, out *weightBatch) error {
	if n == 0 {
		return nil
	}
	h, err := w.open(ctx, p)
	if err != nil {
		return err
	}
	f, err := w.fieldOf(ctx, p, h, w.b.Clauses.Method, n)
	if err != nil {
		return err
	}
	rowsOf := rowsBySite(p)
	out.now(p.Zone, noPart)
	for lo := 0; lo < n; lo += blockPoints {
		var places []voronoi.Vec
		var rows []int32
		for i := lo; i < min(n, lo+blockPoints); i++ {
			row := int32(i)
			if of != nil {
				row = of[i]
			}
			if w.points.has(row) {
				places, rows = append(places, w.points.at[row]), append(rows, row)
			}
		}
		found := make([][]field.Weight, len(places))
		err := f.EachAt(ctx, places, field.Run{Threads: w.env.Threads, Progress: w.progress()}, func(i int, at field.Place, weights []field.Weight) error {
			if w.reached.has(at) {
				found[i] = append(found[i], weights...)
			}
			return nil
		})
		if err != nil {
			return w.refused(err, p)
		}
		for i, list := range found {
			for _, x := range list {
				if err := w.put(p, rows[i], places[i], x, rowsOf, out); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// rowsBySite lists the rows (as indices into p.Rows) of each site.
func rowsBySite(p *Part) [][]int32 {
	rows := make([][]int32, len(p.Sites))
	for k, s := range p.Site {
		rows[s] = append(rows[s], int32(k))
	}
	return rows
}

// put writes the rows of one point and one place: sites that share it share the weight.
func (w *weightRows) put(p *Part, point int32, at voronoi.Vec, x field.Weight, rowsOf [][]int32, out *weightBatch) error {
	ks := rowsOf[x.Site]
	site := p.Sites[x.Site]
	d := voronoi.Vec{X: site.X - at.X, Y: site.Y - at.Y, Z: site.Z - at.Z}
	for _, k := range ks {
		out.points = append(out.points, point)
		out.rows = append(out.rows, p.Rows[k])
		out.each = append(out.each, p.Rows[0])
		number(&out.columns[w.from+weightWeight], out.n, x.Weight/float64(len(ks)))
		number(&out.columns[w.from+weightDistance], out.n, r3.Norm(d))
		out.n++
		if out.room() == 0 {
			if err := w.flush(out); err != nil {
				return err
			}
		}
	}
	return nil
}

func (w *weightRows) flush(out *weightBatch) error {
	each := len(w.b.Clauses.Each)
	err := out.flush(func(i int) (column.Vector, bool) {
		switch {
		case !needed(w.r.Need, i):
			return column.Vector{}, false
		case i < each:
			return column.Gather(&w.input.Cols[w.b.Clauses.Each[i]], out.each), true
		case i < w.from:
			return column.Gather(&w.points.table.Cols[i-each], out.points), true
		case i == w.from+weightNeighbour:
			return column.Gather(&w.input.Cols[w.b.ID], out.rows), true
		}
		return column.Vector{}, false
	})
	out.points, out.rows, out.each = out.points[:0], out.rows[:0], out.each[:0]
	return err
}
