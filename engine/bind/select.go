package bind

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// query binds a query: WITH, the body, ORDER BY and LIMIT.
func (b *binder) query(q *lang.Query) (plan.Node, error) {
	inner := *b
	for i, c := range q.With {
		for _, d := range q.With[:i] {
			if d.Name.Key() == c.Name.Key() {
				return nil, problem.New("same-name", b.at(&c.Name), "WITH names '%s' twice", c.Name.Text)
			}
		}
		inner.ctes = &cte{def: c, before: inner.ctes, outer: b.outer}
	}
	if err := inner.checkCTEs(q); err != nil {
		return nil, err
	}
	var node plan.Node
	var err error
	if s, ok := q.Body.(*lang.Select); ok {
		node, err = inner.selectRows(s, q.OrderBy)
	} else {
		if node, err = inner.body(q.Body); err == nil {
			node, err = inner.orderOutput(node, q.OrderBy)
		}
	}
	if err != nil {
		return nil, err
	}
	return inner.limit(node, q)
}

// checkCTEs binds the names of WITH that the query never uses, so that their
// faults are not kept in the dark.
func (b *binder) checkCTEs(q *lang.Query) error {
	for c, i := b.ctes, len(q.With); i > 0; c, i = c.before, i-1 {
		quiet := *b
		env := *b.env
		env.Notes = nil
		quiet.env, quiet.quiet = &env, true
		if _, err := quiet.bindCTE(c, &c.def.Name); err != nil {
			return err
		}
	}
	return nil
}

// limit binds LIMIT and OFFSET.
func (b *binder) limit(node plan.Node, q *lang.Query) (plan.Node, error) {
	if q.Limit == nil && q.Offset == nil {
		return node, nil
	}
	l := &plan.Limit{Input: node, Count: -1}
	var err error
	if q.Limit != nil {
		if l.Count, err = b.wholeNumber(q.Limit, "LIMIT"); err != nil {
			return nil, err
		}
	}
	if q.Offset != nil {
		if l.Offset, err = b.wholeNumber(q.Offset, "OFFSET"); err != nil {
			return nil, err
		}
	}
	return l, nil
}

// selection is one SELECT being bound.
type selection struct {
	*binder
	s      *lang.Select
	from   *scope
	group  *grouping // nil: rows are not grouped
	items  []item
	over   *windowing
	hidden int // sort keys behind the items that are not shown
}

// item is an output column.
type item struct {
	expr  expr.Expr
	field column.Field
	alias lang.Name // as written, or the zero Name
	place problem.Place
}

// selectRows binds a SELECT with the ORDER BY of its query.
func (b *binder) selectRows(s *lang.Select, order []*lang.Key) (plan.Node, error) {
	src, err := b.from(s.From)
	if err != nil {
		return nil, err
	}
	c := &selection{binder: b, s: s, from: src.scope, over: new(windowing)}
	node := src.node
	if s.Where != nil {
		where := &exprs{binder: b, scope: src.scope, clause: "WHERE", hidden: s.Items}
		cond, err := where.condition(s.Where)
		if err != nil {
			return nil, err
		}
		node = &plan.Filter{Input: node, Cond: cond, Clause: "WHERE"}
	}
	if err := c.grouped(order); err != nil {
		return nil, err
	}
	if err := c.bindItems(); err != nil {
		return nil, err
	}
	var having expr.Expr
	if s.Having != nil {
		if having, err = c.exprs("HAVING").condition(s.Having); err != nil {
			return nil, err
		}
	}
	keys, err := c.order(order)
	if err != nil {
		return nil, err
	}
	if c.group != nil {
		node = c.group.plan(c.exprs("SELECT"), node)
		if having != nil {
			node = &plan.Filter{Input: node, Cond: having, Clause: "HAVING"}
		}
	}
	if len(c.over.nodes) > 0 {
		out, give := c.over.plan(node)
		node = out
		for i := range c.items {
			c.items[i].expr = give(c.items[i].expr)
		}
	}
	return c.output(node, keys), nil
}

