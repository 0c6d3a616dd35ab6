package engine

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/lang"
)

// let sets a value for :name.
func (s *Session) let(ctx context.Context, st *statement, t *lang.Let) error {
	value, err := s.letValue(ctx, st, t.Value)
	if err != nil {
		return err
	}
	key := lang.Fold(t.Name.Text)
	if s.fixed[key] {
		st.notes.Add(note.Note, note.Import, "LET %s is passed over: --let gave :%s its value", t.Name.Text, t.Name.Text)
		return nil
	}
	s.params[key] = value
	return nil
}

// letValue computes the value of LET, which may ask queries.
func (s *Session) letValue(ctx context.Context, st *statement, e lang.Expr) (column.Value, error) {
	if !asksQuery(e) {
		return s.constant(st, e)
	}
	at := lang.At{Pos: e.Span()}
	written, err := bind.Query(s.bindEnv(st), &lang.Query{At: at, Body: &lang.Select{At: at, Items: []*lang.Item{{At: at, Expr: e}}}})
	if err != nil {
		return column.Value{}, err
	}
	node, err := plan.Optimise(written)
	if err != nil {
		return column.Value{}, err
	}
	field := node.Schema()[0]
	if s.checkOnly {
		v := sampleValue(field.Type)
		v.Unit = field.Unit
		return v, nil
	}
	table, err := exec.Collect(ctx, s.execEnv(st), node)
	if err != nil {
		return column.Value{}, err
	}
	v := table.Cols[0].Value(0)
	v.Unit = field.Unit
	return v, nil
}

// asksQuery reports whether a query stands in an expression.
func asksQuery(e lang.Expr) bool {
	found := false
	lang.Walk(e, func(n lang.Node) bool {
		switch n.(type) {
		case *lang.Subquery, *lang.Exists, *lang.Query:
			found = true
		}
		return !found
	})
	return found
}

// sampleValue stands for a value of a type where nothing is computed: a check of
// what comes after needs its type alone.
func sampleValue(t column.Type) column.Value {
	switch t {
	case column.Integer:
		return column.Int(1)
	case column.Real:
		return column.Float(1)
	case column.Text:
		return column.String("")
	case column.Boolean:
		return column.Bool(true)
	case column.Timestamp, column.Interval:
		return column.Value{Type: t, I: 3_600_000_000}
	}
	return column.NullOf(t)
}
