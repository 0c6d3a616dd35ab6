package oracle

import (
	"fmt"
	"strings"
)

// Windowed is a query with windows: over plain rows or over groups, several of them,
// sometimes inside another query.
func (g *Gen) Windowed(depth int) *Query {
	types := []kind{g.kind(), g.kind(), g.kind()}
	q := g.windowed(nil, types, depth)
	if g.chance(30) { // asked about from outside
		alias := g.name("q")
		s := &scope{}
		for i, n := range q.Names {
			s.columns = append(s.columns, column{same(alias + "." + n), types[i]})
		}
		items, names := g.items(types, func(t kind) text { return g.value(t, s, 1) })
		return &Query{Text: f("SELECT %s FROM (%s) AS %s WHERE %s", items, q.Text, alias, g.condition(s, 1)), Names: names}
	}
	return q
}

func (g *Gen) windowed(outer *scope, types []kind, depth int) *Query {
	if g.chance(25) {
		return g.windowedGroups(outer, types)
	}
	from, s := g.from(outer, min(depth, 1), 2)
	own := &scope{columns: s.columns}
	items, names := g.items(types, func(t kind) text { return g.windowValue(t, own, own) })
	return &Query{Text: f("SELECT %s%s FROM %s%s", g.one("", "", "", "DISTINCT "), items, from, g.where(s, min(depth, 1))), Names: names}
}

// windowedGroups has windows over the groups of a query.
func (g *Gen) windowedGroups(outer *scope, types []kind) *Query {
	from, s := g.from(outer, 0, 2)
	keys := &scope{}
	var by []text
	for range 1 + g.IntN(2) {
		t := g.kind()
		if c, ok := g.columnOf(t, &scope{columns: s.columns}); ok {
			keys.columns = append(keys.columns, column{c, t})
			by = append(by, c)
		}
	}
	if len(by) == 0 {
		return g.windowed(outer, types, 0)
	}
	all := &scope{columns: append([]column(nil), keys.columns...)}
	for range 2 {
		t := kind(g.IntN(2))
		all.columns = append(all.columns, column{g.aggregate(t, s, 0), t})
	}
	items, names := g.items(types, func(t kind) text { return g.windowValue(t, all, keys) })
	return &Query{Text: f("SELECT %s FROM %s%s GROUP BY %s", items, from, g.where(s, 0), join(by, ", ")), Names: names}
}

// windowValue is a function with OVER of a type, or an expression with one. keys are
// columns that tell the rows apart as far as anything does.
func (g *Gen) windowValue(t kind, s, keys *scope) text {
	w := g.window(t, s, keys)
	switch {
	case g.chance(70):
		return w
	case t == word:
		return f("COALESCE(%s, 'none')", w)
	}
	return f("(%s - %s)", w, g.window(t, s, keys))
}

func (g *Gen) window(t kind, s, keys *scope) text {
	switch n := g.IntN(10); {
	case n <= 2 && t == integer:
		return g.placed(s, keys)
	case n <= 4:
		return g.picked(t, s, keys)
	}
	x, ok := g.columnOf(t, s)
	if !ok {
		return g.constant(t)
	}
	filter := text{}
	if g.chance(25) {
		filter = f(" FILTER (WHERE %s)", g.condition(s, 0))
	}
	call := f("%s(%s)%s", g.one("MIN", "MAX"), x, filter)
	switch {
	case t == integer && g.chance(30):
		call = f("COUNT(*)%s", filter)
	case t == integer && g.chance(40):
		call = f("COUNT(%s)%s", x, filter)
	case t == integer && g.chance(60):
		call = f("SUM(%s)%s", x, filter)
	case t == real && g.chance(60):
		call = f("%s(%s)%s", g.one("SUM", "AVG"), x, filter)
	}
	return f("%s OVER (%s)", call, g.framed(s, keys))
}

// placed is a function of the row's place. Only where equals have one place may the
// order leave them equal.
func (g *Gen) placed(s, keys *scope) text {
	order := g.orderAll(keys)
	switch g.IntN(4) {
	case 0:
		return f("ROW_NUMBER() OVER (%s%s)", g.partition(s), order)
	case 1:
		return f("NTILE(%s) OVER (%s%s)", g.one("1", "2", "3", "20"), g.partition(s), order)
	case 2:
		order = g.orderSome(s)
	}
	return f("%s() OVER (%s%s)", g.one("RANK", "DENSE_RANK"), g.partition(s), order)
}

