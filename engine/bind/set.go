package bind

import (
	"fmt"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// body binds what a query's rows come from.
func (b *binder) body(body lang.Body) (plan.Node, error) {
	switch body := body.(type) {
	case *lang.Select:
		return b.selectRows(body, nil)
	case *lang.Query:
		return b.query(body)
	case *lang.Values:
		return b.values(body)
	case *lang.SetOp:
		return b.setOp(body)
	}
	return nil, problem.New("failed", b.at(body), "a query of an unknown kind")
}

// setOp binds UNION, INTERSECT and EXCEPT.
func (b *binder) setOp(s *lang.SetOp) (plan.Node, error) {
	left, err := b.body(s.Left)
	if err != nil {
		return nil, err
	}
	right, err := b.body(s.Right)
	if err != nil {
		return nil, err
	}
	fields, err := b.unionFields(s, left.Schema(), right.Schema())
	if err != nil {
		return nil, err
	}
	parts := [2]plan.Node{left, right}
	for i := range parts {
		if parts[i], err = b.fitted(s, parts[i], fields); err != nil {
			return nil, err
		}
	}
	if s.Kind != lang.Union {
		m := &plan.Matched{Kind: plan.Intersect, All: s.All, Left: parts[0], Right: parts[1]}
		if s.Kind == lang.Except {
			m.Kind = plan.Except
		}
		return m, nil
	}
	u := &plan.Union{Fields: fields}
	for _, part := range parts {
		if inner, ok := part.(*plan.Union); ok {
			u.Parts = append(u.Parts, inner.Parts...)
			continue
		}
		u.Parts = append(u.Parts, part)
	}
	if s.All {
		return u, nil
	}
	return &plan.Distinct{Input: u}, nil
}

// unionFields are the columns of both sides under the names of the left one.
func (b *binder) unionFields(s *lang.SetOp, left, right column.Schema) (column.Schema, error) {
	n, kind := s.Right, s.Kind
	if len(left) != len(right) {
		return nil, problem.New("columns", b.at(n), "%s joins rows of equal columns, but its sides have %s and %d", kind, count(len(left), "column"), len(right))
	}
	fields := make(column.Schema, len(left))
	for i, l := range left {
		r := right[i]
		fields[i] = l
		if err := b.oneSystem(l.System, r.System, b.at(n)); err != nil {
			return nil, err
		}
		if l.System == nil {
			fields[i].System = r.System
		}
		switch {
		case l.Type == r.Type || r.Type == column.Null:
		case l.Type == column.Null:
			fields[i].Type = r.Type
		case l.Type.Numeric() && r.Type.Numeric():
			fields[i].Type = column.Real
		default:
			return nil, problem.New("types", b.at(n), "column %d of %s is %s ('%s') on one side and %s ('%s') on the other",
				i+1, kind, l.Type, l.Name, r.Type, r.Name).WithHint("CAST one of them")
		}
		switch {
		case column.SameUnit(l.Unit, r.Unit):
		case l.Unit != nil && r.Unit != nil:
			return nil, problem.New("units", b.at(n), "column %d of %s is in %s ('%s') on one side and in %s ('%s') on the other",
				i+1, kind, l.Unit, l.Name, r.Unit, r.Name)
		default:
			fields[i].Unit = nil // one side does not say
		}
	}
	return fields, nil
}

// fitted casts the columns of a side to the types of the union.
func (b *binder) fitted(n lang.Node, node plan.Node, fields column.Schema) (plan.Node, error) {
	have := node.Schema()
	fit := true
	p := &plan.Project{Input: node, Fields: fields}
	for i, f := range have {
		e := expr.NewColumn(i, f, b.at(n))
		if f.Type != fields[i].Type {
			fit = false
			var err error
			if e, err = expr.NewCast(e, fields[i].Type, b.at(n)); err != nil {
				return nil, b.faulty(err, b.at(n), nil)
			}
		}
		p.Exprs = append(p.Exprs, e)
	}
	if fit {
		return node, nil
	}
	return p, nil
}

// values binds VALUES: rows of constants; the columns are called column1, ….
func (b *binder) values(v *lang.Values) (plan.Node, error) {
	n := &plan.Values{}
	for r, row := range v.Rows {
		if r > 0 && len(row.Values) != len(v.Rows[0].Values) {
			return nil, problem.New("columns", b.at(row), "this row has %d values, the first one %d", len(row.Values), len(v.Rows[0].Values))
		}
		cells := make([]expr.Expr, len(row.Values))
		for i, e := range row.Values {
			var err error
			if cells[i], err = b.constant(e); err != nil {
				return nil, err
			}
		}
		n.Rows = append(n.Rows, cells)
	}
	for i := range v.Rows[0].Values {
		f, err := b.valuesField(v, n.Rows, i)
		if err != nil {
			return nil, err
		}
		n.Fields = append(n.Fields, f)
	}
	return n, nil
}

// valuesField finds the type of a column of VALUES and casts its cells.
func (b *binder) valuesField(v *lang.Values, rows [][]expr.Expr, i int) (column.Field, error) {
	f := column.Field{Name: fmt.Sprintf("column%d", i+1), Unit: rows[0][i].Unit()}
	for r, row := range rows {
		t := row[i].Type()
		switch {
		case t == f.Type || t == column.Null:
		case f.Type == column.Null:
			f.Type = t
		case f.Type.Numeric() && t.Numeric():
			f.Type = column.Real
		default:
			return f, problem.New("types", b.at(v.Rows[r].Values[i]), "this is %s where the rows before have %s", t, f.Type)
		}
	}
	for _, row := range rows {
		if row[i].Type() == f.Type {
			continue
		}
		var err error
		if row[i], err = expr.NewCast(row[i], f.Type, row[i].Place()); err != nil {
			return f, b.faulty(err, row[i].Place(), nil)
		}
	}
	return f, nil
}