// exprs binds the expressions of a clause above WHERE.
func (c *selection) exprs(clause string) *exprs {
	x := &exprs{binder: c.binder, scope: c.from, clause: clause, group: c.group, hidden: c.s.Items}
	if clause != "SELECT" {
		x.aliases = c.byAlias
	}
	if clause != "HAVING" {
		x.windows = c.over
	}
	return x
}

// grouped binds GROUP BY, if the rows of SELECT are groups.
func (c *selection) grouped(order []*lang.Key) error {
	s := c.s
	any := len(s.GroupBy) > 0 || s.Having != nil
	for _, it := range s.Items {
		any = any || it.Expr != nil && hasAggregate(it.Expr)
	}
	for _, k := range order {
		any = any || hasAggregate(k.Expr)
	}
	if !any {
		return nil
	}
	if err := c.groupless(); err != nil {
		return err
	}
	g := &grouping{implicit: len(s.GroupBy) == 0}
	for _, e := range s.GroupBy {
		written, err := c.groupKey(e)
		if err != nil {
			return err
		}
		x := &exprs{binder: c.binder, scope: c.from, clause: "GROUP BY", hidden: c.s.Items}
		k, err := x.bind(written)
		if err != nil {
			return err
		}
		if k.Type() == column.Point {
			return problem.New("types", c.at(e), "GROUP BY cannot order points").WithHint("group by the coordinates")
		}
		g.keys, g.written = append(g.keys, k), append(g.written, written)
	}
	c.group = g
	return nil
}

// groupless refuses a HAVING that speaks of columns where nothing makes groups: a
// condition on single rows was meant. (Without columns it is a condition on the one
// group of all rows.)
func (c *selection) groupless() error {
	if c.s.Having == nil || len(c.s.GroupBy) > 0 || hasAggregate(c.s.Having) {
		return nil
	}
	for _, it := range c.s.Items {
		if it.Expr != nil && hasAggregate(it.Expr) {
			return nil
		}
	}
	columns := false
	walk(c.s.Having, func(e lang.Expr) {
		_, is := e.(*lang.Column)
		columns = columns || is
	})
	if !columns {
		return nil
	}
	return problem.New("no-groups", c.at(c.s.Having), "HAVING needs groups, and there is neither GROUP BY nor an aggregate").
		WithHint("conditions on single rows stand in WHERE")
}

// groupKey finds what a key of GROUP BY stands for: a position, an alias, or the
// expression itself. A column of FROM goes before an alias.
func (c *selection) groupKey(e lang.Expr) (lang.Expr, error) {
	switch e := e.(type) {
	case *lang.Number:
		it, err := c.itemAt(e, "GROUP BY")
		if err != nil {
			return nil, err
		}
		if it.Star {
			return nil, problem.New("position", c.at(e), "position %s is *, which is no single column", e.Text)
		}
		return it.Expr, nil
	case *lang.Column:
		if !e.Qualifier.IsZero() {
			return e, nil
		}
		hits, err := c.from.find(c.binder, e.Qualifier, e.Name)
		if err != nil {
			return nil, err
		}
		for _, it := range c.s.Items {
			if it.Alias.IsZero() || !e.Name.Matches(it.Alias.Text) {
				continue
			}
			if len(hits) == 0 {
				return it.Expr, nil
			}
			if col, ok := it.Expr.(*lang.Column); !ok || !e.Name.Matches(col.Name.Text) {
				c.say(note.Note, note.Rows, "GROUP BY %s groups by the column %s of %s, not by the item of SELECT that is called so",
					e.Name.Text, e.Name.Text, c.from.what())
			}
		}
	}
	return e, nil
}

// itemAt is the item of SELECT at a position.
func (c *selection) itemAt(n *lang.Number, clause string) (*lang.Item, error) {
	i := 0
	for _, d := range n.Text {
		if i = i*10 + int(d-'0'); d < '0' || d > '9' || i > len(c.s.Items) {
			i = 0
			break
		}
	}
	if i == 0 {
		return nil, problem.New("position", c.at(n), "%s %s is no position: SELECT has %s", clause, n.Text, count(len(c.s.Items), "item"))
	}
	return c.s.Items[i-1], nil
}

