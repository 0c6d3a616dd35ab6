package oracle

import "fmt"

// queryCondition asks a query.
func (g *Gen) queryCondition(s *scope, depth int) text {
	if g.chance(45) {
		q := g.body(s, []kind{g.kind()}, depth)
		return f("%sEXISTS (%s)", g.one("", "NOT "), q.Text)
	}
	t := g.kind()
	x := g.value(t, s, depth)
	q := g.Query(s, []kind{t}, depth)
	return f("%s %sIN (%s)", x, g.one("", "NOT "), q.Text)
}

// scalarQuery gives one row, or none.
func (g *Gen) scalarQuery(t kind, s *scope, depth int) text {
	from, inner := g.from(s, depth, 2)
	where := g.where(inner, depth)
	if g.chance(70) {
		return f("(SELECT %s FROM %s%s)", g.aggregate(t, inner, min(depth, 1)), from, where)
	}
	v := g.value(t, inner, depth)
	return f("(SELECT %s FROM %s%s ORDER BY 1%s%s LIMIT 1%s)", v, from, where,
		same(g.one("", " ASC", " DESC")), same(g.one(" NULLS FIRST", " NULLS LAST")), same(g.one("", " OFFSET 1")))
}

// aggregate is of rows of a scope. Its argument reads at least one of their own
// columns: of outer columns alone it would belong to the query outside.
func (g *Gen) aggregate(t kind, s *scope, depth int) text {
	own := &scope{columns: s.columns}
	x, ok := g.columnOf(t, own)
	if !ok {
		return f("MAX(%s)", text{"CAST(NULL AS " + names[t] + ")", "NULL"})
	}
	if depth > 0 && g.chance(30) {
		x = f("COALESCE(%s, %s)", x, g.value(t, own, depth-1))
	}
	filter := text{}
	if g.chance(20) {
		filter = f(" FILTER (WHERE %s)", g.condition(own, 0))
	}
	distinct := same(g.one("", "", "DISTINCT "))
	switch t {
	case integer:
		switch g.IntN(4) {
		case 0:
			return f("COUNT(*)%s", filter)
		case 1:
			y, _ := g.columnOf(g.kind(), own)
			if y == (text{}) {
				y = x
			}
			return f("COUNT(%s%s)%s", distinct, y, filter)
		}
		return f("%s(%s%s)%s", g.one("SUM", "MIN", "MAX"), distinct, x, filter)
	case real:
		if y, ok := g.columnOf(integer, own); ok && g.chance(30) {
			return f("AVG(%s%s)%s", distinct, y, filter)
		}
		return f("%s(%s%s)%s", g.one("SUM", "MIN", "MAX", "AVG"), distinct, x, filter)
	}
	return f("%s(%s)%s", g.one("MIN", "MAX"), x, filter)
}

var names = [...]string{"INTEGER", "REAL", "TEXT"}

// tables of the test, with the columns of each.
var tables = []struct {
	name    string
	columns []string
	types   []kind
}{
	{"t1", []string{"a", "b", "c", "d"}, []kind{integer, integer, word, real}},
	{"t2", []string{"a", "e", "s", "r"}, []kind{integer, integer, word, real}},
	{"t3", []string{"k", "c", "d"}, []kind{integer, word, real}},
}

func (g *Gen) where(s *scope, depth int) text {
	if g.chance(30) {
		return text{}
	}
	return f(" WHERE %s", g.condition(s, depth))
}

// from is some sources with what may be named of them.
func (g *Gen) from(outer *scope, depth, most int) (text, *scope) {
	s := &scope{outer: outer}
	all := g.source(s, outer, depth)
	for range g.IntN(most) {
		all = g.joined(all, s, outer, depth)
	}
	return all, s
}

func (g *Gen) joined(left text, s, outer *scope, depth int) text {
	before := len(s.columns)
	right := g.source(s, outer, depth)
	switch g.IntN(6) {
	case 0:
		return f("%s CROSS JOIN %s", left, right)
	}
	on := g.condition(s, min(depth, 1))
	if l, r, ok := g.pair(s.columns[:before], s.columns[before:]); ok && g.chance(80) {
		on = f("%s = %s", l, r)
		if g.chance(25) {
			on = f("%s AND %s", on, g.condition(s, 0))
		}
	}
	return f("%s %sJOIN %s ON %s", left, g.one("", "LEFT ", "LEFT ", "RIGHT ", "FULL "), right, on)
}