func (g *Gen) picked(t kind, s, keys *scope) text {
	x, ok := g.columnOf(t, s)
	if !ok {
		return g.constant(t)
	}
	switch g.IntN(4) {
	case 0:
		more := same(g.one("", ", 0", ", 2"))
		if g.chance(40) {
			y, _ := g.columnOf(t, s)
			more = f(", %s, %s", g.one("1", "2", "7"), y)
		}
		return f("%s(%s%s) OVER (%s%s)", g.one("LAG", "LEAD"), x, more, g.partition(s), g.orderAll(keys))
	case 1:
		return f("NTH_VALUE(%s, %s) OVER (%s%s)", x, g.one("1", "2", "3"), g.partition(s), f("%s%s", g.orderAll(keys), g.frame(false)))
	}
	return f("%s(%s) OVER (%s%s%s)", g.one("FIRST_VALUE", "LAST_VALUE"), x, g.partition(s), g.orderAll(keys), g.frame(false))
}

func (g *Gen) partition(s *scope) text {
	var by []text
	for range g.IntN(3) {
		c, ok := g.columnOf(g.kind(), s)
		if !ok {
			continue
		}
		if g.chance(20) {
			c = f("CASE WHEN %s THEN 1 ELSE 0 END", g.condition(s, 0))
		}
		by = append(by, c)
	}
	if len(by) == 0 {
		return text{}
	}
	return f("PARTITION BY %s ", join(by, ", "))
}

func (g *Gen) direction() string {
	return g.one("", " ASC", " DESC") + g.one(" NULLS FIRST", " NULLS LAST")
}

// orderAll leaves no two rows equal that differ.
func (g *Gen) orderAll(keys *scope) text {
	var by []text
	for _, i := range g.Perm(len(keys.columns)) {
		by = append(by, f("%s%s", keys.columns[i].name, g.direction()))
	}
	return f("ORDER BY %s", join(by, ", "))
}

func (g *Gen) orderSome(s *scope) text {
	var by []text
	for range 1 + g.IntN(2) {
		by = append(by, f("%s%s", s.columns[g.IntN(len(s.columns))].name, g.direction()))
	}
	return f("ORDER BY %s", join(by, ", "))
}

// framed is what stands in the OVER of an aggregate.
func (g *Gen) framed(s, keys *scope) text {
	part := g.partition(s)
	switch g.IntN(5) {
	case 0:
		return part
	case 1:
		return f("%s%s", part, g.orderSome(s))
	case 2:
		t := kind(g.IntN(2))
		if c, ok := g.columnOf(t, s); ok {
			return f("%sORDER BY %s%s%s", part, c, g.direction(), g.rangeFrame(t))
		}
	case 3:
		return f("%s%s%s", part, g.orderSome(s), g.frame(true))
	}
	return f("%s%s%s", part, g.orderAll(keys), g.frame(false))
}

var bounds = []string{"UNBOUNDED PRECEDING", "%s PRECEDING", "CURRENT ROW", "%s FOLLOWING", "UNBOUNDED FOLLOWING"}

// frame is in ROWS, or in RANGE without offsets.
func (g *Gen) frame(ranged bool) text {
	if g.chance(25) {
		return text{}
	}
	unit := "ROWS"
	at := []int{0, 1, 2, 3, 4}
	if ranged {
		unit, at = "RANGE", []int{0, 2, 4}
	}
	return same(g.written(unit, at, "0", "1", "2", "3", "9"))
}

// rangeFrame has offsets of the type of its one key.
func (g *Gen) rangeFrame(t kind) text {
	if t == real {
		return same(g.written("RANGE", []int{0, 1, 2, 3, 4}, "0.0", "0.25", "0.5", "1.5"))
	}
	return same(g.written("RANGE", []int{0, 1, 2, 3, 4}, "0", "1", "2", "5"))
}

func (g *Gen) written(unit string, at []int, offsets ...string) string {
	i := g.IntN(len(at) - 1)
	j := i + g.IntN(len(at)-i)
	if i == 0 && j == 0 {
		j = 1
	}
	write := func(b int) string {
		if !strings.Contains(bounds[b], "%s") {
			return bounds[b]
		}
		return fmt.Sprintf(bounds[b], g.one(offsets...))
	}
	if at[i] <= 2 && at[j] == 2 && g.chance(50) {
		return fmt.Sprintf(" %s %s", unit, write(at[i]))
	}
	return fmt.Sprintf(" %s BETWEEN %s AND %s", unit, write(at[i]), write(at[j]))
}
