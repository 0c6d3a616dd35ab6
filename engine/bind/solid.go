package bind

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"strconv"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// solid makes the solid of an expression.
func (b *binder) solid(s lang.Solid) (solid.Solid, error) {
	own, err := b.canonical(s)
	if err != nil {
		return nil, err
	}
	return b.make(own, s)
}

// make makes the solid of an expression that stands on its own; s is the same as the user
// wrote it.
func (b *binder) make(own, s lang.Solid) (solid.Solid, error) {
	if _, combined := own.(*lang.SolidOp); !combined {
		made, err := b.build(own)
		if err != nil {
			return nil, b.faultySolid(err, s)
		}
		return made, nil
	}
	return cached(b.env.Solids, func() *map[[32]byte]solid.Solid { return &b.env.Solids.made }, b.bodyKey(own), func() (solid.Solid, error) {
		made, err := b.build(own)
		if err != nil {
			return nil, b.faultySolid(err, s)
		}
		return made, nil
	})
}

// build makes the solid of an expression that stands on its own.
func (b *binder) build(s lang.Solid) (solid.Solid, error) {
	switch s := s.(type) {
	case *lang.BoxSolid:
		box, err := solid.NewBox(corner(s.From), corner(s.To))
		if err != nil {
			return nil, err
		}
		return box, nil
	case *lang.PrismSolid:
		var holes [][]solid.Vec2
		for _, h := range s.Holes {
			holes = append(holes, ring(h))
		}
		prism, err := solid.NewPrism(ring(s.Outer), holes, number(s.From), number(s.To))
		if err != nil {
			return nil, err
		}
		return prism, nil
	case *lang.SolidOp:
		return b.buildOp(s)
	case *lang.MeshSolid, *lang.BoxesSolid, *lang.TerrainSolid:
		return b.contents[s].Body, nil
	}
	return nil, fmt.Errorf("no solid can be made of %T", s)
}

// buildOp makes a chain of MINUS and PLUS at once: corners where surfaces cross are rounded
// once then.
func (b *binder) buildOp(s *lang.SolidOp) (solid.Solid, error) {
	var bodies []solid.Solid
	var ops []mesh.Op
	var chain func(s lang.Solid) error
	chain = func(s lang.Solid) error {
		op, ok := s.(*lang.SolidOp)
		if !ok {
			body, err := b.build(s)
			bodies = append(bodies, body)
			return err
		}
		if err := chain(op.Left); err != nil {
			return err
		}
		right, err := b.build(op.Right)
		if err != nil {
			return err
		}
		how := mesh.Plus
		if op.Minus {
			how = mesh.Minus
		}
		bodies, ops = append(bodies, right), append(ops, how)
		return nil
	}
	if err := chain(s); err != nil {
		return nil, err
	}
	return mesh.Join(ops, bodies...)
}

func corner(p *lang.Point) solid.Vec {
	return solid.Vec{X: number(p.X), Y: number(p.Y), Z: number(p.Z)}
}

func ring(r *lang.Ring) []solid.Vec2 {
	out := make([]solid.Vec2, len(r.Corners))
	for i, c := range r.Corners {
		out[i] = solid.Vec2{X: number(c.X), Y: number(c.Y)}
	}
	return out
}

// number reads a number that literalNumber wrote.
func number(e lang.Expr) float64 {
	switch e := e.(type) {
	case *lang.Number:
		f, _ := strconv.ParseFloat(e.Text, 64) // our own text
		return f
	case *lang.Unary:
		return -number(e.Operand)
	}
	return math.NaN()
}

// literalNumber is the tree of a number that reads back to the same bits.
func literalNumber(f float64, at lang.At) lang.Expr {
	n := &lang.Number{At: at, Text: strconv.FormatFloat(math.Abs(f), 'f', -1, 64)}
	if len(n.Text) > 24 {
		n.Text = strconv.FormatFloat(math.Abs(f), 'e', -1, 64)
	}
	n.IsInteger = isDigits(n.Text)
	if f < 0 {
		return &lang.Unary{At: at, Op: lang.Minus, Operand: n}
	}
	return n
}

func isDigits(s string) bool {
	for _, c := range s {
		if c < '0' || c > '9' {
			return false
		}
	}
	return true
}

