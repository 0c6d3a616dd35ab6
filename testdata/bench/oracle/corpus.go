package oracle

import "fmt"

// Corpus writes queries of the shapes in which collections of test questions ask:
// chains of signs, blanks in odd places, NOT in front of everything, NULL wherever a
// value may stand, aggregates of constants, tables crossed with themselves.
func (g *Gen) Corpus() *Query {
	switch g.IntN(12) {
	case 0:
		return g.constants()
	case 1, 2, 3:
		return g.plainCorpus()
	case 4, 5:
		return g.aggregates()
	case 6, 7:
		return g.groups()
	case 8:
		return g.members()
	case 9:
		return g.lists()
	case 10:
		return g.chained()
	}
	return g.comparing()
}

// signs is a chain of signs, mostly short.
func (g *Gen) signs() string {
	s := ""
	for g.chance(45) {
		s += g.one("+ ", "- ")
	}
	return s
}

// number is a whole number in many dresses. s may be nil: then there are no columns.
func (g *Gen) number(s *scope, depth int) text {
	sign := same(g.signs())
	if depth > 0 {
		n := func() text { return g.number(s, depth-1) }
		switch g.IntN(9) {
		case 0, 1, 2:
			return f("%s%s %s %s", sign, n(), g.one("+", "-", "*"), n())
		case 3:
			return f("%s( %s )", sign, n())
		case 4:
			return f("%sCOALESCE ( %s, %s, %s )", sign, n(), n(), n())
		case 5:
			return f("%sNULLIF ( %s, %s )", sign, n(), n())
		case 6:
			return f("%sCASE WHEN %s THEN %s ELSE %s END", sign, g.asked(s, depth-1), n(), n())
		case 7:
			return f("%sCASE %s WHEN %s THEN %s WHEN %s THEN %s END", sign, n(), n(), n(), n(), n())
		case 8:
			return f("%sABS ( %s )", sign, n())
		}
	}
	if s != nil && g.chance(70) {
		if c, ok := g.columnOf(integer, s); ok {
			return f("%s%s", sign, c)
		}
	}
	if g.chance(12) {
		return f("%s%s", sign, same(g.one("CAST ( NULL AS INTEGER )", "CAST( NULL AS INTEGER )")))
	}
	return f("%s%d", sign, g.IntN(100))
}

// null is a number, or NULL bare.
func (g *Gen) orNull(s *scope, depth int) text {
	if g.chance(15) {
		return same(g.one("NULL", "( NULL )"))
	}
	return g.number(s, depth)
}

// asked is a condition, NOT in front of it as often as not.
func (g *Gen) asked(s *scope, depth int) text {
	not := same(g.one("", "", "NOT ", "NOT NOT "))
	n := func() text { return g.number(s, min(depth, 1)) }
	if depth > 0 && g.chance(30) {
		c := func() text { return g.asked(s, depth-1) }
		return f("%s( %s %s %s )", not, c(), g.one("AND", "OR"), c())
	}
	switch g.IntN(6) {
	case 0:
		return f("%s%s IS %sNULL", not, g.orNull(s, min(depth, 1)), g.one("", "NOT "))
	case 1:
		return f("%s%s %sBETWEEN %s AND %s", not, n(), g.one("", "NOT "), g.orNull(s, 0), g.orNull(s, 0))
	case 2:
		list := []text{n()}
		for range g.IntN(4) {
			list = append(list, g.orNull(s, 0))
		}
		return f("%s%s %sIN ( %s )", not, n(), g.one("", "NOT "), join(list, ", "))
	case 3:
		return f("%s( %s ) IS %sNULL", not, n(), g.one("", "NOT "))
	}
	return f("%s%s %s %s", not, g.orNull(s, min(depth, 1)), g.one("=", "<>", "<", "<=", ">", ">="), n())
}

// rows is some tables with the columns of each, crossed or joined.
func (g *Gen) rows() (text, *scope) {
	s := &scope{}
	one := func() text {
		t := tables[g.IntN(len(tables))]
		alias := g.name("cor")
		for i, c := range t.columns {
			s.columns = append(s.columns, column{same(alias + "." + c), t.types[i]})
		}
		return f("%s%s%s", t.name, g.one(" AS ", " "), alias)
	}
	all := one()
	most := 4
	for g.chance(35) && len(s.columns) < 12 {
		switch g.IntN(most) {
		case 0:
			all = f("%s, %s", all, one())
			most = 1 // ON behind a comma knows only what stands behind it
		case 1:
			all = f("%s CROSS JOIN %s", all, one())
		default:
			how := g.one("", "INNER ", "LEFT ", "LEFT OUTER ")
			right := one()
			all = f("%s %sJOIN %s ON %s", all, how, right, g.asked(s, 1))
		}
	}
	return all, s
}

