package exec

import (
	"context"
	"math"
	"sync"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// openInterpolate gives every row a value from lines that are sorted once, when the
// first row comes.
func (r *runner) openInterpolate(ctx context.Context, n *plan.Interpolate) (*pipeline, error) {
	p, err := r.open(ctx, n.Input)
	if err != nil {
		return nil, err
	}
	step := &interpolateStep{node: n, in: scopeOf(p.schema)}
	step.lines = sync.OnceValues(func() (*lines, error) { return r.lines(ctx, n) })
	return p.with(step, n.Schema()), nil
}

// lines are the sorted points by key.
type lines struct {
	keys  *keyTable // nil: there is one line
	knots []function.Knots
}

// lines computes and sorts what the values come from.
func (r *runner) lines(ctx context.Context, n *plan.Interpolate) (*lines, error) {
	p := &plan.Project{Input: n.Right}
	for _, e := range append(append([]expr.Expr(nil), n.RightKeys...), n.X, n.Y) {
		p.Exprs = append(p.Exprs, e)
		p.Fields = append(p.Fields, column.Field{Name: e.String(), Type: e.Type(), Unit: e.Unit()})
	}
	table, err := r.collect(ctx, p)
	if err != nil {
		return nil, err
	}
	side := &buildSide{table: table}
	env := r.envOf(r.meter(n))
	keys := len(n.RightKeys)
	if keys > 0 {
		at := make([]int, keys)
		for i := range at {
			at[i] = i
		}
		if err := side.index(ctx, env, at, n.LeftKeys); err != nil {
			return nil, err
		}
	} else {
		side.start = []int32{0, int32(table.N)}
		for i := range int32(table.N) {
			side.rows = append(side.rows, i)
		}
	}
	l := &lines{keys: side.keys, knots: make([]function.Knots, len(side.start)-1)}
	contrary := 0
	for k := range l.knots {
		knots, c, err := knotsOf(n, &table.Cols[keys], &table.Cols[keys+1], side.rows[side.start[k]:side.start[k+1]])
		if err != nil {
			return nil, err
		}
		l.knots[k], contrary = knots, contrary+c
	}
	tellContrary(env.Notes, n.Text, contrary)
	return l, env.keep(int64(table.N) * 40)
}

// knotsOf is the line through some rows; NULLs are no points of it.
func knotsOf(n *plan.Interpolate, x, y *column.Vector, rows []int32) (function.Knots, int, error) {
	width := 1
	if y.Type == column.Point {
		width = 3
	}
	var xs, ys []float64
	for _, r := range rows {
		i := int(r)
		if x.IsNull(i) || y.IsNull(i) {
			continue
		}
		xs = append(xs, function.NumberAt(x, i))
		if width == 3 {
			ys = append(ys, y.F[3*i:3*i+3]...)
		} else {
			ys = append(ys, function.NumberAt(y, i))
		}
		for _, f := range append(ys[len(ys)-width:len(ys):len(ys)], xs[len(xs)-1]) {
			if math.IsInf(f, 0) {
				return function.Knots{}, 0, problem.New("no-value", n.Y.Place(), "INTERPOLATE cannot take Infinity, which its rows have")
			}
		}
	}
	knots, contrary := function.NewKnots(xs, ys, width)
	return knots, contrary, nil
}

// interpolateStep hands on its rows with two more columns.
type interpolateStep struct {
	node  *plan.Interpolate
	in    scope
	lines func() (*lines, error)
}

type interpolateLocal struct {
	reader  *keyReader
	keys    []int32
	keyCols []column.Vector
	hints   []int32 // by key: where the last value was found
	cols    []column.Vector
	out     column.Batch
}

func (s *interpolateStep) Run(_ context.Context, w *Worker, b *column.Batch, emit Emit) error {
	lines, err := s.lines()
	if err != nil {
		return err
	}
	l := localOf(w, s, func() *interpolateLocal {
		l := &interpolateLocal{hints: make([]int32, len(lines.knots))}
		if lines.keys != nil {
			l.reader = newKeyReader(lines.keys)
		}
		return l
	})
	l.keys = room(l.keys, b.N)
	clear(l.keys)
	if lines.keys != nil {
		cols, err := s.in.evalAll(w, l.keyCols, s.node.LeftKeys, b, b.On)
		if err != nil {
			return err
		}
		for i := range cols {
			cols[i] = keyColumn(&cols[i], lines.keys.types[i])
		}
		l.keyCols = cols
		l.reader.find(cols, b.On, b.N, l.keys)
	}
	at, err := s.in.eval(w, s.node.At, b, b.On)
	if err != nil {
		return err
	}
	value, beyond := s.values(lines, l, &at, b)
	l.cols = append(append(l.cols[:0], b.Cols...), value, beyond)
	l.out = column.Batch{N: b.N, Cols: l.cols, On: b.On}
	return emit(&l.out)
}

// values looks up the active rows. Where OUTSIDE FAIL has nothing to give, the value is
// there, 0, and marked as beyond: whoever reads it fails.
func (s *interpolateStep) values(lines *lines, l *interpolateLocal, at *column.Vector, b *column.Batch) (value, beyond column.Vector) {
	value = column.New(s.node.Value.Type, s.node.Value.Unit, b.N)
	beyond = column.New(column.Boolean, nil, b.N)
	fail := s.node.Outside == function.OutsideFail
	var point [3]float64
	var none function.Knots
	forEachOn(b.On, b.N, func(i int) {
		if at.IsNull(i) {
			value.SetNull(i)
			return
		}
		k, knots, hint := l.keys[i], &none, 0
		if k >= 0 {
			knots, hint = &lines.knots[k], int(l.hints[k])
		}
		near, ok := knots.At(function.NumberAt(at, i), s.node.Outside, hint, point[:])
		if k >= 0 {
			l.hints[k] = int32(near)
		}
		switch {
		case ok:
			function.SetNumbers(&value, i, point[:])
		case fail:
			column.SetBit(beyond.Bits, i)
		default:
			value.SetNull(i)
		}
	})
	return value, beyond
}

// sayContrary warns of rows of INTERPOLATE that stand at one x with several values.
func sayContrary(notes *note.Notes, call string, acc function.Accumulator) {
	if c, ok := acc.(function.Contrarian); ok {
		tellContrary(notes, call, c.Contrary())
	}
}

func tellContrary(notes *note.Notes, call string, rows int) {
	if rows == 0 || notes == nil {
		return
	}
	stand := "rows stand"
	if rows == 1 {
		stand = "row stands"
	}
	notes.Add(note.Warning, note.Rows, "%s: %d %s at an x that has another value, too; the mean of the values of one x is taken", call, rows, stand)
}
