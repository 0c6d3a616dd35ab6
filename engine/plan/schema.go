package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// Schema of a single row without columns is empty.
func (*One) Schema() column.Schema { return nil }

// Inputs of a leaf are none.
func (*One) Inputs() []Node { return nil }

// Schema is the list's columns.
func (n *Values) Schema() column.Schema { return n.Fields }

// Inputs of a leaf are none.
func (*Values) Inputs() []Node { return nil }

// Schema is the columns in use.
func (n *Scan) Schema() column.Schema { return n.Fields }

// Inputs of a leaf are none.
func (*Scan) Inputs() []Node { return nil }

// Schema is the relation's columns, needed or not.
func (n *Relation) Schema() column.Schema {
	fields := make(column.Schema, len(n.Bound.Columns))
	for i := range fields {
		fields[i] = n.Bound.Columns[i].Field
	}
	return fields
}

// Inputs is the sites, then what clauses name.
func (n *Relation) Inputs() []Node { return append([]Node{n.Input}, n.Beside...) }

// Schema is the input's.
func (n *Filter) Schema() column.Schema { return n.Input.Schema() }

// Inputs is the one input.
func (n *Filter) Inputs() []Node { return []Node{n.Input} }

// Schema is the computed columns.
func (n *Project) Schema() column.Schema { return n.Fields }

// Inputs is the one input.
func (n *Project) Inputs() []Node { return []Node{n.Input} }

// Schema is the keys, then the calls.
func (n *Aggregate) Schema() column.Schema { return n.Fields }

// Inputs is the one input.
func (n *Aggregate) Inputs() []Node { return []Node{n.Input} }

// Schema is the left columns, then the right ones, where the kind has them.
func (n *Join) Schema() column.Schema {
	if n.Kind == Semi || n.Kind == Anti {
		return n.Left.Schema()
	}
	return n.Both()
}

// Both is the columns that Rest refers to: the left, then the right ones.
func (n *Join) Both() column.Schema {
	left, right := n.Left.Schema(), n.Right.Schema()
	fields := make(column.Schema, 0, len(left)+len(right))
	return append(append(fields, left...), right...)
}

// Inputs is the left, then the right side.
func (n *Join) Inputs() []Node { return []Node{n.Left, n.Right} }

// Schema is the input's.
func (n *Sort) Schema() column.Schema { return n.Input.Schema() }

// Inputs is the one input.
func (n *Sort) Inputs() []Node { return []Node{n.Input} }

// Schema is the input's.
func (n *Limit) Schema() column.Schema { return n.Input.Schema() }

// Inputs is the one input.
func (n *Limit) Inputs() []Node { return []Node{n.Input} }

// Schema is the input's.
func (n *Distinct) Schema() column.Schema { return n.Input.Schema() }

// Inputs is the one input.
func (n *Distinct) Inputs() []Node { return []Node{n.Input} }

// Schema is that of all parts.
func (n *Union) Schema() column.Schema { return n.Fields }

// Inputs is the parts, in order.
func (n *Union) Inputs() []Node { return n.Parts }

// Schema is the left side's.
func (n *Matched) Schema() column.Schema { return n.Left.Schema() }

// Inputs is the left, then the right side.
func (n *Matched) Inputs() []Node { return []Node{n.Left, n.Right} }

// Schema is the input's with the number behind.
func (n *Number) Schema() column.Schema {
	in := n.Input.Schema()
	return append(in[:len(in):len(in)], n.Field)
}

// Inputs is the one input.
func (n *Number) Inputs() []Node { return []Node{n.Input} }

// Schema is that of the common part.
func (n *Shared) Schema() column.Schema { return n.Fields }

// Inputs of a leaf are none: the common part is computed once, apart.
func (*Shared) Inputs() []Node { return nil }

// Schema is that of the common part.
func (n *Lookup) Schema() column.Schema { return n.Fields }

// Inputs of a leaf are none.
func (*Lookup) Inputs() []Node { return nil }