// canonical brings a solid expression to its own terms.
func (b *binder) canonical(s lang.Solid) (lang.Solid, error) {
	if b.contents == nil {
		b.contents = map[lang.Solid]*Content{}
	}
	switch s := s.(type) {
	case *lang.BoxSolid:
		from, err := b.point(s.From)
		if err != nil {
			return nil, err
		}
		to, err := b.point(s.To)
		if err != nil {
			return nil, err
		}
		return &lang.BoxSolid{At: s.At, From: from, To: to}, nil
	case *lang.PrismSolid:
		return b.prism(s)
	case *lang.EnvelopeSolid:
		return b.envelope(s)
	case *lang.SolidName:
		return b.namedSolid(s)
	case *lang.SolidOp:
		left, err := b.canonical(s.Left)
		if err != nil {
			return nil, err
		}
		right, err := b.canonical(s.Right)
		if err != nil {
			return nil, err
		}
		return &lang.SolidOp{At: s.At, Minus: s.Minus, Left: left, Right: right}, nil
	case *lang.MeshSolid:
		return b.mesh(s)
	case *lang.BoxesSolid:
		return b.boxesFile(s)
	case *lang.TerrainSolid:
		return b.terrain(s)
	}
	return nil, problem.New("failed", b.at(s), "a solid of an unknown kind")
}

func (b *binder) length(e lang.Expr, what string) (lang.Expr, error) {
	f, err := b.real(e, what)
	if err != nil {
		return nil, err
	}
	return literalNumber(f, lang.At{Pos: e.Span()}), nil
}

func (b *binder) point(p *lang.Point) (*lang.Point, error) {
	out := &lang.Point{At: p.At}
	for _, c := range []struct {
		from lang.Expr
		to   *lang.Expr
	}{{p.X, &out.X}, {p.Y, &out.Y}, {p.Z, &out.Z}} {
		var err error
		if *c.to, err = b.length(c.from, "a coordinate"); err != nil {
			return nil, err
		}
	}
	return out, nil
}

func (b *binder) prism(s *lang.PrismSolid) (lang.Solid, error) {
	out := &lang.PrismSolid{At: s.At}
	var err error
	if s.File != nil {
		out.Outer, err = b.ringFile(s.File)
	} else {
		out.Outer, err = b.ring(s.Outer)
	}
	if err != nil {
		return nil, err
	}
	for _, h := range s.Holes {
		hole, err := b.ring(h)
		if err != nil {
			return nil, err
		}
		out.Holes = append(out.Holes, hole)
	}
	if out.From, err = b.length(s.From, "a height"); err != nil {
		return nil, err
	}
	out.To, err = b.length(s.To, "a height")
	return out, err
}

func (b *binder) ring(r *lang.Ring) (*lang.Ring, error) {
	out := &lang.Ring{At: r.At}
	for _, c := range r.Corners {
		x, err := b.length(c.X, "a coordinate")
		if err != nil {
			return nil, err
		}
		y, err := b.length(c.Y, "a coordinate")
		if err != nil {
			return nil, err
		}
		out.Corners = append(out.Corners, &lang.Corner{At: c.At, X: x, Y: y})
	}
	return out, nil
}

// ringFile reads a ring from a file with the columns x and y, a corner a line.
func (b *binder) ringFile(file *lang.Text) (*lang.Ring, error) {
	path := file.Value
	if !filepath.IsAbs(path) {
		path = filepath.Join(b.env.Folder, path)
	}
	src, err := reader.Open(file.Value, path)
	if err != nil {
		return nil, problem.New("file", b.at(file), "the plan '%s' cannot be read: %v", file.Value, plainCause(err))
	}
	got, err := csv.Reader{}.Read(context.Background(), src, reader.Options{})
	if err != nil {
		return nil, problem.New("file", b.at(file), "the plan '%s' cannot be read: %v", file.Value, err).
			WithHint("a plan has the columns x and y, a corner on each line")
	}
	var cols [2]*column.Vector
	for i, name := range [2]string{"x", "y"} {
		hits := named(got.Table.Schema, name)
		if len(hits) != 1 || !got.Table.Schema[hits[0]].Type.Numeric() {
			return nil, problem.New("file", b.at(file), "the plan '%s' has no column %s of numbers", file.Value, name).
				WithHint("a plan has the columns x and y, a corner on each line")
		}
		cols[i] = &got.Table.Cols[hits[0]]
	}
	out := &lang.Ring{At: file.At}
	for r := range got.Table.N {
		var at [2]lang.Expr
		for i, v := range cols {
			if v.IsNull(r) {
				return nil, problem.New("file", b.at(file), "corner %d of the plan '%s' has no %c", r+1, file.Value, "xy"[i])
			}
			f := 0.0
			if v.Type == column.Integer {
				f = float64(v.I[r])
			} else {
				f = v.F[r]
			}
			at[i] = literalNumber(f, file.At)
		}
		out.Corners = append(out.Corners, &lang.Corner{At: file.At, X: at[0], Y: at[1]})
	}
	return out, nil
}