func (g *Gen) selected() string { return g.one("", "ALL ", "DISTINCT ") }

func (g *Gen) filter(s *scope) text {
	if g.chance(40) {
		return text{}
	}
	return f(" WHERE %s", g.asked(s, 2))
}

func (g *Gen) named(list []text) *Query {
	q := &Query{}
	for i := range list {
		n := g.name("c")
		list[i] = f("%s%s%s", list[i], g.one(" AS ", " "), n)
		q.Names = append(q.Names, n)
	}
	q.Text = join(list, ", ")
	return q
}

// constants asks without FROM, aggregates of one row among them.
func (g *Gen) constants() *Query {
	value := func() text { return g.number(nil, 3) }
	if g.chance(50) {
		value = func() text { return g.overRows(nil, 2) }
	}
	q := g.named([]text{value(), value()})
	q.Text = f("SELECT %s%s", g.selected(), q.Text)
	return q
}

func (g *Gen) plainCorpus() *Query {
	from, s := g.rows()
	q := g.named([]text{g.number(s, 3), g.number(s, 1)})
	q.Text = f("SELECT %s%s FROM %s%s", g.selected(), q.Text, from, g.filter(s))
	if g.chance(30) {
		q.Text = f("%s ORDER BY 1 NULLS LAST, 2%s NULLS FIRST", q.Text, g.one("", " DESC"))
		q.Ordered = true
	}
	return q
}

// overRows is a number made of aggregates.
func (g *Gen) overRows(s *scope, depth int) text {
	if depth > 0 && g.chance(50) {
		return f("%s%s %s %s", same(g.signs()), g.overRows(s, depth-1), g.one("+", "-", "*"), g.overRows(s, depth-1))
	}
	sign := same(g.signs())
	switch g.IntN(6) {
	case 0:
		return f("%sCOUNT ( * )", sign)
	case 1:
		return f("%sCOALESCE ( %s ( %s ), %d )", sign, g.one("MAX", "MIN", "SUM"), g.number(s, 1), g.IntN(50))
	case 2:
		return f("%s%d", sign, g.IntN(100))
	case 3:
		return f("%sCOUNT( %s%s )", sign, g.selected(), g.orNull(s, 1))
	}
	return f("%s%s( %s%s )", sign, g.one("MIN", "MAX", "SUM"), g.selected(), g.number(s, 1))
}

func (g *Gen) aggregates() *Query {
	from, s := g.rows()
	q := g.named([]text{g.overRows(s, 2), g.overRows(s, 1), f("AVG ( %s%s )", g.selected(), g.number(s, 1)), same("COUNT ( * )")})
	where := g.filter(s)
	if g.chance(10) {
		where = same(g.one(" WHERE NULL IS NOT NULL", " WHERE 1 = 0", " WHERE NOT NULL IS NULL"))
	}
	q.Text = f("SELECT %s%s FROM %s%s", g.selected(), q.Text, from, where)
	return q
}

func (g *Gen) groups() *Query {
	from, s := g.rows()
	key, _ := g.columnOf(integer, s)
	keys := &scope{columns: []column{{key, integer}}}
	by := []text{key}
	if g.chance(40) {
		other, _ := g.columnOf(integer, s)
		keys.columns, by = append(keys.columns, column{other, integer}), append(by, other)
	}
	items := []text{g.number(keys, 2)}
	if g.chance(70) {
		items = append(items, g.overRows(s, 1))
	}
	q := g.named(items)
	q.Text = f("SELECT %s%s FROM %s%s GROUP BY %s", g.selected(), q.Text, from, g.filter(s), join(by, ", "))
	switch g.IntN(4) {
	case 0:
		q.Text = f("%s HAVING %s", q.Text, g.asked(keys, 2))
	case 1:
		q.Text = f("%s HAVING %sCOUNT ( * ) %s %d", q.Text, g.one("", "NOT "), g.one("<", ">=", "="), g.IntN(3))
	}
	return q
}