// withInputs is a copy of n over other inputs, in the order of Inputs.
func withInputs(n Node, in []Node) Node {
	switch n := n.(type) {
	case *Relation:
		c := *n
		c.Input, c.Beside = in[0], in[1:]
		return &c
	case *Filter:
		c := *n
		c.Input = in[0]
		return &c
	case *Project:
		c := *n
		c.Input = in[0]
		return &c
	case *Aggregate:
		c := *n
		c.Input = in[0]
		return &c
	case *Join:
		c := *n
		c.Left, c.Right = in[0], in[1]
		return &c
	case *Interpolate:
		c := *n
		c.Input, c.Right = in[0], in[1]
		return &c
	case *Sort:
		c := *n
		c.Input = in[0]
		return &c
	case *Window:
		c := *n
		c.Input = in[0]
		return &c
	case *Limit:
		c := *n
		c.Input = in[0]
		return &c
	case *Distinct:
		c := *n
		c.Input = in[0]
		return &c
	case *Number:
		c := *n
		c.Input = in[0]
		return &c
	case *Union:
		c := *n
		c.Parts = in
		return &c
	case *Matched:
		c := *n
		c.Left, c.Right = in[0], in[1]
		return &c
	}
	return n // a leaf
}

// rewrite applies f to every node from the leaves up and gives the new tree; a
// rule never changes a node in place, since views share their plans.
func rewrite(n Node, f func(Node) (Node, error)) (Node, error) {
	in := n.Inputs()
	if len(in) > 0 {
		out := make([]Node, len(in))
		for i, child := range in {
			c, err := rewrite(child, f)
			if err != nil {
				return nil, err
			}
			out[i] = c
		}
		n = withInputs(n, out)
	}
	return f(n)
}

// mapExprs is a copy of n with f applied to each of its own expressions, which
// keep their types. A node without expressions is given back as it is.
func mapExprs(n Node, f func(expr.Expr) expr.Expr) Node {
	switch n := n.(type) {
	case *Values:
		c := *n
		c.Rows = make([][]expr.Expr, len(n.Rows))
		for i, row := range n.Rows {
			c.Rows[i] = mapList(row, f)
		}
		return &c
	case *Relation:
		c := *n
		c.Wanted = mapMaybe(n.Wanted, f)
		return &c
	case *Filter:
		c := *n
		c.Cond = f(n.Cond)
		return &c
	case *Project:
		c := *n
		c.Exprs = mapList(n.Exprs, f)
		return &c
	case *Aggregate:
		c := *n
		c.Keys = mapList(n.Keys, f)
		c.Calls = append([]Call(nil), n.Calls...)
		for i := range c.Calls {
			call := &c.Calls[i]
			call.Args = mapList(call.Args, f)
			call.Filter, call.Weight = mapMaybe(call.Filter, f), mapMaybe(call.Weight, f)
			call.OrderBy = mapKeys(call.OrderBy, f)
		}
		return &c
	case *Join:
		c := *n
		c.LeftKeys, c.RightKeys, c.Rest = mapList(n.LeftKeys, f), mapList(n.RightKeys, f), mapMaybe(n.Rest, f)
		c.Whole = mapMaybe(n.Whole, f)
		if n.Near != nil {
			c.Near = &Near{f(n.Near.Left), f(n.Near.Right), f(n.Near.Within), n.Near.OfRight}
		}
		return &c
	case *Interpolate:
		c := *n
		c.LeftKeys, c.RightKeys = mapList(n.LeftKeys, f), mapList(n.RightKeys, f)
		c.Y, c.X, c.At = f(n.Y), f(n.X), f(n.At)
		return &c
	case *Sort:
		c := *n
		c.Keys = mapKeys(n.Keys, f)
		return &c
	case *Window:
		return n.mapped(f)
	case *Nearest:
		c := *n
		c.Point, c.At, c.Keep = f(n.Point), f(n.At), mapMaybe(n.Keep, f)
		return &c
	case *Lookup:
		c := *n
		c.Keys, c.Values = mapList(n.Keys, f), mapList(n.Values, f)
		return &c
	}
	return n
}

func mapList(in []expr.Expr, f func(expr.Expr) expr.Expr) []expr.Expr {
	out := make([]expr.Expr, len(in))
	for i, e := range in {
		out[i] = f(e)
	}
	return out
}

func mapMaybe(e expr.Expr, f func(expr.Expr) expr.Expr) expr.Expr {
	if e == nil {
		return nil
	}
	return f(e)
}

func mapKeys(in []SortKey, f func(expr.Expr) expr.Expr) []SortKey {
	out := append([]SortKey(nil), in...)
	for i := range out {
		out[i].Expr = f(out[i].Expr)
	}
	return out
}
