package plan

import (
	"fmt"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
)

// Interpolate gives each row of Input a value from the rows of Right: of those whose
// keys are equal, put in the order of X, the straight line of Y at At. It has two
// columns more than Input: the value, and whether At is outside the rows although
// Outside is FAIL. NULL keys match nothing.
type Interpolate struct {
	Input, Right        Node
	LeftKeys, RightKeys []expr.Expr // over Input and over Right
	Y, X                expr.Expr   // over Right
	At                  expr.Expr   // over Input
	Outside             function.Outside
	Value               column.Field
	Text                string // as the user wrote it
}

// Schema is the input's columns, then the value and whether it is beyond.
func (n *Interpolate) Schema() column.Schema {
	in := n.Input.Schema()
	return append(in[:len(in):len(in)], n.Value, column.Field{Name: "beyond", Type: column.Boolean})
}

// Inputs is the rows, then those that they are given values from.
func (n *Interpolate) Inputs() []Node { return []Node{n.Input, n.Right} }

func interpolateLine(n *Interpolate) string {
	line := fmt.Sprintf("interpolate by sorted merge: %s along %s at %s", n.Y, n.X, n.At)
	for i := range n.LeftKeys {
		line += fmt.Sprintf(", where %s = %s", n.LeftKeys[i], n.RightKeys[i])
	}
	return line + "; outside " + strings.ToLower(n.Outside.String())
}

// merges puts an Interpolate under a Project, a Filter or an Aggregate for each of its scalar
// queries that is INTERPOLATE over rows that equalities tie to the row outside: the
// rows are sorted once, and not looked through for every row outside.
//
// Safe: what the query computes for its own rows cannot fail, but for INTERPOLATE
// itself, which fails where it stood. Where it is asked for the value may fail; that is
// computed for all rows only where the query is computed for all of them.
func merges(n Node) Node {
	_, project := n.(*Project)
	input := n.Inputs()[0]
	in := input
	known := map[expr.Query]expr.Expr{}
	replaced := mapExprs(n, func(e expr.Expr) expr.Expr {
		always := map[expr.Expr]bool{}
		if project {
			unguarded(e, always)
		}
		return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
			s, ok := e.(*expr.Subquery)
			if !ok || s.Kind != expr.ScalarQuery {
				return e
			}
			if known[s.Query] != nil {
				return known[s.Query]
			}
			m, value, ok := mergeOf(s, in, always[e])
			if !ok {
				return e
			}
			in = m
			known[s.Query] = value
			return value
		})
	})
	if in == input {
		return n
	}
	out := withInputs(replaced, append([]Node{in}, n.Inputs()[1:]...))
	if _, filter := n.(*Filter); !filter {
		return out
	}
	return &Project{Input: out, Exprs: columnsOf(in.Schema())[:len(input.Schema())], Fields: input.Schema()}
}

// unguarded marks the parts of an expression that are computed wherever it is.
func unguarded(e expr.Expr, always map[expr.Expr]bool) {
	always[e] = true
	switch x := e.(type) {
	case *expr.Arith, *expr.Neg, *expr.Cast, *expr.Compare, *expr.Concat:
	case *expr.Call:
		if x.Fn.Lazy {
			return
		}
	default:
		return
	}
	for _, c := range e.Children() {
		unguarded(c, always)
	}
}

// mergeOf makes a merge over `in` of a query of the form INTERPOLATE of (rows where
// columns equal values of the row outside), and the expression that stands for it.
func mergeOf(s *expr.Subquery, in Node, always bool) (*Interpolate, expr.Expr, bool) {
	p, ok := s.Query.(*Query).Plan.(*Project)
	if !ok || len(p.Exprs) != 1 || expr.HasQuery(p.Exprs[0]) {
		return nil, nil, false
	}
	a, ok := p.Input.(*Aggregate)
	if !ok || len(a.Keys) > 0 || len(a.Calls) != 1 {
		return nil, nil, false
	}
	c := &a.Calls[0]
	if !c.Fn.Along || c.Filter != nil || ReadsOuter(rowsOf(a.Input)) {
		return nil, nil, false
	}
	y, x, at := c.Args[0], c.Args[1], c.Args[2]
	word, constant := expr.Const(c.Args[3])
	outside, named := function.OutsideNamed(word.S)
	if !constant || !named || anyFails([]expr.Expr{y, x}) || expr.HasOuter(y) || expr.HasOuter(x) || anyQuery(y, x, at) ||
		!expr.HasOuter(at) || readsColumns(at) || at.CanFail() && !always {
		return nil, nil, false
	}
	m := &Interpolate{Input: in, Y: y, X: x, At: beside(at, 0, s.Outer), Outside: outside, Text: c.Text,
		Value: column.Field{Name: c.Text, Type: a.Fields[0].Type, Unit: a.Fields[0].Unit}}
	if anyFails(s.Outer) || !m.tie(a.Input, s.Outer) {
		return nil, nil, false
	}
	value, ok := m.value(p.Exprs[0], s)
	return m, value, ok
}