// members asks whether queries hold values: IN, EXISTS, comparisons with a value.
func (g *Gen) members() *Query {
	from, s := g.rows()
	inner := tables[g.IntN(len(tables))]
	alias := g.name("x")
	is := &scope{outer: s}
	for i, c := range inner.columns {
		is.columns = append(is.columns, column{same(alias + "." + c), inner.types[i]})
	}
	mine, _ := g.columnOf(integer, &scope{columns: is.columns})
	not := g.one("", "NOT ")
	cond := f("%sEXISTS ( SELECT 1 FROM %s AS %s WHERE %s )", not, inner.name, alias, g.asked(is, 2))
	switch g.IntN(4) {
	case 0:
		cond = f("%s %sIN ( SELECT %s FROM %s AS %s WHERE %s )", g.number(s, 1), not, mine, inner.name, alias, g.asked(is, 1))
	case 1:
		cond = f("%s %s ( SELECT %s( %s ) FROM %s AS %s WHERE %s )", g.number(s, 1), g.one("<", ">", "="), g.one("MIN", "MAX", "COUNT", "AVG"), mine, inner.name, alias, g.asked(is, 1))
	}
	q := g.named([]text{g.number(s, 1), f("( SELECT COUNT ( * ) FROM %s AS %s WHERE %s < %s )", inner.name, alias, mine, g.number(s, 0))})
	q.Text = f("SELECT %s FROM %s WHERE %s%s%s", q.Text, from, cond, same(g.one(" AND ", " OR ")), g.asked(s, 1))
	return q
}

// lists has long lists, VALUES and deep brackets.
func (g *Gen) lists() *Query {
	from, s := g.rows()
	var list []text
	for range 20 + g.IntN(300) {
		list = append(list, same(fmt.Sprint(g.IntN(2000)-1000)))
	}
	if g.chance(20) {
		list = append(list, same("NULL"))
	}
	deep := g.number(s, 1)
	for range g.IntN(40) {
		deep = f("( %s )", deep)
	}
	cond := f("%s %sIN ( %s )", deep, g.one("", "NOT "), join(list, ", "))
	var rows []text
	for range 1 + g.IntN(4) {
		rows = append(rows, f("( %s, %s )", g.number(nil, 1), g.number(nil, 0)))
	}
	v := g.name("v")
	q := g.named([]text{g.number(s, 1), same(v + ".n")})
	values := text{f("( VALUES %s ) AS %s ( m, n )", join(rows, ", "), v).ours,
		f("( SELECT column1 AS m, column2 AS n FROM ( VALUES %s ) ) AS %s", join(rows, ", "), v).theirs}
	q.Text = f("SELECT %s FROM %s CROSS JOIN %s WHERE %s", q.Text, from, values, cond)
	return q
}

// chained joins many tables by equalities that stand in WHERE.
func (g *Gen) chained() *Query {
	n := 3 + g.IntN(5)
	var from, where []text
	var names []text
	order := g.Perm(n)
	for i := range n {
		from = append(from, f("%s AS j%d", tables[i%len(tables)].name, i))
		names = append(names, f("j%d.%s", i, map[int]string{0: "a", 1: "e", 2: "k"}[i%len(tables)]))
	}
	shuffled := make([]text, n)
	for i, at := range order {
		shuffled[i] = from[at]
	}
	for i := 1; i < n; i++ {
		where = append(where, f("%s = %s", names[i-1], names[i]))
	}
	where = append(where, f("%s = %d", names[g.IntN(n)], g.IntN(4)))
	g.Shuffle(len(where), func(i, j int) { where[i], where[j] = where[j], where[i] })
	return &Query{Text: f("SELECT %s FROM %s WHERE %s", join(names, ", "), join(shuffled, ", "), join(where, " AND ")), Names: []string{}}
}

// comparing asks with set operations on three tables.
func (g *Gen) comparing() *Query {
	side := func() text {
		from, s := g.rows()
		return f("SELECT %s%s FROM %s%s", g.selected(), g.number(s, 1), from, g.filter(s))
	}
	op := func() string { return g.one("UNION", "UNION ALL", "EXCEPT") }
	return &Query{Text: f("%s %s %s %s %s", side(), op(), side(), op(), side())}
}