// plainCause is the innermost text of an error of the operating system.
func plainCause(err error) error {
	for {
		inner := errors.Unwrap(err)
		if inner == nil {
			return err
		}
		err = inner
	}
}

// namedSolid puts the solid in the place of its name.
func (b *binder) namedSolid(s *lang.SolidName) (lang.Solid, error) {
	n := &s.Name
	o, err := b.env.Catalog.Get(n.Key())
	if err != nil {
		var none *catalog.ErrNoSuch
		if !errors.As(err, &none) {
			return nil, problem.At(err, b.at(s))
		}
		p := problem.New("no-object", b.at(s), "there is no solid '%s'", n.Text)
		var names []string
		if list, err := b.env.Catalog.List(catalog.Solid); err == nil {
			for _, o := range list {
				names = append(names, o.Name)
			}
		}
		didYouMean(p, n.Text, names)
		if p.Hint == "" {
			p.WithHint("CREATE SOLID %s AS BOX (0,0,0) TO (30,18,7.5); makes one", n.Text)
		}
		return nil, p
	}
	b.sayChanged(o)
	if o.Kind != catalog.Solid {
		p := problem.New("wrong-kind", b.at(s), "'%s' is a %s, not a solid", n.Text, lang.Fold(o.Kind.String()))
		if o.Kind == catalog.Campaign {
			p.WithHint("ENVELOPE OF %s is the box around its sites", n.Text)
		}
		return nil, p
	}
	inner := &binder{env: b.env, sources: b.sources, source: &problem.Source{Name: "solid " + o.Name, Text: o.Text},
		views: append([]string{o.Key}, b.views...), contents: b.contents, stored: &stored{object: o}}
	for _, v := range b.views {
		if v == o.Key {
			return nil, problem.New("solid-cycle", b.at(s), "the solid '%s' is made of itself", o.Name)
		}
	}
	parsed, err := lang.ParseSolid(o.Text)
	if err != nil {
		return nil, inner.misread(err)
	}
	return inner.canonical(parsed)
}

// envelope is the box around a campaign's sites, widened by MARGIN.
func (b *binder) envelope(s *lang.EnvelopeSolid) (lang.Solid, error) {
	o, err := b.object(&s.Of)
	if err != nil {
		return nil, err
	}
	if o.Kind != catalog.Campaign {
		return nil, problem.New("wrong-kind", b.at(&s.Of), "'%s' is a %s, not a campaign", s.Of.Text, lang.Fold(o.Kind.String()))
	}
	margin := 0.0
	if s.Margin != nil {
		if margin, err = b.real(s.Margin, "MARGIN"); err != nil {
			return nil, err
		}
		if margin < 0 {
			return nil, problem.New("types", b.at(s.Margin), "MARGIN must not be negative")
		}
	}
	from, to := &lang.Point{At: s.At}, &lang.Point{At: s.At}
	for _, axis := range []struct {
		name     string
		from, to *lang.Expr
	}{{"x", &from.X, &to.X}, {"y", &from.Y, &to.Y}, {"z", &from.Z, &to.Z}} {
		hits := named(o.Table.Schema, axis.name)
		if len(hits) != 1 {
			return nil, problem.New("no-position", b.at(&s.Of), "the campaign '%s' has no %s", o.Name, axis.name)
		}
		lo, hi := limits(&o.Table.Cols[hits[0]])
		if !(lo-margin < hi+margin) {
			return nil, problem.New("no-volume", b.at(s), "the envelope of '%s' has no extent along %s", o.Name, axis.name).
				WithHint("widen it: ENVELOPE OF %s MARGIN 1", s.Of.Text)
		}
		*axis.from, *axis.to = literalNumber(lo-margin, s.At), literalNumber(hi+margin, s.At)
	}
	return &lang.BoxSolid{At: s.At, From: from, To: to}, nil
}

// limits are the smallest and the largest value of a numeric column.
func limits(v *column.Vector) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for i := range v.N {
		if v.IsNull(i) {
			continue
		}
		f := 0.0
		if v.Type == column.Integer {
			f = float64(v.I[i])
		} else {
			f = v.F[i]
		}
		lo, hi = min(lo, f), max(hi, f)
	}
	return lo, hi
}
