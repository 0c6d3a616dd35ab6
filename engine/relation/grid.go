package relation

import (
	"context"
	"math"
	"strconv"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// grid is GRID OF solid STEP s: one row for each point of a regular grid in the solid.
var grid = &Definition{
	Noun:    "GRID",
	RowIs:   "grid point in the solid",
	Over:    OverNothing,
	Meaning: "the middles of cubes with the edge STEP, counted from the lowest corner of the solid's bounding box, that lie in the solid",
	Example: `SELECT COUNT(*) FROM GRID OF air STEP 0.5;`,
	Clauses: []string{"STEP"},
	Open:    openGrid,
	layout:  func(b *Bound) []Column { return b.computed() },
}

// transect is TRANSECT BETWEEN a AND b STEP s: one row for each point along a line.
var transect = &Definition{
	Noun:    "TRANSECT",
	RowIs:   "point along the line",
	Over:    OverNothing,
	Meaning: "points along a straight line, one each STEP and one at its end",
	Example: `SELECT s, temp FROM ESTIMATES OF hall AT (TRANSECT BETWEEN (0, 5, 1) AND (30, 5, 1) STEP 5);`,
	Clauses: []string{"STEP"},
	Open:    openTransect,
	layout:  func(b *Bound) []Column { return b.computed() },
}

func init() {
	grid.Computed = []Column{
		measure("x", column.Real, 1, 0, "middle of a cube of the grid, x"),
		measure("y", column.Real, 1, 0, "middle of a cube of the grid, y"),
		measure("z", column.Real, 1, 0, "middle of a cube of the grid, z"),
	}
	transect.Computed = []Column{
		measure("x", column.Real, 1, 0, "point of the line, x"),
		measure("y", column.Real, 1, 0, "point of the line, y"),
		measure("z", column.Real, 1, 0, "point of the line, z"),
		measure("s", column.Real, 1, 0, "distance from the beginning of the line"),
	}
}

// mostPoints is the largest grid or transect that is made.
const mostPoints = 1 << 31

type gridRows struct {
	b   *Bound
	env *Env
	r   Request
	lo  voronoi.Vec
	n   [3]int64 // cubes along each axis
}

func openGrid(b *Bound, env *Env, _ *column.Table, r Request) (Rows, error) {
	g := &gridRows{b: b, env: env, r: r}
	lo, hi := b.Clauses.Solid.Bounds()
	g.lo = lo
	total := 1.0
	for k, extent := range [3]float64{hi.X - lo.X, hi.Y - lo.Y, hi.Z - lo.Z} {
		// The middle of the last cube lies in the box: (n - 1/2) steps, to within
		// rounding.
		n := max(1, math.Floor(extent/b.Clauses.Step+0.5+1e-9))
		total *= n
		if !(total <= mostPoints) {
			return nil, problem.New("too-large", b.Place, "GRID OF %s STEP %s has more than %d points", b.Name,
				column.FormatReal(b.Clauses.Step), mostPoints).WithHint("take a larger STEP")
		}
		g.n[k] = int64(n)
	}
	return g, nil
}

func (g *gridRows) cubes() int64 { return g.n[0] * g.n[1] * g.n[2] }

func (g *gridRows) Cost() (voronoi.Cost, error) { return voronoi.Cost{OneByOne: true}, nil }

// Forecast takes the solid's share of the cubes of its box.
func (g *gridRows) Forecast(context.Context) (*Forecast, error) {
	lo, hi := g.b.Clauses.Solid.Bounds()
	share := g.b.Clauses.Solid.Volume() / ((hi.X - lo.X) * (hi.Y - lo.Y) * (hi.Z - lo.Z))
	return &Forecast{Rows: math.Round(float64(g.cubes()) * share), Parts: 1, Diagrams: 1, Counted: true, RowsExact: g.isBox()}, nil
}

func (g *gridRows) isBox() bool { return g.b.Clauses.Solid.Facts().Kind == "box" }

func (g *gridRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	out := newBatches(g.b, g.r.Need, 0, emit)
	flush := func() error { return out.flush(func(int) (column.Vector, bool) { return column.Vector{}, false }) }
	step, body := g.b.Clauses.Step, g.b.Clauses.Solid
	// The middle is placed by a whole number of half steps, so that one product is
	// rounded once.
	at := func(lo float64, i int64) float64 { return lo + float64(float64(2*i+1)*(step/2)) }
	points := int64(0)
	box := g.isBox()
	for i := range g.n[0] {
		for j := range g.n[1] {
			if err := ctx.Err(); err != nil {
				return err
			}
			for k := range g.n[2] {
				p := voronoi.Vec{X: at(g.lo.X, i), Y: at(g.lo.Y, j), Z: at(g.lo.Z, k)}
				if (!box || i == g.n[0]-1 || j == g.n[1]-1 || k == g.n[2]-1) && body.Side(p, 0) == solid.Outside {
					continue
				}
				number(&out.columns[0], out.n, p.X)
				number(&out.columns[1], out.n, p.Y)
				number(&out.columns[2], out.n, p.Z)
				out.n++
				points++
				if out.room() == 0 {
					if err := flush(); err != nil {
						return err
					}
				}
			}
		}
		if g.env.Progress != nil {
			g.env.Progress(int(i+1), int(g.n[0]))
		}
	}
	if err := flush(); err != nil {
		return err
	}
	if points == 0 {
		g.env.Notes.Add(note.Note, note.Cells, "no point of a grid of STEP %s lies in %s", column.FormatReal(step), g.b.Name)
	} else {
		g.env.Notes.Add(note.Note, note.Cells, "%s in %s, each for a cube of %s: together %s of its %s", count(int(points), "grid point"), g.b.Name,
			g.volume(step*step*step), g.volume(float64(points)*step*step*step), g.volume(body.Volume()))
	}
	return nil
}

func (g *gridRows) volume(v float64) string {
	text := strconv.FormatFloat(v, 'g', 6, 64)
	if u := g.b.Clauses.Unit.Pow(3).String(); u != "" {
		return text + " " + u
	}
	return text
}

type transectRows struct {
	b      *Bound
	r      Request
	length float64
	steps  int64 // whole ones
	tail   bool  // the end is no whole step
}

func openTransect(b *Bound, _ *Env, _ *column.Table, r Request) (Rows, error) {
	c := &b.Clauses
	d := voronoi.Vec{X: c.To.X - c.From.X, Y: c.To.Y - c.From.Y, Z: c.To.Z - c.From.Z}
	t := &transectRows{b: b, r: r, length: math.Sqrt(float64(d.X*d.X) + float64(d.Y*d.Y) + float64(d.Z*d.Z))}
	if !(t.length/c.Step < mostPoints) {
		return nil, problem.New("too-large", b.Place, "TRANSECT … STEP %s has more than %d points", column.FormatReal(c.Step), mostPoints).
			WithHint("take a larger STEP")
	}
	// A line of thirty steps of a tenth has thirty steps, whatever rounding says.
	t.steps = int64(math.Floor(t.length/c.Step + 1e-9))
	t.tail = t.length-float64(float64(t.steps)*c.Step) > 1e-9*c.Step
	return t, nil
}

func (t *transectRows) Cost() (voronoi.Cost, error) { return voronoi.Cost{OneByOne: true}, nil }

func (t *transectRows) rows() int64 {
	if t.tail {
		return t.steps + 2
	}
	return t.steps + 1
}

// Forecast counts.
func (t *transectRows) Forecast(context.Context) (*Forecast, error) {
	return &Forecast{Rows: float64(t.rows()), RowsExact: true, Parts: 1, Diagrams: 1, Counted: true}, nil
}

func (t *transectRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	out := newBatches(t.b, t.r.Need, 0, emit)
	flush := func() error { return out.flush(func(int) (column.Vector, bool) { return column.Vector{}, false }) }
	c := &t.b.Clauses
	last := t.rows() - 1
	for i := range t.rows() {
		s := float64(float64(i) * c.Step)
		p := c.To
		if i == last {
			s = t.length
		} else {
			f := s / t.length
			p = voronoi.Vec{X: along(c.From.X, c.To.X, f), Y: along(c.From.Y, c.To.Y, f), Z: along(c.From.Z, c.To.Z, f)}
		}
		for k, x := range [4]float64{p.X, p.Y, p.Z, s} {
			number(&out.columns[k], out.n, x)
		}
		out.n++
		if out.room() == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
			if err := flush(); err != nil {
				return err
			}
		}
	}
	return flush()
}

// along is the place at the fraction f between a and b, exactly a where they are equal.
func along(a, b, f float64) float64 { return a + float64(f*(b-a)) }
