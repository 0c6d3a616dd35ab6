package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// order binds ORDER BY over the output of the SELECT: names of output columns
// first, then positions, then expressions, which become hidden columns.
func (c *selection) order(keys []*lang.Key) ([]plan.SortKey, error) {
	var out []plan.SortKey
	for _, k := range keys {
		i, err := c.orderColumn(k.Expr)
		if err != nil {
			return nil, err
		}
		it := c.items[i]
		if it.field.Type == column.Point {
			return nil, problem.New("types", c.at(k.Expr), "points have no order").WithHint("order by the coordinates")
		}
		out = append(out, sortKey(expr.NewColumn(i, it.field, c.at(k.Expr)), k))
	}
	return out, nil
}

// orderColumn is the output column that a sort key means; a new hidden one where
// there is none.
func (c *selection) orderColumn(e lang.Expr) (int, error) {
	if n, ok := e.(*lang.Number); ok {
		return c.position(n)
	}
	if col, ok := e.(*lang.Column); ok && col.Qualifier.IsZero() {
		i, err := c.outputNamed(col)
		if i >= 0 || err != nil {
			return i, err
		}
	}
	key, err := c.exprs("ORDER BY").bind(e)
	if err != nil {
		return 0, err
	}
	for i, it := range c.items {
		if expr.Equal(it.expr, key) {
			return i, nil
		}
	}
	if c.s.Distinct {
		return 0, problem.New("order-distinct", c.at(e), "with DISTINCT, ORDER BY needs columns that are shown").
			WithHint("add '%s' to SELECT", c.text(e))
	}
	f := column.Field{Name: c.text(e), Type: key.Type(), Unit: key.Unit()}
	c.items = append(c.items, item{key, f, lang.Name{}, c.at(e)})
	c.hidden++
	return len(c.items) - 1, nil
}

// position is the output column with a number.
func (c *selection) position(n *lang.Number) (int, error) {
	shown := len(c.items) - c.hidden
	return positionAmong(c.binder, n, shown)
}

func positionAmong(b *binder, n *lang.Number, shown int) (int, error) {
	i := 0
	for _, d := range n.Text {
		if i = i*10 + int(d-'0'); d < '0' || d > '9' || i > shown {
			i = 0
			break
		}
	}
	if i == 0 {
		return 0, problem.New("position", b.at(n), "ORDER BY %s is no position: SELECT has %s", n.Text, count(shown, "column"))
	}
	return i - 1, nil
}

// outputNamed is the output column of a name, -1 if there is none.
func (c *selection) outputNamed(col *lang.Column) (int, error) {
	found := -1
	for i, it := range c.items[:len(c.items)-c.hidden] {
		if !col.Name.Matches(it.field.Name) {
			continue
		}
		if found >= 0 && !expr.Equal(c.items[found].expr, it.expr) {
			return 0, problem.New("ambiguous", c.at(col), "several columns of SELECT are called '%s'", col.Name.Text).
				WithHint("order by a position: ORDER BY %d", found+1)
		}
		if found < 0 {
			found = i
		}
	}
	return found, nil
}

// byAlias is the item of SELECT with an alias, nil if there is none.
func (c *selection) byAlias(n lang.Name) (expr.Expr, error) {
	for _, it := range c.items {
		if !it.alias.IsZero() && n.Matches(it.alias.Text) {
			return it.expr, nil
		}
	}
	return nil, nil
}

// orderOutput binds the ORDER BY of a query that is no plain SELECT: over its
// columns only.
func (b *binder) orderOutput(node plan.Node, keys []*lang.Key) (plan.Node, error) {
	if len(keys) == 0 {
		return node, nil
	}
	s := &plan.Sort{Input: node}
	fields := node.Schema()
	x := &exprs{binder: b, scope: newScope("", "the columns of this query", fields), clause: "ORDER BY"}
	for _, k := range keys {
		var e expr.Expr
		var err error
		if n, ok := k.Expr.(*lang.Number); ok {
			var i int
			if i, err = positionAmong(b, n, len(fields)); err == nil {
				e = expr.NewColumn(i, fields[i], b.at(n))
			}
		} else {
			e, err = x.bind(k.Expr)
		}
		if err != nil {
			return nil, err
		}
		if e.Type() == column.Point {
			return nil, problem.New("types", b.at(k.Expr), "points have no order").WithHint("order by the coordinates")
		}
		s.Keys = append(s.Keys, sortKey(e, k))
	}
	return s, nil
}
