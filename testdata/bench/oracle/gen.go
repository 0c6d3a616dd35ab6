package oracle

import (
	"fmt"
	"math/rand/v2"
	"strings"
)

// text is a piece of a query in both languages.
type text struct{ ours, theirs string }

func same(s string) text { return text{s, s} }

// f puts pieces together.
func f(format string, args ...any) text {
	ours, theirs := make([]any, len(args)), make([]any, len(args))
	for i, a := range args {
		ours[i], theirs[i] = a, a
		if t, ok := a.(text); ok {
			ours[i], theirs[i] = t.ours, t.theirs
		}
	}
	return text{fmt.Sprintf(format, ours...), fmt.Sprintf(format, theirs...)}
}

func join(list []text, by string) text {
	var ours, theirs []string
	for _, t := range list {
		ours, theirs = append(ours, t.ours), append(theirs, t.theirs)
	}
	return text{strings.Join(ours, by), strings.Join(theirs, by)}
}

type kind int

const (
	integer kind = iota
	real
	word
)

// column is what an expression may name.
type column struct {
	name text
	t    kind
}

// scope is the columns at hand, and those outside.
type scope struct {
	columns []column
	outer   *scope
}

// Gen writes random queries.
type Gen struct {
	*rand.Rand
	names int
}

// NewGen starts from a seed.
func NewGen(seed, n uint64) *Gen { return &Gen{Rand: rand.New(rand.NewPCG(seed, n))} }

func (g *Gen) name(prefix string) string {
	g.names++
	return fmt.Sprintf("%s%d", prefix, g.names)
}

func (g *Gen) one(list ...string) string { return list[g.IntN(len(list))] }

func (g *Gen) chance(percent int) bool { return g.IntN(100) < percent }

func (g *Gen) kind() kind { return kind(g.IntN(3)) }

func (g *Gen) constant(t kind) text {
	switch t {
	case integer:
		return same(g.one("0", "1", "2", "3", "-1", "5"))
	case real:
		return same(g.one("0.5", "1.0", "2.25", "-0.75", "3.0"))
	}
	return same(g.one("'a'", "'ab'", "'B'", "''", "'zz'"))
}

// value is an expression of a type. Constants are rare.
func (g *Gen) value(t kind, s *scope, depth int) text {
	if depth > 0 && g.chance(45) {
		return g.computed(t, s, depth-1)
	}
	if c, ok := g.columnOf(t, s); ok && g.chance(85) {
		return c
	}
	return g.constant(t)
}

func (g *Gen) columnOf(t kind, s *scope) (text, bool) {
	var list []text
	for at, level := s, 0; at != nil; at, level = at.outer, level+1 {
		for _, c := range at.columns {
			if c.t == t && (level == 0 || g.chance(60)) {
				list = append(list, c.name)
			}
		}
	}
	if len(list) == 0 {
		return text{}, false
	}
	return list[g.IntN(len(list))], true
}

func (g *Gen) computed(t kind, s *scope, depth int) text {
	v := func(t kind) text { return g.value(t, s, depth) }
	switch g.IntN(9) {
	case 0:
		return f("CASE WHEN %s THEN %s ELSE %s END", g.condition(s, depth), v(t), v(t))
	case 1:
		u := g.kind()
		return f("CASE %s WHEN %s THEN %s WHEN %s THEN %s END", v(u), g.constant(u), v(t), v(u), v(t))
	case 2:
		return f("COALESCE(%s, %s)", v(t), v(t))
	case 3:
		return f("NULLIF(%s, %s)", v(t), v(t))
	case 4:
		if g.chance(60) {
			return g.scalarQuery(t, s, depth)
		}
	}
	switch t {
	case integer:
		switch g.IntN(5) {
		case 0:
			return f("(%s %% NULLIF(%s, 0))", v(t), v(t))
		case 1:
			return f("- %s", g.columnOr(t, s))
		case 2:
			return text{"CHAR_LENGTH", "LENGTH"}.call(v(word))
		case 3:
			return f("ABS(%s)", v(t))
		}
		return f("(%s %s %s)", v(t), g.one("+", "-", "*"), v(t))
	case real:
		switch g.IntN(4) {
		case 0:
			num, den := v(integer), v(integer)
			return text{fmt.Sprintf("(%s / NULLIF(%s, 0))", num.ours, den.ours), fmt.Sprintf("(CAST(%s AS REAL) / NULLIF(%s, 0))", num.theirs, den.theirs)}
		case 1:
			return f("CAST(%s AS REAL)", v(integer))
		case 2:
			return f("+ - + %s", g.columnOr(t, s))
		}
		return f("(%s %s %s)", v(t), g.one("+", "-"), v(t))
	}
	switch g.IntN(4) {
	case 0:
		return f("UPPER(%s)", v(t))
	case 1:
		return f("CAST(%s AS TEXT)", v(integer))
	case 2:
		x := v(t)
		return text{fmt.Sprintf("SUBSTRING(%s FROM 1 FOR 2)", x.ours), fmt.Sprintf("SUBSTR(%s, 1, 2)", x.theirs)}
	}
	return f("(%s || %s)", v(t), v(t))
}

func (fn text) call(x text) text { return f("%s(%s)", fn, x) }

func (g *Gen) columnOr(t kind, s *scope) text {
	if c, ok := g.columnOf(t, s); ok {
		return c
	}
	return f("(%s)", g.constant(t))
}

// condition is TRUE, FALSE or NULL.
func (g *Gen) condition(s *scope, depth int) text {
	if depth > 0 && g.chance(50) {
		c := func() text { return g.condition(s, depth-1) }
		switch g.IntN(7) {
		case 0, 1:
			return f("(%s AND %s)", c(), c())
		case 2:
			return f("(%s OR %s)", c(), c())
		case 3:
			return f("NOT (%s)", c())
		case 4:
			x, what, not := c(), g.one("TRUE", "FALSE", "UNKNOWN"), g.one("", "NOT ")
			there := what
			if what == "UNKNOWN" {
				there = "NULL"
			}
			return text{fmt.Sprintf("(%s) IS %s%s", x.ours, not, what), fmt.Sprintf("(%s) IS %s%s", x.theirs, not, there)}
		default:
			return g.queryCondition(s, depth-1)
		}
	}
	t := g.kind()
	v := func() text { return g.value(t, s, depth) }
	switch g.IntN(9) {
	case 0:
		return f("%s IS %sNULL", v(), g.one("", "NOT "))
	case 1:
		return f("%s %sBETWEEN %s AND %s", v(), g.one("", "NOT "), v(), v())
	case 2:
		return f("%s %sIN (%s, %s, %s)", v(), g.one("", "NOT "), v(), g.constant(t), g.nullOr(g.constant(t)))
	case 3:
		if t == word {
			return f("%s %sLIKE %s", v(), g.one("", "NOT "), same(g.one("'%'", "'a%'", "'_'", "'%b'", "'A_'")))
		}
	case 4:
		return f("%s IS %sDISTINCT FROM %s", v(), g.one("", "NOT "), v())
	}
	return f("%s %s %s", v(), g.one("=", "=", "<>", "<", "<=", ">", ">="), v())
}

func (g *Gen) nullOr(x text) text {
	if g.chance(20) {
		return same("NULL")
	}
	return x
}