// pair is two columns of one type.
func (g *Gen) pair(left, right []column) (l, r text, ok bool) {
	for range 20 {
		a, b := left[g.IntN(len(left))], right[g.IntN(len(right))]
		if a.t == b.t {
			return a.name, b.name, true
		}
	}
	return l, r, false
}

// source is a table or a query under a new name.
func (g *Gen) source(s, outer *scope, depth int) text {
	alias := g.name("q")
	if depth > 0 && g.chance(20) {
		types := []kind{g.kind(), g.kind()}
		q := g.Query(outer, types, depth-1)
		for i, n := range q.Names {
			s.columns = append(s.columns, column{same(alias + "." + n), types[i]})
		}
		return f("(%s) AS %s", q.Text, alias)
	}
	t := tables[g.IntN(len(tables))]
	for i, c := range t.columns {
		s.columns = append(s.columns, column{same(alias + "." + c), t.types[i]})
	}
	return f("%s AS %s", t.name, alias)
}

// Query is a query with the names of its columns. Ordered: its rows have one
// order.
type Query struct {
	Text    text
	Names   []string
	Ordered bool
}

// Ours and Theirs are the two ways in which it is written.
func (q *Query) Ours() string   { return q.Text.ours }
func (q *Query) Theirs() string { return q.Text.theirs }

// Random is a query of its own.
func (g *Gen) Random(depth int) *Query {
	types := make([]kind, 1+g.IntN(3))
	for i := range types {
		types[i] = g.kind()
	}
	if g.chance(15) {
		return g.with(types, depth)
	}
	return g.Query(nil, types, depth)
}

// with uses a name of WITH twice.
func (g *Gen) with(types []kind, depth int) *Query {
	q := g.Query(nil, types, depth-1)
	name := g.name("w")
	s := &scope{}
	var from []text
	for range 2 {
		alias := g.name("q")
		for i, n := range q.Names {
			s.columns = append(s.columns, column{same(alias + "." + n), types[i]})
		}
		from = append(from, f("%s AS %s", name, alias))
	}
	items, out := g.items(types, func(t kind) text { return g.value(t, s, depth-1) })
	return &Query{Text: f("WITH %s AS (%s) SELECT %s FROM %s WHERE %s", name, q.Text, items, join(from, ", "), g.condition(s, 1)), Names: out}
}

func (g *Gen) items(types []kind, value func(kind) text) (text, []string) {
	var list []text
	var names []string
	for _, t := range types {
		n := g.name("c")
		list = append(list, f("%s AS %s", value(t), n))
		names = append(names, n)
	}
	return join(list, ", "), names
}

// Query has columns of the given types.
func (g *Gen) Query(outer *scope, types []kind, depth int) *Query {
	q := g.body(outer, types, depth)
	if g.chance(30) {
		var keys []text
		for _, i := range g.Perm(len(types)) {
			keys = append(keys, f("%s%s%s", same(g.one(fmt.Sprint(i+1), q.Names[i])), g.one("", " ASC", " DESC"), g.one(" NULLS FIRST", " NULLS LAST")))
		}
		q.Text = f("%s ORDER BY %s", q.Text, join(keys, ", "))
		q.Ordered = true
		if g.chance(50) {
			q.Text = f("%s LIMIT %d%s", q.Text, 1+g.IntN(8), same(g.one("", " OFFSET 2")))
		}
	}
	return q
}

// body is a query without ORDER BY.
func (g *Gen) body(outer *scope, types []kind, depth int) *Query {
	switch n := g.IntN(10); {
	case depth > 0 && n == 0:
		return g.setOperation(outer, types, depth-1)
	case n <= 3:
		return g.grouped(outer, types, depth)
	}
	return g.plain(outer, types, depth)
}