// bindItems binds the SELECT list.
func (c *selection) bindItems() error {
	for _, it := range c.s.Items {
		if it.Star {
			if err := c.star(it); err != nil {
				return err
			}
			continue
		}
		e, err := c.exprs("SELECT").bind(it.Expr)
		if err != nil {
			return err
		}
		c.items = append(c.items, item{e, c.heading(it, e), it.Alias, c.at(it.Expr)})
	}
	return nil
}

// heading names an output column: by its alias, by the name of the column that
// it is, else by the text as written.
func (c *selection) heading(it *lang.Item, e expr.Expr) column.Field {
	f := column.Field{Type: e.Type(), Unit: e.Unit(), System: SystemOf(e)}
	if col, ok := it.Expr.(*lang.Column); ok {
		if hits, err := c.from.find(c.binder, col.Qualifier, col.Name); err == nil && len(hits) == 1 {
			f.Name, f.Meaning = c.from.columns[hits[0]].Name, c.from.columns[hits[0]].Meaning
		}
	}
	if f.Name == "" {
		f.Name = c.text(it.Expr)
	}
	if !it.Alias.IsZero() {
		f.Name = it.Alias.Text
	}
	return f
}

// star expands * and name.*.
func (c *selection) star(it *lang.Item) error {
	if len(c.s.From) == 0 {
		return problem.New("no-column", c.at(it), "* needs a source: FROM …")
	}
	source := -1
	if !it.Qualifier.IsZero() {
		for i, s := range c.from.sources {
			if s.alias != "" && it.Qualifier.Matches(s.alias) {
				source = i
			}
		}
		if source < 0 {
			return c.from.noSource(c.binder, it.Qualifier)
		}
	}
	var costly []string
	for i, col := range c.from.columns {
		switch {
		case source >= 0 && col.source != source, source < 0 && col.merged, col.Name == "", col.Name == relation.ShapeColumn:
			continue
		case col.costly:
			costly = append(costly, col.Name)
			continue
		}
		e := expr.NewColumn(i, col.Field, c.at(it))
		if c.group != nil {
			var err error
			if e, err = c.groupedColumn(it, i); err != nil {
				return err
			}
		}
		c.items = append(c.items, item{e, col.Field, lang.Name{}, c.at(it)})
	}
	if len(costly) > 0 {
		c.say(note.Note, note.Output, "SELECT * leaves out %s, which cost much: name them to get them", strings.Join(costly, ", "))
	}
	return nil
}

// groupedColumn is column i where rows are groups.
func (c *selection) groupedColumn(it *lang.Item, i int) (expr.Expr, error) {
	x := c.exprs("SELECT")
	for k, key := range c.group.keys {
		if at, ok := expr.AsColumn(key); ok && at == i {
			return expr.NewColumn(k, c.group.keyField(x, k), c.at(it)), nil
		}
	}
	return nil, c.group.notGrouped(x, &lang.Column{At: it.At}, i)
}

// output is the projection, with DISTINCT, the sort, and without the sort keys
// that are not shown.
func (c *selection) output(node plan.Node, keys []plan.SortKey) plan.Node {
	p := &plan.Project{Input: node}
	for _, it := range c.items {
		p.Exprs = append(p.Exprs, it.expr)
		p.Fields = append(p.Fields, it.field)
	}
	node = p
	if c.s.Distinct {
		node = &plan.Distinct{Input: node}
	}
	if len(keys) > 0 {
		node = &plan.Sort{Input: node, Keys: keys}
	}
	if c.hidden == 0 {
		return node
	}
	shown := &plan.Project{Input: node}
	for i, it := range c.items[:len(c.items)-c.hidden] {
		shown.Exprs = append(shown.Exprs, expr.NewColumn(i, it.field, it.place))
		shown.Fields = append(shown.Fields, it.field)
	}
	return shown
}
