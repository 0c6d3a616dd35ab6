package expr

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Tests write expressions as text. reader builds them with the constructors;
// it knows no aggregates and no queries.
type reader struct {
	schema column.Schema
	source *problem.Source
}

// read parses and builds an expression over the columns of schema.
func read(text string, schema column.Schema) (Expr, error) {
	tree, err := lang.ParseExpr(text)
	if err != nil {
		return nil, err
	}
	r := reader{schema, &problem.Source{Name: "test", Text: text}}
	return r.build(tree)
}

func mustRead(t testing.TB, text string, schema column.Schema) Expr {
	t.Helper()
	e, err := read(text, schema)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return e
}

func (r *reader) place(n lang.Node) problem.Place {
	return problem.Place{Source: r.source, Span: n.Span()}
}

func (r *reader) list(nodes []lang.Expr) ([]Expr, error) {
	out := make([]Expr, len(nodes))
	for i, n := range nodes {
		e, err := r.build(n)
		if err != nil {
			return nil, err
		}
		out[i] = e
	}
	return out, nil
}

func (r *reader) build(n lang.Expr) (Expr, error) {
	at := r.place(n)
	switch n := n.(type) {
	case *lang.Number:
		if n.IsInteger {
			i, err := strconv.ParseInt(n.Text, 10, 64)
			return NewConst(column.Int(i), at), err
		}
		f, err := strconv.ParseFloat(n.Text, 64)
		return NewConst(column.Float(f), at), err
	case *lang.Text:
		return NewConst(column.String(n.Value), at), nil
	case *lang.Boolean:
		return NewConst(column.Bool(n.Value), at), nil
	case *lang.Null:
		return NewConst(column.NullOf(column.Null), at), nil
	case *lang.Timestamp:
		us, _, err := column.ParseTimestamp(n.Text.Value)
		return NewConst(column.Value{Type: column.Timestamp, I: us}, at), err
	case *lang.Interval:
		r, ok := new(big.Rat).SetString(n.Text.Value)
		us := map[string]int64{"DAY": 86400e6, "HOUR": 3600e6, "MINUTE": 60e6, "SECOND": 1e6}[strings.ToUpper(n.Unit.Text)]
		if !ok || us == 0 || !r.Mul(r, new(big.Rat).SetInt64(us)).IsInt() {
			return nil, fmt.Errorf("INTERVAL '%s' %s", n.Text.Value, n.Unit.Text)
		}
		return NewConst(column.Value{Type: column.Interval, I: r.Num().Int64()}, at), nil
	case *lang.Column:
		for i, f := range r.schema {
			if n.Name.Matches(f.Name) {
				return NewColumn(i, f, at), nil
			}
		}
		return nil, fmt.Errorf("no column %s", n.Name.Text)
	case *lang.Case:
		return r.buildCase(n)
	case *lang.Call:
		return r.buildCall(n)
	}
	return r.buildOperator(n)
}

func (r *reader) buildOperator(n lang.Expr) (Expr, error) {
	at := r.place(n)
	switch n := n.(type) {
	case *lang.Binary:
		args, err := r.list([]lang.Expr{n.Left, n.Right})
		if err != nil {
			return nil, err
		}
		switch n.Op {
		case lang.And:
			return NewAnd(args[0], args[1], at)
		case lang.Or:
			return NewOr(args[0], args[1], at)
		case lang.Concat:
			return NewConcat(args[0], args[1], at)
		case lang.Plus, lang.Minus, lang.Times, lang.Divide, lang.Modulo, lang.Power:
			return NewArith(n.Op, args[0], args[1], at)
		}
		return NewCompare(n.Op, args[0], args[1], at)
	case *lang.Unary:
		x, err := r.build(n.Operand)
		if err != nil {
			return nil, err
		}
		switch n.Op {
		case lang.Not:
			return NewNot(x, at)
		case lang.Minus:
			return NewNeg(x, at)
		}
		return NewPlus(x, at)
	case *lang.Is:
		x, err := r.build(n.Operand)
		if err != nil {
			return nil, err
		}
		if n.What != lang.IsDistinctFrom {
			return NewIs(x, n.What, n.Not, at)
		}
		y, err := r.build(n.From)
		if err != nil {
			return nil, err
		}
		return NewIsDistinct(x, y, n.Not, at)
	case *lang.Cast:
		x, err := r.build(n.Operand)
		if err != nil {
			return nil, err
		}
		for t := column.Integer; t <= column.Point; t++ {
			if strings.EqualFold(t.String(), n.Type.Text) {
				return NewCast(x, t, at)
			}
		}
	case *lang.AtTimeZone:
		args, err := r.list([]lang.Expr{n.Operand, n.Zone})
		if err != nil {
			return nil, err
		}
		return NewCall(function.Zoned, args, at)
	case *lang.Overlaps:
		args, err := r.list(append(append([]lang.Expr{}, n.Left.Values...), n.Right.Values...))
		if err != nil {
			return nil, err
		}
		return NewOverlaps(args[0], args[1], args[2], args[3], at)
	}
	return r.buildSearch(n)
}