func (g *Gen) plain(outer *scope, types []kind, depth int) *Query {
	if g.chance(4) {
		s := &scope{outer: outer}
		items, names := g.items(types, func(t kind) text { return g.value(t, s, 1) })
		return &Query{Text: f("SELECT %s", items), Names: names}
	}
	from, s := g.from(outer, depth, 3)
	items, names := g.items(types, func(t kind) text { return g.value(t, s, depth) })
	return &Query{Text: f("SELECT %s%s FROM %s%s", g.one("", "", "DISTINCT "), items, from, g.where(s, depth)), Names: names}
}

// grouped groups by columns or expressions; items are keys and aggregates.
func (g *Gen) grouped(outer *scope, types []kind, depth int) *Query {
	from, s := g.from(outer, depth, 2)
	keys := &scope{outer: outer}
	var by []text
	for range g.IntN(3) {
		t := g.kind()
		if c, ok := g.columnOf(t, &scope{columns: s.columns}); ok {
			keys.columns = append(keys.columns, column{c, t})
			by = append(by, c)
		}
	}
	value := func(t kind) text {
		if c, ok := g.columnOf(t, &scope{columns: keys.columns}); ok && g.chance(50) {
			return c
		}
		switch {
		case depth > 0 && g.chance(15):
			return g.scalarQuery(t, keys, depth-1)
		case g.chance(20):
			return f("COALESCE(%s, %s)", g.aggregate(t, s, depth), g.constant(t))
		}
		return g.aggregate(t, s, depth)
	}
	items, names := g.items(types, value)
	q := f("SELECT %s%s FROM %s%s", g.one("", "", "DISTINCT "), items, from, g.where(s, depth))
	if len(by) > 0 {
		q = f("%s GROUP BY %s", q, join(by, ", "))
		if g.chance(40) {
			t := g.kind()
			q = f("%s HAVING %s %s %s", q, value(t), g.one("=", "<", ">=", "<>"), value(t))
		}
	} else {
		q = f("%s HAVING COUNT(*) >= %d", q, g.IntN(2))
	}
	return &Query{Text: q, Names: names}
}

// setOperation has two or three sides; what binds tighter stands in FROM there.
func (g *Gen) setOperation(outer *scope, types []kind, depth int) *Query {
	side := func() *Query { return g.plain(outer, types, depth) }
	first := side()
	q := &Query{Names: first.Names}
	op := func() string {
		return g.one("UNION", "UNION ALL", "INTERSECT", "EXCEPT", "INTERSECT ALL", "EXCEPT ALL")
	}
	binds := func(op string) bool { return op[0] == 'I' }
	a, b := op(), op()
	left := g.operation(a, first.Text, side().Text, len(types), first.Names)
	if g.chance(60) {
		q.Text = left
		return q
	}
	if binds(b) && !binds(a) {
		second, third := side(), side()
		right := g.operation(b, second.Text, third.Text, len(types), second.Names)
		ours := fmt.Sprintf("%s %s %s", first.Text.ours, a, right.ours)
		q.Text = g.operation(a, first.Text, right, len(types), first.Names)
		q.Text.ours = ours
		return q
	}
	third := side()
	q.Text = g.operation(b, left, third.Text, len(types), first.Names)
	q.Text.ours = fmt.Sprintf("%s %s %s", left.ours, b, third.Text.ours)
	return q
}

// operation writes a set operation. The other database numbers equal rows in the
// place of ALL.
func (g *Gen) operation(op string, left, right text, columns int, names []string) text {
	ours := fmt.Sprintf("%s %s %s", left.ours, op, right.ours)
	if op == "UNION" || op == "UNION ALL" || op == "INTERSECT" || op == "EXCEPT" {
		return text{ours, fmt.Sprintf("SELECT * FROM (%s) %s SELECT * FROM (%s)", left.theirs, op, right.theirs)}
	}
	cols := ""
	for i := range columns {
		if i > 0 {
			cols += ", "
		}
		cols += names[i]
	}
	with := fmt.Sprintf("WITH l_(%s) AS (%s), r_(%s) AS (%s) ", cols, left.theirs, cols, right.theirs)
	numbered := func(t string) string {
		return fmt.Sprintf("SELECT %s, ROW_NUMBER() OVER (PARTITION BY %s) AS n_ FROM %s", cols, cols, t)
	}
	return text{ours, fmt.Sprintf("SELECT %s FROM (%s%s %s %s)", cols, with, numbered("l_"), op[:len(op)-4], numbered("r_"))}
}