func anyQuery(list ...expr.Expr) bool {
	for _, e := range list {
		if expr.HasQuery(e) {
			return true
		}
	}
	return false
}

// rowsOf is what a filter filters.
func rowsOf(n Node) Node {
	if f, ok := n.(*Filter); ok {
		return f.Input
	}
	return n
}

// tie sets the rows and the keys from what the aggregate has under it.
func (m *Interpolate) tie(n Node, outer []expr.Expr) bool {
	f, ok := n.(*Filter)
	if !ok {
		m.Right = n
		return true
	}
	m.Right = f.Input
	var rest []expr.Expr
	for _, c := range expr.Conjuncts(f.Cond) {
		if key, value, ok := equalsOuter(c); ok && !value.CanFail() {
			m.RightKeys, m.LeftKeys = append(m.RightKeys, key), append(m.LeftKeys, beside(value, 0, outer))
			continue
		}
		if expr.HasOuter(c) || c.CanFail() || expr.HasQuery(c) {
			return false
		}
		rest = append(rest, c)
	}
	if len(rest) > 0 {
		m.Right = &Filter{Input: f.Input, Cond: expr.AndAll(rest), Clause: f.Clause}
	}
	return true
}

// value is what stands for the query over the merged columns: its expression, in which
// INTERPOLATE is a column.
func (m *Interpolate) value(e expr.Expr, s *expr.Subquery) (expr.Expr, bool) {
	width := len(m.Input.Schema())
	var got expr.Expr = expr.NewColumn(width, m.Value, s.Place())
	if m.Outside == function.OutsideFail {
		beyond := m.Schema()[width+1]
		made, err := expr.NewCall(function.Reached, []expr.Expr{got, expr.NewColumn(width+1, beyond, s.Place()), m.At}, s.Place())
		if err != nil {
			return nil, false
		}
		got = made
	}
	return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
		switch x := e.(type) {
		case *expr.Column: // the aggregate's only one
			return got
		case *expr.Outer:
			return s.Outer[x.Index]
		}
		return e
	}), true
}

// prunedInterpolate drops the step where nobody reads its value.
func prunedInterpolate(n *Interpolate, need []bool) (Node, []int) {
	width := len(n.Input.Schema())
	if !need[width] && !need[width+1] {
		in, to := pruned(n.Input, need[:width])
		return in, append(append([]int(nil), to...), -1, -1)
	}
	left := append([]bool(nil), need[:width]...)
	mark(left, n.Input.Schema(), n.At)
	for _, k := range n.LeftKeys {
		mark(left, n.Input.Schema(), k)
	}
	right := make([]bool, len(n.Right.Schema()))
	for _, e := range append([]expr.Expr{n.Y, n.X}, n.RightKeys...) {
		mark(right, n.Right.Schema(), e)
	}
	c := *n
	var toLeft, toRight []int
	c.Input, toLeft = pruned(n.Input, left)
	c.Right, toRight = pruned(n.Right, right)
	c.LeftKeys, c.RightKeys = remapAll(n.LeftKeys, toLeft), remapAll(n.RightKeys, toRight)
	c.At, c.Y, c.X = expr.Remap(n.At, toLeft), expr.Remap(n.Y, toRight), expr.Remap(n.X, toRight)
	now := len(c.Input.Schema())
	return &c, append(append([]int(nil), toLeft...), now, now+1)
}

// pushInterpolate moves what speaks of the rows alone below the step.
func pushInterpolate(n *Interpolate, conds []condition) Node {
	c := *n
	to := make([]int, len(n.Schema()))
	for i := range to {
		to[i] = i
		if i >= len(n.Input.Schema()) {
			to[i] = -1
		}
	}
	down, stay := split(conds, to)
	c.Input, c.Right = push(n.Input, down), push(n.Right, nil)
	return filtered(&c, stay)
}