// buildSearch builds BETWEEN, IN and LIKE.
func (r *reader) buildSearch(n lang.Expr) (Expr, error) {
	at := r.place(n)
	switch n := n.(type) {
	case *lang.Between:
		args, err := r.list([]lang.Expr{n.Operand, n.Low, n.High})
		if err != nil {
			return nil, err
		}
		return NewBetween(args[0], args[1], args[2], n.Not, at)
	case *lang.In:
		args, err := r.list(append([]lang.Expr{n.Operand}, n.List...))
		if err != nil {
			return nil, err
		}
		return NewIn(args[0], args[1:], n.Not, at)
	case *lang.Like:
		parts := []lang.Expr{n.Operand, n.Pattern}
		if n.Escape != nil {
			parts = append(parts, n.Escape)
		}
		args, err := r.list(parts)
		if err != nil {
			return nil, err
		}
		if n.Escape != nil {
			return NewLike(args[0], args[1], args[2], n.Not, at)
		}
		return NewLike(args[0], args[1], nil, n.Not, at)
	}
	return nil, fmt.Errorf("the test's reader does not know %T", n)
}

func (r *reader) buildCase(n *lang.Case) (Expr, error) {
	var operand, otherwise Expr
	var err error
	if n.Operand != nil {
		if operand, err = r.build(n.Operand); err != nil {
			return nil, err
		}
	}
	var whens []When
	for _, w := range n.Whens {
		args, err := r.list([]lang.Expr{w.Condition, w.Result})
		if err != nil {
			return nil, err
		}
		whens = append(whens, When{args[0], args[1]})
	}
	if n.Else != nil {
		if otherwise, err = r.build(n.Else); err != nil {
			return nil, err
		}
	}
	return NewCase(operand, whens, otherwise, r.place(n))
}

func (r *reader) buildCall(n *lang.Call) (Expr, error) {
	at := r.place(n)
	nodes := n.Args
	var first []Expr
	if n.Name.Is("EXTRACT") {
		field := n.Args[0].(*lang.Column)
		first = []Expr{NewConst(column.String(field.Name.Text), r.place(field))}
		nodes = n.Args[1:]
	}
	args, err := r.list(nodes)
	if err != nil {
		return nil, err
	}
	args = append(first, args...)
	if n.Name.Is("POINT") {
		return NewPoint(args[0], args[1], args[2], at)
	}
	fn := function.LookupScalar(n.Name.Text)
	if fn == nil {
		return nil, fmt.Errorf("no function %s", n.Name.Text)
	}
	return NewCall(fn, args, at)
}

// batchOf makes a batch of rows of values.
func batchOf(schema column.Schema, rows [][]column.Value) *column.Batch {
	b := &column.Batch{N: len(rows)}
	for c, f := range schema {
		col := column.NewBuilder(f.Type, f.Unit)
		for _, row := range rows {
			col.Append(row[c])
		}
		b.Cols = append(b.Cols, col.Finish())
	}
	return b
}

// evalAt computes one expression for row 2 of a batch whose other rows are
// copies of the row, so that kernels are not tested on a single value only.
func evalAt(e Expr, row []column.Value, schema column.Schema) (column.Value, error) {
	rows := make([][]column.Value, 70)
	for i := range rows {
		rows[i] = row
	}
	b := batchOf(schema, rows)
	if len(schema) == 0 {
		b.N = 70
	}
	var w Work
	v, err := e.Eval(&w, b, nil)
	if err != nil {
		return column.Value{}, err
	}
	first := v.Value(2)
	for i := range b.N {
		if v.Value(i).String() != first.String() || v.IsNull(i) != first.Null {
			return column.Value{}, fmt.Errorf("row %d gives %s and row 2 %s", i, v.Value(i), first)
		}
	}
	return first, nil
}

// show writes a value with its type told by its form; NULL is written out.
func show(v column.Value) string {
	if v.Null || v.Type == column.Null {
		return "NULL"
	}
	return NewConst(v, problem.Place{}).String()
}
